# SPDX-License-Identifier: BSD-3-Clause
"""Spin-up under the ideal law: what it takes, or where it ends short of the goal."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from rotorpump.laws.goal import Goal
from rotorpump.laws.hybrid import march
from rotorpump.laws.idealization import cost_of
from rotorpump.laws.moves import Instant, corners_of, heaviest_place, placed
from rotorpump.laws.pointwise import Rule, pointwise_rule
from rotorpump.laws.stretch import End, Stretch, trajectory_along, work_along
from rotorpump.measures import Measure
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import SpinUp

GROWTH = 1e-9
"""Relative growth per half swing or turn below which the law gains nothing."""

SLOW = 1e-2
PATIENCE = 8
"""Below a growth of SLOW, every so many passes it is asked whether the goal is out of reach."""

MOST_PASSES = 10_000
"""Passes through the lowest point or turning points after which a run is given up."""


@dataclass
class _Climb:
    """How a measure of the motion has grown from one pass through a landmark to the next."""

    passes: int = 0
    reached: float = 0.0
    growth: float = math.inf
    earlier_growth: float = math.inf

    def add(self, reached: float) -> None:
        """Note one more pass."""
        self.earlier_growth = self.growth
        if self.reached > 0.0:
            self.growth = reached / self.reached - 1.0
        self.passes += 1
        self.reached = reached

    def bound(self) -> float:
        """Return what the rest of the climb should not exceed if it goes on to slow down."""
        shrink = self.growth / self.earlier_growth
        rest = self.growth * shrink / (1.0 - shrink) if shrink < 1.0 else math.inf
        return self.reached * (1.0 + 1.1 * rest + GROWTH)

    @property
    def due(self) -> bool:
        """Whether it is time to ask if the goal is out of reach."""
        return self.growth < SLOW and self.passes % PATIENCE == 0


@dataclass
class _Ascent:
    """Climbs of the momentum at the lowest point and of the width of the swings, either way.

    Each direction has its own, since an unbalanced rig swings further to one side. Turning points
    are compared at one place of the mass, whose jumps turn the wheel.
    """

    constants: Constants
    climbs: dict[tuple[End, int], _Climb] = field(default_factory=dict)
    turned_at: float | None = None

    def add(self, stretch: Stretch) -> _Climb | None:
        """Note the end of a stretch; return the climb that it belongs to."""
        if stretch.end is End.BOTTOM:
            reached = abs(stretch.last.momentum)
        elif stretch.end is End.TURN:
            place = heaviest_place(self.constants)
            angle = placed(self.constants, stretch.last, place).angle
            before, self.turned_at = self.turned_at, angle
            if before is None:
                return None
            reached = abs(angle - before)
        else:
            return None
        climb = self.climbs.setdefault((stretch.end, stretch.direction), _Climb())
        climb.add(reached)
        return climb


def spin_up_ideally(
    rig: Rig, task: SpinUp, start: Instant, measure: Measure, remarks: list[str]
) -> LawRun:
    """Run the ideal law until the goal is met or proves to be out of reach.

    Parameters
    ----------
    rig : Rig
        The rig as the law sees it; the limits of its drives are ignored.
    task : SpinUp
        The goal.
    start : Instant
        Where the motion begins.
    measure : Measure
        The objective.
    remarks : list of str
        What has been said about the law on this rig.

    Returns
    -------
    LawRun
        With the time to the goal [s] or the work of the drives [J], or not a number and the reason.

    Notes
    -----
    From one lowest point to the next, the momentum after is a growing function of the momentum
    before, for swings and turns alike; the same holds for the width of one swing and the next. So
    once it has not grown it never will, and a momentum from which it does not grow is never passed
    by a motion that begins below it. Energy and speed are tested on both sides of each jump, not
    within it.
    """
    constants = Constants.of(rig)
    stretches, reason = _climb(constants, start, Goal.of(constants, task))
    time = float(stretches[-1].time[-1])
    if reason:
        reason = f"{reason}; {_highest(constants, start, stretches)}"
    elif task.deadline is not None and time > task.deadline:
        reason = f"the goal is met after {time:.6g} s, past the deadline of {task.deadline:.6g} s"
    value = math.nan
    if not reason:
        work = work_along(constants, start, stretches)
        value = time if measure.name == "time" else cost_of(measure, work)
    return LawRun(
        "ideal",
        Objective(measure.name, value, measure.unit),
        trajectory_along(rig, start, stretches),
        not reason,
        "; ".join([*remarks, reason] if reason else remarks),
    )


def _climb(constants: Constants, start: Instant, goal: Goal) -> tuple[list[Stretch], str]:
    """Stretches up to the goal and "", or up to where the run ends short of it and the reason."""
    rule = pointwise_rule(constants)
    stretches: list[Stretch] = []
    ascent = _Ascent(constants)
    for stretch in march(constants, rule, start, speed=goal.speed):
        if goal.met_at(stretch.first):
            return [*stretches, stretch.opening()], ""
        stretches.append(stretch)
        if goal.met_by(stretch):
            return stretches, ""
        if stretch.end is End.STUCK:
            where = f"{stretch.last.angle:.6g} rad after {stretch.time[0]:.6g} s"
            return stretches, f"the wheel comes to rest at {where}"
        climb = ascent.add(stretch)
        if climb is not None:
            reason = _hopeless(constants, rule, climb, goal, stretch)
            if reason:
                return stretches, reason
    raise AssertionError("without a horizon the motion ends in one of the ways above")


def _hopeless(constants: Constants, rule: Rule, climb: _Climb, goal: Goal, stretch: Stretch) -> str:
    """Why the goal will not be met, or "" if it still may."""
    if climb.growth <= GROWTH:
        return "the law saturates: friction takes what pumping adds"
    if stretch.end is End.BOTTOM and climb.due:
        bound = climb.bound()
        if math.isfinite(bound) and _contained(constants, rule, bound, goal, stretch):
            corners = [Instant(0.0, 0.0, bound, slides) for slides in corners_of(constants)]
            energy = max(corner.energy(constants) for corner in corners)
            pace = max(corner.pace(constants) for corner in corners)
            return (
                "the law saturates: the goal lies beyond the steady motion, at whose lowest point"
                f" the energy is at most {energy:.6g} J and the speed at most {pace:.6g} rad/s with"
                " the mass inside"
            )
    if climb.passes >= MOST_PASSES:
        return f"given up after {MOST_PASSES} swings or turns"
    return ""


def _contained(
    constants: Constants, rule: Rule, momentum: float, goal: Goal, passed: Stretch
) -> bool:
    """Whether the motion from this momentum on neither grows nor meets the goal.

    It goes on like ``passed``, from the lowest point to the next pass in the same direction.
    """
    begin = Instant(0.0, 0.0, passed.direction * momentum, passed.slides)
    for stretch in march(constants, rule, begin, speed=goal.speed):
        if goal.met_at(stretch.first) or goal.met_by(stretch):
            return False
        if stretch.end is End.BOTTOM and stretch.direction == passed.direction:
            return abs(stretch.last.momentum) <= momentum
    return True


def _highest(constants: Constants, start: Instant, stretches: list[Stretch]) -> str:
    """Words on the highest energy and speed of a motion."""
    ends = [start]
    pace = start.pace(constants)
    for stretch in stretches:
        ends += [stretch.first, stretch.last]
        fastest = Instant(0.0, 0.0, float(abs(stretch.momentum).max()), stretch.slides)
        pace = max(pace, fastest.pace(constants))
    energy = max(instant.energy(constants) for instant in ends)
    return f"highest energy {energy:.6g} J, highest speed {pace:.6g} rad/s"
