# SPDX-License-Identifier: BSD-3-Clause
"""Spin-up under the ideal law: how long it takes, or where it ends short of the goal."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.laws.goal import Goal
from rotorpump.laws.hybrid import march
from rotorpump.laws.pointwise import Preference, pointwise_preference
from rotorpump.laws.stretch import End, Instant, Stretch, trajectory_along
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Measure, SpinUp

GROWTH = 1e-9
"""Relative growth of the momentum per half swing or turn below which the law gains nothing."""

SLOW = 1e-2
PATIENCE = 8
"""Below a growth of SLOW, every so many passes it is asked whether the goal is out of reach."""

MOST_PASSES = 10_000
"""Passes through the lowest point after which a run is given up."""


@dataclass
class _Climb:
    """Passes through the lowest point so far."""

    passes: int = 0
    momentum: float = 0.0
    growth: float = math.inf
    earlier_growth: float = math.inf

    def add(self, momentum: float) -> None:
        """Note one more pass."""
        self.earlier_growth = self.growth
        if self.passes:
            self.growth = momentum / self.momentum - 1.0
        self.passes += 1
        self.momentum = momentum

    def bound(self) -> float:
        """Momentum that the rest of the climb should not exceed if it goes on to slow down."""
        shrink = self.growth / self.earlier_growth
        rest = self.growth * shrink / (1.0 - shrink) if shrink < 1.0 else math.inf
        return self.momentum * (1.0 + 1.1 * rest + GROWTH)

    @property
    def due(self) -> bool:
        """Whether it is time to ask if the goal is out of reach."""
        return self.growth < SLOW and self.passes % PATIENCE == 0


def spin_up_ideally(rig: Rig, task: SpinUp, start: Instant, measure: Measure) -> LawRun:
    """Run the ideal law until the goal is met or proves to be out of reach.

    Parameters
    ----------
    rig : Rig
        The rig; speed and force limits of its slide are ignored.
    task : SpinUp
        The goal.
    start : Instant
        Where the motion begins.
    measure : Measure
        Name and unit of the objective, a time.

    Returns
    -------
    LawRun
        With the time to the goal [s], or not a number and the reason.

    Notes
    -----
    From one lowest point to the next, the momentum after is a growing function of the momentum
    before, for swings and turns alike. So once it has not grown it never will, and a momentum
    from which it does not grow is never passed by a motion that begins below it. Energy and speed
    are tested on both sides of each jump, not within it.
    """
    constants = Constants.of(rig)
    goal = Goal.of(constants, task)
    stretches, reason = _climb(constants, start, goal)
    reached = reason == ""
    value = float(stretches[-1].time[-1]) if reached else math.nan
    message = reason if reached else f"{reason}; {_highest(constants, start, stretches)}"
    return LawRun(
        "ideal",
        Objective(measure.name, value, measure.unit),
        trajectory_along(rig, start, stretches),
        reached,
        message,
    )


def _climb(constants: Constants, start: Instant, goal: Goal) -> tuple[list[Stretch], str]:
    """Stretches up to the goal and "", or up to where the run ends short of it and the reason."""
    preference = pointwise_preference(constants)
    stretches: list[Stretch] = []
    climb = _Climb()
    for stretch in march(constants, preference, start, speed=goal.speed):
        if goal.met_at(stretch.first):
            return [*stretches, stretch.opening()], ""
        stretches.append(stretch)
        if goal.met_by(stretch):
            return stretches, ""
        if stretch.end is End.STUCK:
            where = f"{stretch.last.angle:.6g} rad after {stretch.time[0]:.6g} s"
            return stretches, f"the wheel comes to rest at {where}"
        if stretch.end is End.BOTTOM:
            climb.add(abs(stretch.last.momentum))
            reason = _hopeless(constants, preference, climb, goal)
            if reason:
                return stretches, reason
    raise AssertionError("without a horizon the motion ends in one of the ways above")


def _hopeless(constants: Constants, preference: Preference, climb: _Climb, goal: Goal) -> str:
    """Why the goal will not be met, or "" if it still may."""
    if climb.growth <= GROWTH:
        return "the law saturates: friction takes what pumping adds"
    if climb.due:
        bound = climb.bound()
        if math.isfinite(bound) and _contained(constants, preference, bound, goal):
            most = Instant(0.0, 0.0, bound, constants.inner)
            return (
                "the law saturates: the goal lies beyond the steady motion, at whose lowest point"
                f" the energy is at most {most.energy(constants):.6g} J and the speed at most"
                f" {most.pace(constants):.6g} rad/s with the mass inside"
            )
    if climb.passes >= MOST_PASSES:
        return f"given up after {MOST_PASSES} passes through the lowest point"
    return ""


def _contained(constants: Constants, preference: Preference, momentum: float, goal: Goal) -> bool:
    """Whether a half swing or turn from this momentum neither grows nor meets the goal."""
    begin = Instant(0.0, 0.0, momentum, constants.outer)
    for stretch in march(constants, preference, begin, speed=goal.speed):
        if goal.met_at(stretch.first) or goal.met_by(stretch):
            return False
        if stretch.end is End.BOTTOM:
            return abs(stretch.last.momentum) <= momentum
    return True


def _highest(constants: Constants, start: Instant, stretches: list[Stretch]) -> str:
    """Words on the highest energy and speed of a motion."""
    ends = [start]
    pace = start.pace(constants)
    for stretch in stretches:
        ends += [stretch.first, stretch.last]
        fastest = Instant(0.0, 0.0, float(abs(stretch.momentum).max()), stretch.radial)
        pace = max(pace, fastest.pace(constants))
    energy = max(instant.energy(constants) for instant in ends)
    return f"highest energy {energy:.6g} J, highest speed {pace:.6g} rad/s"
