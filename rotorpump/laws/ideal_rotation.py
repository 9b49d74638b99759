# SPDX-License-Identifier: BSD-3-Clause
"""Steady rotation under the ideal law."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import replace
from functools import partial

from rotorpump.laws.hybrid import AHEAD, march
from rotorpump.laws.pointwise import Preference, pointwise_preference
from rotorpump.laws.stretch import End, Instant, Stretch, trajectory_along
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Measure

FULL_TURN = 2.0 * math.pi
CLOSE = 1e-12
"""Relative width to which the steady momentum is found."""

PUSH = 1e-4
"""How far past its balance near the top the slowest turn begins [rad]."""


def rotate_ideally(rig: Rig, measure: Measure) -> LawRun:
    """Find the steady rotation of the ideal law in the positive direction.

    Parameters
    ----------
    rig : Rig
        The rig; speed and force limits of its slide are ignored.
    measure : Measure
        Name and unit of the objective, the mean speed.

    Returns
    -------
    LawRun
        With the mean speed 2π/period [rad/s] and one turn that begins at the lowest point, before
        the move that may be due there. If the slowest turn fails: not a number, and that turn. If
        no friction grows with speed: infinity, and one turn of the climb.

    Notes
    -----
    The slowest turn is the one of a wheel let go near the top, where the weight just overcomes
    friction. No part of the friction torque falls with speed, so H² gains no more over a turn the
    larger it is: if the slowest turn does not come over the top again none is steady, and if it
    does exactly one is, and stable, unless friction has no part that grows.
    """
    constants = Constants.of(rig)
    preference = pointwise_preference(constants)
    slowest = _slowest(constants, preference)
    passes = [s.last.momentum for s in slowest if s.end is End.BOTTOM]
    if len(passes) < 2:
        objective = Objective(measure.name, math.nan, measure.unit)
        message = _infeasible(constants, slowest)
        return _run(rig, objective, slowest[0].first, slowest, message=message)
    if constants.viscous == 0.0 and constants.quadratic == 0.0:
        start, turn = _turn(constants, preference, passes[1])
        objective = Objective(measure.name, math.inf, measure.unit)
        message = _unbounded(constants, start, turn)
        return _run(rig, objective, start, turn, message=message)
    start, turn = _turn(constants, preference, _steady(constants, preference, passes[0]))
    speed = FULL_TURN / float(turn[-1].time[-1])
    return _run(rig, Objective(measure.name, speed, measure.unit), start, turn)


def _slowest(constants: Constants, preference: Preference) -> list[Stretch]:
    """Let the wheel go near the top, up to its second lowest point, or to where it stops."""
    pull = constants.mass * constants.gravity * constants.outer
    held = math.asin(min(1.0, constants.coulomb / pull))
    angle = min(-math.pi + held + PUSH, -0.5 * math.pi)
    stretches: list[Stretch] = []
    lowest = 0
    for stretch in march(constants, preference, Instant(0.0, angle, 0.0, constants.outer)):
        stretches.append(stretch)
        lowest += stretch.end is End.BOTTOM
        if lowest == 2 or stretch.end in (End.TURN, End.STUCK):
            return stretches
    raise AssertionError("without a horizon the motion ends in one of the ways above")


def _turn(
    constants: Constants, preference: Preference, momentum: float
) -> tuple[Instant, list[Stretch]]:
    """Turn once from the lowest point, where the mass still is where it was before it."""
    side = preference(-AHEAD, momentum, 1)
    radial = constants.outer if side > 0.0 else constants.inner
    start = Instant(0.0, 0.0, momentum, radial, 1)
    stretches: list[Stretch] = []
    for stretch in march(constants, preference, start):
        stretches.append(stretch)
        if stretch.end is End.BOTTOM:
            return start, stretches
        if stretch.end in (End.TURN, End.STUCK):
            break
    raise AssertionError("a wheel faster than the slowest turn comes over the top")


def _gain(constants: Constants, preference: Preference, momentum: float) -> float:
    """Momentum gained in a turn from the lowest point [kg m2/s]."""
    _, turn = _turn(constants, preference, momentum)
    return turn[-1].last.momentum - momentum


def _steady(constants: Constants, preference: Preference, slow: float) -> float:
    """Momentum at the lowest point that a turn leaves as it was, not below ``slow``."""
    gain = partial(_gain, constants, preference)
    if gain(slow) <= 0.0:
        return slow
    fast = 2.0 * slow
    while gain(fast) > 0.0:
        slow, fast = fast, 2.0 * fast
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.optimize import brentq  # noqa: PLC0415

    return float(brentq(gain, slow, fast, xtol=1e-14 * fast, rtol=CLOSE))


def _pumped_and_lost(
    constants: Constants, start: Instant, stretches: Sequence[Stretch]
) -> tuple[float, float]:
    """Energy that the moves add and energy that friction takes [J].

    Counted from outside to outside, so that the figures do not depend on where a move falls.
    """
    lost = sum(s.first.energy(constants) - s.last.energy(constants) for s in stretches)
    before = replace(start, radial=constants.outer).energy(constants)
    after = replace(stretches[-1].last, radial=constants.outer).energy(constants)
    return after - before + lost, lost


def _infeasible(constants: Constants, slowest: Sequence[Stretch]) -> str:
    if slowest[0].direction == 0:
        return "no steady rotation: friction holds the wheel wherever it stands"
    pumped, lost = _pumped_and_lost(constants, slowest[0].first, slowest)
    return (
        "no steady rotation: in the slowest turn, let go near the top, pumping adds"
        f" {pumped:.6g} J and friction takes {lost:.6g} J until the wheel stops"
        f" {math.pi - slowest[-1].last.angle:.6g} rad short of the top; faster turns fare worse"
    )


def _unbounded(constants: Constants, start: Instant, turn: Sequence[Stretch]) -> str:
    pumped, lost = _pumped_and_lost(constants, start, turn)
    return (
        "the speed is unbounded: no friction grows with it, and pumping adds"
        f" {pumped:.6g} J per turn where friction takes {lost:.6g} J; the trajectory is one turn of"
        " the climb"
    )


def _run(
    rig: Rig,
    objective: Objective,
    start: Instant,
    stretches: Sequence[Stretch],
    *,
    message: str = "",
) -> LawRun:
    trajectory = trajectory_along(rig, start, stretches)
    return LawRun("ideal", objective, trajectory, math.isfinite(objective.value), message)
