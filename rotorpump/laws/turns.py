# SPDX-License-Identifier: BSD-3-Clause
"""Turns of the ideal law: the slowest there is, the steady one, one from a given momentum."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from rotorpump.errors import RotorpumpError
from rotorpump.laws.hybrid import AHEAD, best_position, march
from rotorpump.laws.moves import Instant, corners_of, heaviest_place, jump, moved_axes, placed
from rotorpump.laws.pointwise import held_torque, pointwise_rule
from rotorpump.laws.stretch import End, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import pull_arm
from rotorpump.physics.state import Slides

FULL_TURN = 2.0 * math.pi

CLOSE = 1e-12
"""Relative width to which the steady momentum is found."""

PUSH = 1e-4
"""How far past its balance the slowest turn begins [rad]."""

SCAN = 721
"""Angles at which it is asked whether the wheel can start."""


def slowest_turn(constants: Constants) -> list[Stretch]:
    """Let the wheel go where it just starts, up to its second lowest point, or where it stops.

    Returns
    -------
    list of Stretch
        A single one without direction, if the wheel does not start anywhere.
    """
    slides = heaviest_place(constants)
    start = Instant(0.0, _start_angle(constants, slides), 0.0, slides, 1)
    stretches: list[Stretch] = []
    for stretch in march(constants, pointwise_rule(constants), start):
        stretches.append(stretch)
        if len(lowest_passes(stretches)) == 2 or stretch.end in (End.TURN, End.STUCK):
            return stretches
        if stretch.last.angle > start.angle + 2.0 * FULL_TURN:
            raise RotorpumpError("the jumps of the law carry the wheel past its lowest point")
    raise AssertionError("without a horizon the motion ends in one of the ways above")


def lowest_passes(stretches: Sequence[Stretch]) -> list[float]:
    """Momenta with which the wheel passes its lowest points [kg m2/s]."""
    return [s.last.momentum for s in stretches if s.end is End.BOTTOM]


def turn_from(constants: Constants, momentum: float) -> tuple[Instant, list[Stretch]]:
    """Turn once from the lowest point, where the mass still is where it was before it."""
    rule = pointwise_rule(constants)
    start = Instant(0.0, 0.0, momentum, _place_before(constants, momentum), 1)
    stretches: list[Stretch] = []
    for stretch in march(constants, rule, start):
        stretches.append(stretch)
        if stretch.end is End.BOTTOM and stretch.last.angle > 0.0:
            return start, stretches
        if stretch.end in (End.TURN, End.STUCK) or stretch.last.angle > 2.0 * FULL_TURN:
            break
    raise RotorpumpError("a turn of the law ends short of its lowest point, or jumps past it")


def steady_momentum(constants: Constants, slow: float) -> float:
    """Momentum at the lowest point that a turn leaves as it was, not below ``slow``."""

    def gain(momentum: float) -> float:
        _, turn = turn_from(constants, momentum)
        return turn[-1].last.momentum - momentum

    if gain(slow) <= 0.0:
        return slow
    fast = 2.0 * slow
    while gain(fast) > 0.0:
        slow, fast = fast, 2.0 * fast
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.optimize import brentq  # noqa: PLC0415

    return float(brentq(gain, slow, fast, xtol=1e-14 * fast, rtol=CLOSE))


def _place_before(constants: Constants, momentum: float) -> Slides:
    """Place of the mass a little before the lowest point in a turn with this momentum."""
    rule = pointwise_rule(constants)
    now = Instant(0.0, -AHEAD, momentum, heaviest_place(constants), 1)
    for axis in moved_axes(constants):
        now = jump(constants, now, axis, best_position(constants, rule, axis, now))
    return now.slides


def _start_angle(constants: Constants, slides: Slides) -> float:
    """Angle just past the last one in the upper half turn at which the wheel cannot start [rad].

    Starting means turning on in the positive direction from rest, from any corner that jumps from
    ``slides`` lead to.
    """

    def drive(angle: float) -> float:
        corners = (
            placed(constants, Instant(0.0, angle, 0.0, slides), corner)
            for corner in corners_of(constants)
        )
        best = max(-pull_arm(math, constants, corner.angle, corner.slides) for corner in corners)
        return float(constants.gravity * best - held_torque(constants))

    angles = np.linspace(-1.5 * math.pi, 0.5 * math.pi, SCAN)
    drives = np.array([drive(angle) for angle in angles])
    exits = np.flatnonzero((drives[:-1] <= 0.0) & (drives[1:] > 0.0))
    if exits.size == 0:
        return float(angles[np.argmax(drives)])
    low, high = angles[exits[-1]], angles[exits[-1] + 1]
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.optimize import brentq  # noqa: PLC0415

    return float(brentq(drive, low, high)) + PUSH
