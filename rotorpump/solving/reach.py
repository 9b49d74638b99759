# SPDX-License-Identifier: BSD-3-Clause
"""How far a rig can get when no starting motion reaches the goal.

The user's goal, and nothing else, is turned into the objective: either the best motion reaches
it after all, and serves as a starting motion, or its figure says what is missing.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.trials import Trial, energy_of, goal_measure
from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque
from rotorpump.rig.rig import Rig
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.assignment import assign, start_of
from rotorpump.solving.ipopt import Monitor
from rotorpump.solving.routes import Candidate, solve_posed
from rotorpump.solving.seeds import Seed, guess_of, seed_of
from rotorpump.tasks import Pump, Rotate, SpinUp
from rotorpump.transcription.arcs import cut_into_arcs
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.problem import Term

DENSE = 1001
"""Samples of a turn whose losses are added up."""

TURN_DURATIONS = (2.0, 3.0, 5.0, 8.0)
"""Durations of the turns in which a rotation is looked for, in those of a plain fast turn."""

MOST_ARCS = 60
"""Arcs of the longest spin-up that is looked at."""


@dataclass(frozen=True, eq=False)
class Reach:
    """The best that was found.

    Parameters
    ----------
    seed : Seed or None
        A motion that reaches the goal, if there is one.
    candidate : Candidate or None
        The best motion, if one was found.
    message : str
        What is missing, in figures.
    """

    seed: Seed | None
    candidate: Candidate | None
    message: str


def reach_goal(rig: Rig, task: SpinUp, trials: Sequence[Trial], monitor: Monitor | None) -> Reach:
    """Drive the goal's quantity as high as it gets in the time in which the law saturates."""
    measure, goal = goal_measure(rig, task)
    best = max(trials, key=lambda trial: float(measure(trial.run.states).max()))
    highest = float(measure(best.run.states).max())
    guess = _climb(rig, best)
    name = "energy" if task.energy is not None else "speed" if task.speed is not None else "angle"
    unit = {"energy": "J", "speed": "rad/s", "angle": "rad"}[name]
    candidate = None
    if guess is not None:
        chain, ends = cut_into_arcs(guess)
        seed = Seed(guess, chain, ends)
        sign = -1.0 if name != "angle" else -float(chain[-1].direction)
        posed = assign(rig, Pump(duration=1.0, start_angle=task.start_angle), seed)
        posed = replace(posed, terms=(Term(name, sign),), start=start_of(rig, task), horizon=None)
        candidate = solve_posed(task, posed, seed, monitor)
        if candidate.outcome.status is Status.INTERRUPTED:
            raise KeyboardInterrupt
        if candidate.solved:
            reached = _final(name, candidate.trajectory)
            if reached >= goal:
                found = seed_of(task, Guess.from_trajectory(candidate.trajectory))
                return Reach(found, candidate, "")
            highest = max(highest, reached)
    return Reach(
        None,
        candidate,
        f"the goal is out of reach: {name} {goal:.6g} {unit} is asked for,"
        f" the highest reached is {highest:.6g} {unit}",
    )


def _climb(rig: Rig, trial: Trial) -> Guess | None:
    """Return a saturated run of the law up to its highest energy, if it moves at all."""
    energy = energy_of(rig, trial.run.states)
    until = int(np.argmax(energy >= 0.999 * energy.max()))
    if until < 2 or not np.any(trial.run.states[1]):
        return None
    guess = guess_of(trial.run.cut(until))
    _, ends = cut_into_arcs(guess)
    return guess.cut(0.0, ends[MOST_ARCS - 1]) if len(ends) > MOST_ARCS else guess


def _final(name: str, trajectory: Trajectory) -> float:
    """Value of a goal's quantity at the end of a motion."""
    return abs(float(getattr(trajectory, name)[-1]))


def reach_rotation(rig: Rig, task: Rotate, monitor: Monitor | None) -> Reach:
    """Look for a turn that gains momentum; if even the best one loses, there is no rotation.

    Turns of several durations are looked at: the slower a turn, the less it loses to drag.
    """
    best: Candidate | None = None
    for factor in TURN_DURATIONS:
        seed = _plain_turn(rig, factor)
        gains = (Term("momentum", -1.0), Term("momentum", 1.0, at_start=True))
        duration = float(np.interp(2.0 * math.pi, seed.guess.angle, seed.guess.time))
        posed = replace(
            assign(rig, task, seed), terms=gains, closed_momentum=False, horizon=duration
        )
        candidate = solve_posed(task, posed, seed, monitor)
        if candidate.outcome.status is Status.INTERRUPTED:
            raise KeyboardInterrupt
        if candidate.solved and (best is None or _gained(candidate) > _gained(best)):
            best = candidate
        if best is not None and _gained(best) >= 0.0:
            return Reach(seed_of(task, Guess.from_trajectory(best.trajectory)), best, "")
    reason = "the rotation cannot be sustained"
    if best is None:
        ideal = run_ideal(rig, task).message
        return Reach(None, None, f"{reason}, not even by the instantaneous law: {ideal}")
    work, loss = turn_balance(rig, best.trajectory)
    return Reach(
        None,
        best,
        f"{reason}: in the best turn found, of {best.trajectory.duration:.3g} s, friction takes"
        f" {loss:.4g} J and the drive adds {work:.4g} J",
    )


def _gained(candidate: Candidate) -> float:
    momentum = candidate.trajectory.momentum
    return float(momentum[-1] ** 2 - momentum[0] ** 2)


def _plain_turn(rig: Rig, factor: float) -> Seed:
    """Make up a turn that begins fast enough to lose to friction what it must.

    It is made slower by ``factor`` than a turn at twice the speed that just passes the top.
    """
    constants = Constants.of(rig)
    inner, outer = rig.radial.stroke
    middle, sway = (inner + outer) / 2.0, 0.4 * rig.radial.length
    inertia = rig.inertia(middle)
    least = math.sqrt(4.0 * constants.mass * constants.gravity * outer / inertia)
    angle = np.linspace(0.0, 2.0 * math.pi, 400)
    slope = -friction_torque(constants, least, 1.0) / least
    speed = (2.0 * least + slope * (2.0 * math.pi - angle) / inertia) / factor
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.integrate import cumulative_trapezoid  # noqa: PLC0415

    time = cumulative_trapezoid(1.0 / speed, angle, initial=0.0)
    guess = Guess(
        time,
        angle,
        inertia * speed,
        middle - sway * np.sin(angle),
        -sway * speed * np.cos(angle),
    )
    return seed_of(Rotate(), guess)


def turn_balance(rig: Rig, trajectory: Trajectory) -> tuple[float, float]:
    """Work of the drive and loss by friction over a motion [J].

    The work follows from the balance of energy: rise of energy plus loss.
    """
    constants = Constants.of(rig)
    dense = trajectory.at(np.linspace(trajectory.time[0], trajectory.time[-1], DENSE))
    torque = friction_torque(constants, dense.speed, np.sign(dense.speed))
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.integrate import simpson  # noqa: PLC0415

    loss = float(simpson(-torque * dense.speed, x=dense.time))
    return float(trajectory.energy[-1] - trajectory.energy[0]) + loss, loss
