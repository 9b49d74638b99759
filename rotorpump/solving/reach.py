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
from rotorpump.laws.lead import LeadRun
from rotorpump.laws.trials import Trial, energy_of, goal_measure
from rotorpump.measures import MEASURES
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import angular_momentum
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES, Rig
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.assignment import start_of
from rotorpump.solving.ipopt import Monitor
from rotorpump.solving.routes import Candidate, Wanted, solve_posed
from rotorpump.solving.seeds import Seed, guess_of, seed_of
from rotorpump.tasks import Rotate, SpinUp
from rotorpump.transcription.arcs import cut_into_arcs
from rotorpump.transcription.form import ANGLE, TIME, Form
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.problem import Problem, Term

TIME_MEASURE, SPEED_MEASURE = MEASURES[SpinUp][0], MEASURES[Rotate][0]

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


def reach_goal(
    wanted: Wanted, task: SpinUp, trials: Sequence[Trial], monitor: Monitor | None
) -> Reach:
    """Drive the goal's quantity as high as it gets in the time in which the law saturates."""
    rig = wanted.rig
    measure, goal = goal_measure(rig, task)
    runs = [_in_time(trial.run, task.deadline) for trial in trials]
    best = max(runs, key=lambda run: float(measure(run.states).max()))
    highest = float(measure(best.states).max())
    guess = _climb(rig, best)
    name = "energy" if task.energy is not None else "speed" if task.speed is not None else "angle"
    unit = {"energy": "J", "speed": "rad/s", "angle": "rad"}[name]
    candidate = None
    if guess is not None:
        chain, ends = cut_into_arcs(guess)
        seed = Seed(guess, chain, ends)
        sign = -1.0 if name != "angle" else -float(chain[-1].direction)
        terms = (Term(name, sign),)
        form = Form.of(rig, TIME, "time")
        posed = Problem(rig, form, chain, terms, start_of(rig, task), deadline=task.deadline)
        candidate = solve_posed(replace(wanted, measure=TIME_MEASURE), posed, seed, monitor)
        if candidate.outcome.status is Status.INTERRUPTED:
            raise KeyboardInterrupt
        if candidate.solved:
            reached = _final(name, candidate.trajectory)
            if reached >= goal:
                found = seed_of(task, Guess.from_trajectory(candidate.trajectory))
                return Reach(found, candidate, "")
            highest = max(highest, reached)
    within = "" if task.deadline is None else f" within {task.deadline:g} s"
    return Reach(
        None,
        candidate,
        f"the goal is out of reach: {name} {goal:.6g} {unit} is asked for{within},"
        f" the highest reached is {highest:.6g} {unit}",
    )


def _in_time(run: LeadRun, deadline: float | None) -> LeadRun:
    """Return a run of the law up to the deadline."""
    return run if deadline is None else run.cut(max(1, math.floor(deadline / run.step)))


def _climb(rig: Rig, run: LeadRun) -> Guess | None:
    """Return a saturated run of the law up to its highest energy, if it moves at all."""
    energy = energy_of(rig, run.states)
    until = int(np.argmax(energy >= 0.999 * energy.max()))
    if until < 2 or not np.ptp(run.states[0]):
        return None
    guess = guess_of(rig, run.cut(until))
    _, ends = cut_into_arcs(guess)
    return guess.cut(0.0, ends[MOST_ARCS - 1]) if len(ends) > MOST_ARCS else guess


def _final(name: str, trajectory: Trajectory) -> float:
    """Value of a goal's quantity at the end of a motion."""
    return abs(float(getattr(trajectory, name)[-1]))


def reach_rotation(wanted: Wanted, task: Rotate, monitor: Monitor | None) -> Reach:
    """Look for a turn that gains momentum; if even the best one loses, there is no rotation.

    Turns of several durations are looked at: the slower a turn, the less it loses to drag.
    """
    rig = wanted.rig
    best: Candidate | None = None
    for duration in _turn_durations(rig, task):
        seed = plain_turn(rig, duration)
        gains = (Term("momentum", -1.0), Term("momentum", 1.0, at_start=True))
        posed = Problem(
            rig,
            Form.of(rig, ANGLE, "speed"),
            seed.chain,
            gains,
            None,
            horizon=duration,
            closed_momentum=False,
            load_torque=task.load_torque,
        )
        candidate = solve_posed(replace(wanted, measure=SPEED_MEASURE), posed, seed, monitor)
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
    balance = turn_balance(rig, best.trajectory, task.load_torque)
    takers = f"friction takes {balance.friction:.4g} J"
    if task.load_torque > 0.0:
        takers += f", the load {balance.load:.4g} J"
    return Reach(
        None,
        best,
        f"{reason}: in the best turn found, of {best.trajectory.duration:.3g} s, {takers}"
        f" and the drive adds {balance.drive:.4g} J",
    )


def _gained(candidate: Candidate) -> float:
    momentum = candidate.trajectory.momentum
    return float(momentum[-1] ** 2 - momentum[0] ** 2)


def _turn_durations(rig: Rig, task: Rotate) -> list[float]:
    """Durations of the turns to look at [s]: the one that is asked for, or several."""
    if task.mean_speed is not None:
        return [2.0 * math.pi / task.mean_speed]
    fast = 2.0 * math.pi / (2.0 * _least_speed(rig))
    return [factor * fast for factor in TURN_DURATIONS]


def _least_speed(rig: Rig) -> float:
    """Wheel speed that just carries the wheel over the top [rad/s]."""
    c = Constants.of(rig)
    inertia = rig.inertia(*(sum(rig.stroke(axis)) / 2.0 for axis in AXES))
    return math.sqrt(4.0 * c.gravity * c.lowest_moment / inertia)


def plain_turn(rig: Rig, duration: float) -> Seed:
    """Make up a turn of the given duration: the mass sways once, ahead of the wheel."""
    angle = np.linspace(0.0, 2.0 * math.pi, 400)
    speed = np.full_like(angle, 2.0 * math.pi / duration)
    swing = {
        "radial": (-np.sin(angle), -np.cos(angle)),
        "tangential": (-np.cos(angle), np.sin(angle)),
    }
    places, paces = {}, {}
    for axis in AXES:
        low, high = rig.stroke(axis)
        shape, slope = swing[axis]
        places[axis] = 0.5 * (low + high) + 0.4 * (high - low) * shape
        paces[axis] = 0.4 * (high - low) * slope * speed
    slides = Slides(places["radial"], paces["radial"], places["tangential"], paces["tangential"])
    momentum = angular_momentum(Constants.of(rig), speed, slides)
    time = angle / speed
    guess = Guess(time, angle, np.asarray(momentum), speed, *slides)
    return seed_of(Rotate(), guess)


@dataclass(frozen=True)
class TurnBalance:
    """What the drives add over a motion, and what friction and load take [J]."""

    drive: float
    friction: float
    load: float


def turn_balance(rig: Rig, trajectory: Trajectory, load_torque: float) -> TurnBalance:
    """Balance the energy of a motion; the drives' share follows from the other parts."""
    constants = Constants.of(rig)
    dense = trajectory.at(np.linspace(trajectory.time[0], trajectory.time[-1], DENSE))
    torque = friction_torque(constants, dense.speed, np.sign(dense.speed), dense.axle_load)
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.integrate import simpson  # noqa: PLC0415

    friction = float(simpson(-torque * dense.speed, x=dense.time))
    load = load_torque * abs(float(trajectory.angle[-1] - trajectory.angle[0]))
    rise = float(trajectory.energy[-1] - trajectory.energy[0])
    return TurnBalance(rise + friction + load, friction, load)
