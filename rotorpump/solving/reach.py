# SPDX-License-Identifier: BSD-3-Clause
"""How far a rig can get when no starting motion reaches the goal.

The user's goal, and nothing else, is turned into the objective: either the best motion reaches
it after all, and serves as a starting motion, or its figure says what is missing.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from scipy.integrate import simpson

from rotorpump.laws.trials import Trial, energy_of, goal_measure
from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque
from rotorpump.rig.rig import Rig
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


def reach_goal(rig: Rig, task: SpinUp, trials: list[Trial], monitor: Monitor | None) -> Reach:
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
    """Look for the turn that gains the most; if even that one loses, there is no rotation."""
    best: Candidate | None = None
    for lag in (0.0, 0.25 * math.pi, 0.5 * math.pi):
        seed = _plain_turn(rig, lag)
        posed = assign(rig, task, seed)
        gains = (Term("momentum", -1.0), Term("momentum", 1.0, at_start=True))
        posed = replace(posed, terms=gains, closed_momentum=False)
        candidate = solve_posed(task, posed, seed, monitor)
        if candidate.solved and (best is None or _gained(candidate) > _gained(best)):
            best = candidate
    if best is None:
        return Reach(None, None, "no turn over the top was found that the drive's limits allow")
    if _gained(best) >= 0.0:
        return Reach(seed_of(task, Guess.from_trajectory(best.trajectory)), best, "")
    work, loss = turn_balance(rig, best.trajectory)
    return Reach(
        None,
        best,
        f"the rotation cannot be sustained: in the best turn found, friction takes {loss:.4g} J"
        f" and the drive adds {work:.4g} J",
    )


def _gained(candidate: Candidate) -> float:
    momentum = candidate.trajectory.momentum
    return float(momentum[-1] ** 2 - momentum[0] ** 2)


def _plain_turn(rig: Rig, lag: float) -> Seed:
    """A turn at twice the least speed, the mass swaying: out on the falling side."""
    constants = Constants.of(rig)
    inner, outer = rig.radial.stroke
    middle, sway = (inner + outer) / 2.0, 0.4 * rig.radial.length
    inertia = rig.inertia(middle)
    speed = 2.0 * math.sqrt(4.0 * constants.mass * constants.gravity * outer / inertia)
    angle = np.linspace(0.0, 2.0 * math.pi, 400)
    phase = angle - lag
    guess = Guess(
        angle / speed,
        angle,
        np.full_like(angle, inertia * speed),
        middle - sway * np.sin(phase),
        -sway * speed * np.cos(phase),
    )
    return seed_of(Rotate(), guess)


def turn_balance(rig: Rig, trajectory: Trajectory) -> tuple[float, float]:
    """Work of the drive and loss by friction over a motion [J].

    The work follows from the balance of energy: rise of energy plus loss.
    """
    constants = Constants.of(rig)
    dense = trajectory.at(np.linspace(trajectory.time[0], trajectory.time[-1], DENSE))
    torque = friction_torque(constants, dense.speed, np.sign(dense.speed))
    loss = float(simpson(-torque * dense.speed, x=dense.time))
    return float(trajectory.energy[-1] - trajectory.energy[0]) + loss, loss
