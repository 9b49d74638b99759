# SPDX-License-Identifier: BSD-3-Clause
"""One optimization, from rehearsals of the law to the verified solution."""

from __future__ import annotations

import math
import time
from collections.abc import Sequence
from dataclasses import replace
from itertools import zip_longest

import numpy as np

from rotorpump.checking.report import all_passed, check_motion
from rotorpump.laws.practical import rehearse
from rotorpump.laws.trials import Trial
from rotorpump.measures import COSTS
from rotorpump.solution.objective import Objective
from rotorpump.solution.progress import Watcher
from rotorpump.solution.solution import MeshSummary, Solution, Statistics
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solution.usage import drive_uses
from rotorpump.solving.assignment import gain
from rotorpump.solving.multipliers import limit_prices
from rotorpump.solving.news import Reporter
from rotorpump.solving.reach import Reach, plain_turn, reach_goal, reach_rotation
from rotorpump.solving.refinement import refine
from rotorpump.solving.routes import Candidate, Wanted
from rotorpump.solving.search import Search, search
from rotorpump.solving.seeds import (
    STRONGER,
    WEAKER,
    Seed,
    rehearse_beyond_ratings,
    rehearse_with_other_drives,
    seed_from,
    seeds_from,
)
from rotorpump.studies.limit_uses import limit_uses
from rotorpump.tasks import Pump, Rotate, SpinUp

FINALISTS = 3
"""Local optima that are refined at most, one after the other, until one is verified."""

TIGHTER = 10.0
"""A finalist that fails its checks is refined once more, to an accuracy so many times finer."""

NOT_WORSE = 5e-3
"""Share by which an optimum may lie below the practical law before it is refused: so far the law's
own value moves when its sampling is refined."""

INTERRUPTED = "interrupted by the user"


class Work:
    """One optimization.

    A rotation in the negative direction is solved as the positive one of the mirrored rig.

    Parameters
    ----------
    asked : Wanted
        The rig, the task and the objective.
    accuracy : float
        Largest relative error of the motion over an interval.
    watcher : callable or None
        Takes news of the progress.
    """

    def __init__(self, asked: Wanted, accuracy: float, watcher: Watcher | None) -> None:
        self.asked, self.accuracy = asked, accuracy
        rig, task = asked.rig, asked.task
        self.mirrored = False
        if isinstance(task, Rotate) and task.direction < 0:
            self.mirrored = True
            rig, task = rig.mirrored(), replace(task, direction=1)
        self.wanted = Wanted(rig, task, asked.measure)
        self.reporter = Reporter(rig, task, asked.measure, watcher)
        self.began = time.perf_counter()

    def run(self, guess: Trajectory | None) -> Solution:
        """Rehearse, search, refine, check; ``guess`` is a motion to start from."""
        self.reporter.tell("practical law")
        rig, task, wanted = self.wanted.rig, self.wanted.task, self.wanted.measure
        trials = rehearse(rig, task, objective=wanted.name)
        found = search(self.wanted, self._seeds(trials, guess), self.reporter)
        try:
            return self._answer(found, trials)
        except KeyboardInterrupt:
            found.interrupted = True
            return self._unsolved(found, Status.INTERRUPTED, INTERRUPTED, None)

    def _seeds(self, trials: Sequence[Trial], guess: Trajectory | None) -> list[Seed]:
        """Collect starting motions, the most promising first."""
        rig, task = self.wanted.rig, self.wanted.task
        relevant, eager = trials, task
        if isinstance(task, SpinUp) and task.deadline is not None:
            # a motion that comes too late may still be hurried
            eager = replace(task, deadline=None)
            relevant = rehearse(rig, eager)
        seeds = seeds_from(rig, task, relevant)
        if not isinstance(task, Rotate):
            both = zip_longest(seeds_from(rig, task, rehearse_beyond_ratings(rig, eager)), seeds)
            seeds = [seed for pair in both for seed in pair if seed is not None]
        elif task.mean_speed is not None:
            # the law turns at a speed of its own, and its turn in slow motion may lead nowhere
            seeds.append(plain_turn(rig, 2.0 * math.pi / task.mean_speed))
        if isinstance(eager, SpinUp):
            # Other drives show ways with fewer swings, which may be open to this one as well, or
            # with more, which may cost less.
            factors = (*WEAKER, *STRONGER) if self.wanted.measure in COSTS else STRONGER
            words = {seed.word for seed in seeds}
            others = seeds_from(rig, task, rehearse_with_other_drives(rig, eager, factors))
            seeds += [seed for seed in others if seed.word not in words]
        if guess is not None:
            seeds.insert(0, seed_from(task, guess.mirrored() if self.mirrored else guess))
        return seeds

    def _answer(self, found: Search, trials: Sequence[Trial]) -> Solution:
        """Turn what the search found into a solution, or into the reason why there is none."""
        if (
            not found.candidates
            and not found.interrupted
            and not isinstance(self.wanted.task, Pump)
        ):
            reach = self._reach(trials)
            if reach.seed is None:
                return self._unsolved(found, Status.INFEASIBLE, reach.message, reach.candidate)
            found = search(self.wanted, [reach.seed], self.reporter)
        if found.interrupted:
            return self._unsolved(found, Status.INTERRUPTED, INTERRUPTED, None)
        if not found.candidates:
            return self._unsolved(found, *_failure(found, trials), None)
        return self._conclude(found, trials)

    def _reach(self, trials: Sequence[Trial]) -> Reach:
        monitor = self.reporter.monitor("how far the rig gets")
        task = self.wanted.task
        if isinstance(task, Rotate):
            return reach_rotation(self.wanted, task, monitor)
        assert isinstance(task, SpinUp)
        return reach_goal(self.wanted, task, trials, monitor)

    def _conclude(self, found: Search, trials: Sequence[Trial]) -> Solution:
        """Refine the best local optima one after the other, until one passes its checks."""
        first: Solution | None = None
        for candidate in found.candidates[:FINALISTS]:
            refined = candidate
            for accuracy in (self.accuracy, self.accuracy / TIGHTER):
                monitor = self.reporter.monitor("refinement", candidate.value)
                # limits may be exceeded between the points of intervals that are accurate
                again = accuracy < self.accuracy
                refined, rounds = refine(self.wanted, refined, accuracy, monitor, everywhere=again)
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
        measure, law = self.asked.measure, trials[0]
        if law.reached and law.within_limits:
            shortfall = -gain(measure, candidate.value, law.value)
            if shortfall > NOT_WORSE:
                status = Status.FAILED
                message = (
                    f"the best local optimum found, {candidate.value:.6g} {measure.unit}, is"
                    f" worse than the practical law, {law.value:.6g} {measure.unit}"
                )
        objective = Objective(measure.name, candidate.value, measure.unit)
        rig, task = self.asked.rig, self.asked.task
        trajectory = self._shown(candidate.trajectory)
        checks = check_motion(rig, task, trajectory, objective, self.accuracy)
        return Solution(
            rig=rig,
            task=task,
            status=status,
            message=message,
            objective=objective,
            trajectory=trajectory,
            limits=limit_uses(rig, trajectory, limit_prices(self.wanted, candidate)),
            drives=drive_uses(rig, trajectory),
            mesh=_mesh_summary(candidate),
            statistics=self._statistics(found, candidate, rounds, extra),
            checks=checks,
            verified=status.success and all_passed(checks),
        )

    def _shown(self, trajectory: Trajectory) -> Trajectory:
        return trajectory.mirrored() if self.mirrored else trajectory

    def _praise(self, found: Search, candidate: Candidate, trials: Sequence[Trial]) -> str:
        words = [f"local optimum, found by {found.agreeing} of {found.runs} runs"]
        law = trials[0]
        if law.reached and law.within_limits:
            share = gain(self.asked.measure, candidate.value, law.value)
            words.append(f"{100.0 * share:+.2g} % against the practical law")
        return "; ".join(words)

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
            rig=self.asked.rig,
            task=self.asked.task,
            status=status,
            message=message,
            objective=Objective(self.asked.measure.name, value, self.asked.measure.unit),
            trajectory=self._shown(shown.trajectory) if shown else None,
            mesh=_mesh_summary(shown) if shown else None,
            statistics=self._statistics(found, shown, 0, 0),
        )


def _failure(found: Search, trials: Sequence[Trial]) -> tuple[Status, str]:
    """Status and message when no run has solved."""
    if not any(np.ptp(trial.run.states[0]) for trial in trials):
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
