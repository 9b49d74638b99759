# SPDX-License-Identifier: BSD-3-Clause
"""Find the best motion under the drive's limits, and have it checked."""

from __future__ import annotations

import math
import time
import warnings
from collections.abc import Sequence

from rotorpump.checking.margins import active_shares
from rotorpump.checking.report import all_passed, check_motion
from rotorpump.errors import InputError, SolveError, SolveWarning
from rotorpump.laws.practical import rehearse
from rotorpump.laws.trials import Trial
from rotorpump.quantities import choice, instance, positive
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.solution.progress import Watcher
from rotorpump.solution.solution import LimitUse, MeshSummary, Solution, Statistics
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.assignment import gain
from rotorpump.solving.multipliers import limit_prices
from rotorpump.solving.news import Reporter
from rotorpump.solving.reach import Reach, reach_goal, reach_rotation
from rotorpump.solving.refinement import refine
from rotorpump.solving.routes import Candidate
from rotorpump.solving.search import Search, search
from rotorpump.solving.seeds import rehearse_stronger, seed_from, seeds_from
from rotorpump.tasks import Pump, Rotate, SpinUp, Task, measure

FINALISTS = 3
"""Local optima that are refined at most, one after the other, until one is verified."""

TIGHTER = 10.0
"""A finalist that fails its checks is refined once more, to an accuracy so many times finer."""

NOT_WORSE = 2e-3
"""Share by which an optimum may lie below the practical law before it is refused."""

INTERRUPTED = "interrupted by the user"

_UNITS = {"speed": "m/s", "force": "N", "outer stop": "m", "inner stop": "m"}


def optimize(
    rig: Rig,
    task: Task,
    *,
    objective: str | None = None,
    accuracy: float = 1e-4,
    guess: Trajectory | LawRun | Solution | None = None,
    on_failure: str = "raise",
    progress: Watcher | None = None,
) -> Solution:
    """Find the best motion under the limits of the drive, and check it independently.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.
    accuracy : float, optional
        Largest relative error of the motion over an interval of the mesh.
    guess : Trajectory, LawRun or Solution, optional
        A motion to start from, before those of the practical law.
    on_failure : {"raise", "return"}, optional
        What to do with a result that is no solution.
    progress : callable, optional
        Takes a `Progress` now and then.

    Returns
    -------
    Solution
        The best local optimum that was found; ``verified`` says whether it passed all checks.

    Raises
    ------
    InputError
        If an argument is out of range, or the task cannot begin on this rig.
    SolveError
        If there is no solution; it carries the Solution as it is.
    """
    instance("rig", rig, Rig)
    if not isinstance(task, (Pump, SpinUp, Rotate)):
        raise InputError("task", "must be a Pump, a SpinUp or a Rotate", task)
    wanted = measure(task, objective)
    if positive("accuracy", accuracy) >= 0.1:
        raise InputError("accuracy", "must be less than 0.1", accuracy)
    choice("on_failure", on_failure, ("raise", "return"))
    if isinstance(task, Rotate) and rig.friction == AxleFriction(viscous=0.0):
        raise InputError(
            "friction", "must not be zero for a Rotate: any speed keeps itself up", rig.friction
        )
    work = _Work(rig, task, accuracy, Reporter(rig, task, progress))
    solution = work.run(guess)
    if not solution.success and on_failure == "raise":
        raise SolveError(solution.message, solution)
    if solution.status is Status.ACCEPTABLE:
        warnings.warn(f"{wanted.name}: {solution.status.value}", SolveWarning, stacklevel=2)
    return solution


class _Work:
    """One optimization, from rehearsals of the law to the verified solution."""

    def __init__(self, rig: Rig, task: Task, accuracy: float, reporter: Reporter) -> None:
        self.rig, self.task, self.accuracy, self.reporter = rig, task, accuracy, reporter
        self.began = time.perf_counter()
        self.measure = measure(task)

    def run(self, guess: Trajectory | LawRun | Solution | None) -> Solution:
        """Rehearse, search, refine, check."""
        self.reporter.tell("practical law")
        trials = rehearse(self.rig, self.task)
        seeds = seeds_from(self.task, trials)
        if isinstance(self.task, SpinUp):
            # A stronger drive shows ways with fewer swings, which may be open to this one as well.
            words = {seed.word for seed in seeds}
            stronger = seeds_from(self.task, rehearse_stronger(self.rig, self.task))
            seeds += [seed for seed in stronger if seed.word not in words]
        if guess is not None:
            seeds.insert(0, seed_from(self.task, guess))
        found = search(self.rig, self.task, seeds, self.reporter)
        try:
            return self._answer(found, trials)
        except KeyboardInterrupt:
            found.interrupted = True
            return self._unsolved(found, Status.INTERRUPTED, INTERRUPTED, None)

    def _answer(self, found: Search, trials: Sequence[Trial]) -> Solution:
        """Turn what the search found into a solution, or into the reason why there is none."""
        if not found.candidates and not found.interrupted and not isinstance(self.task, Pump):
            reach = self._reach(trials)
            if reach.seed is None:
                return self._unsolved(found, Status.INFEASIBLE, reach.message, reach.candidate)
            found = search(self.rig, self.task, [reach.seed], self.reporter)
        if found.interrupted:
            return self._unsolved(found, Status.INTERRUPTED, INTERRUPTED, None)
        if not found.candidates:
            return self._unsolved(found, *_failure(found, trials), None)
        return self._conclude(found, trials)

    def _reach(self, trials: Sequence[Trial]) -> Reach:
        monitor = self.reporter.monitor("how far the rig gets")
        if isinstance(self.task, Rotate):
            return reach_rotation(self.rig, self.task, monitor)
        assert isinstance(self.task, SpinUp)
        return reach_goal(self.rig, self.task, trials, monitor)

    def _conclude(self, found: Search, trials: Sequence[Trial]) -> Solution:
        """Refine the best local optima one after the other, until one passes its checks."""
        first: Solution | None = None
        for candidate in found.candidates[:FINALISTS]:
            refined = candidate
            for accuracy in (self.accuracy, self.accuracy / TIGHTER):
                monitor = self.reporter.monitor("refinement", candidate.value)
                refined, rounds = refine(self.task, refined, accuracy, monitor)
                if refined.outcome.status is Status.INTERRUPTED:
                    raise KeyboardInterrupt
                extra = refined.iterations - candidate.iterations
                solution = self._solution(found, refined, rounds, extra, trials)
                if solution.verified:
                    return solution
                first = first or solution
        assert first is not None
        return first

    def _solution(
        self,
        found: Search,
        candidate: Candidate,
        rounds: int,
        extra: int,
        trials: Sequence[Trial],
    ) -> Solution:
        status, message = candidate.outcome.status, self._praise(found, candidate, trials)
        law = trials[0]
        if law.reached and not law.slams:
            shortfall = -gain(self.measure, candidate.value, law.value)
            if shortfall > NOT_WORSE:
                status = Status.FAILED
                message = (
                    f"the best local optimum found, {candidate.value:.6g} {self.measure.unit}, is"
                    f" worse than the practical law, {law.value:.6g} {self.measure.unit}"
                )
        objective = Objective(self.measure.name, candidate.value, self.measure.unit)
        checks = check_motion(self.rig, self.task, candidate.trajectory, objective, self.accuracy)
        return Solution(
            rig=self.rig,
            task=self.task,
            status=status,
            message=message,
            objective=objective,
            trajectory=candidate.trajectory,
            limits=self._limits(candidate),
            mesh=_mesh_summary(candidate),
            statistics=self._statistics(found, candidate, rounds, extra),
            checks=checks,
            verified=status.success and all_passed(checks),
        )

    def _praise(self, found: Search, candidate: Candidate, trials: Sequence[Trial]) -> str:
        words = [f"local optimum, found by {found.agreeing} of {found.runs} runs"]
        law = trials[0]
        if law.reached and not law.slams:
            share = gain(self.measure, candidate.value, law.value)
            words.append(f"{100.0 * share:+.2g} % against the practical law")
        return "; ".join(words)

    def _limits(self, candidate: Candidate) -> tuple[LimitUse, ...]:
        shares = active_shares(self.rig, candidate.trajectory)
        prices = limit_prices(self.task, candidate)
        slide = self.rig.radial
        values = {
            "speed": slide.speed,
            "force": slide.force,
            "outer stop": slide.stroke[1],
            "inner stop": slide.stroke[0],
        }
        names = {"outer stop": "stroke outer end", "inner stop": "stroke inner end"}
        return tuple(
            LimitUse(
                name, value, _UNITS[name], shares[names.get(name, name)], prices.get(name, math.nan)
            )
            for name, value in values.items()
            if math.isfinite(value)
        )

    def _statistics(
        self, found: Search, candidate: Candidate | None, rounds: int, extra: int
    ) -> Statistics:
        return Statistics(
            iterations=found.iterations + extra,
            seconds=time.perf_counter() - self.began,
            intervals=candidate.program.mesh.intervals if candidate else 0,
            refinements=rounds,
            starts=found.runs,
            spread=found.spread,
        )

    def _unsolved(
        self, found: Search, status: Status, message: str, candidate: Candidate | None
    ) -> Solution:
        shown = candidate or found.best_effort()
        value = shown.value if shown is not None and status is Status.INTERRUPTED else math.nan
        return Solution(
            rig=self.rig,
            task=self.task,
            status=status,
            message=message,
            objective=Objective(self.measure.name, value, self.measure.unit),
            trajectory=shown.trajectory if shown else None,
            mesh=_mesh_summary(shown) if shown else None,
            statistics=self._statistics(found, shown, 0, 0),
        )


def _failure(found: Search, trials: Sequence[Trial]) -> tuple[Status, str]:
    """Status and message when no run has solved."""
    if not any(trial.run.states[1].any() for trial in trials):
        return Status.INFEASIBLE, "the friction of the axle holds the wheel: it never moves"
    outcomes = [candidate.outcome for candidate in found.unsolved]
    if outcomes and all(outcome.status is Status.INFEASIBLE for outcome in outcomes):
        return (
            Status.INFEASIBLE,
            f"no motion within the limits was found from any of {found.runs} starting motions",
        )
    words = ", ".join(sorted({outcome.word for outcome in outcomes})) or "no starting motion"
    if any(outcome.status is Status.LIMIT_REACHED for outcome in outcomes):
        return Status.LIMIT_REACHED, f"none of {found.runs} runs solved within its limits ({words})"
    return Status.FAILED, f"none of {found.runs} runs solved ({words})"


def _mesh_summary(candidate: Candidate) -> MeshSummary:
    program = candidate.program
    return MeshSummary(program.mesh.counts, program.problem.form.degree)
