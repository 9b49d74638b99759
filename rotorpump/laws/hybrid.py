# SPDX-License-Identifier: BSD-3-Clause
"""Event-exact simulation of a mass that jumps along its slides, for any rule.

Between jumps the mass is held (`holding`); a jump leaves the angular momentum as it is and turns
the wheel by what the mass itself causes (`moves`).
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from rotorpump.laws.holding import SNAP, TINY_TIME, hold, slowest_time
from rotorpump.laws.moves import (
    Instant,
    corners_of,
    full_pull,
    heaviest_place,
    jump,
    moved_axes,
    placed,
    positions_of,
)
from rotorpump.laws.pointwise import Rule, held_torque
from rotorpump.laws.stretch import End, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import height_moment
from rotorpump.physics.equations import momentum_rate, pull_arm, total_inertia, wheel_speed

TIE = 1e-10
AHEAD = 1e-6
"""Where the rule is undecided within TIE, it is asked again this much further on [rad]."""


def march(
    constants: Constants,
    rule: Rule,
    start: Instant,
    horizon: float = math.inf,
    speed: float = math.inf,
) -> Iterator[Stretch]:
    """Follow the motion stretch by stretch.

    Parameters
    ----------
    constants : Constants
        The rig's numbers; friction that grows with the axle's load is not looked at.
    rule : callable
        See `Rule`; it is obeyed at once from the start on.
    start : Instant
        Where the motion begins. At a standstill its ``direction`` is the way to set off, 0 for the
        better one; otherwise it is not read.
    horizon : float, optional
        Time at which to stop [s].
    speed : float, optional
        Magnitude of the wheel speed at which to stop [rad/s], if it is passed within a stretch.

    Yields
    ------
    Stretch
        The last one ends with ``TIME``, ``SPEED`` or ``STUCK``; without a horizon there may be no
        last one.

    Notes
    -----
    On a switch of the pointwise rule its rate with the angle is the same at both positions, because
    the gain of H² is; so a switch never reverses at once, and along one axis the mass never
    chatters. Along two, each axis moves once at most at an instant, radial first; an axis that the
    other one's move leaves at the wrong position moves at the next.
    """
    now, switched = start, ""
    while horizon - now.time > TINY_TIME:
        now = _obey(constants, rule, now, switched)
        if now.direction == 0:
            yield _standing(constants, now, horizon)
            return
        urges = {axis: rule(axis, now.slides) for axis in moved_axes(constants)}
        stretch = hold(constants, urges, now, horizon, speed)
        yield stretch
        if stretch.end in (End.TIME, End.SPEED, End.STUCK):
            return
        now = replace(stretch.last, direction=0)
        switched = stretch.axis if stretch.end is End.SWITCH else ""


def _obey(constants: Constants, rule: Rule, now: Instant, switched: str) -> Instant:
    """Make the moves that the rule asks for; direction 0 if the wheel stays at rest."""
    if now.momentum == 0.0:
        return _set_off(constants, now)
    now = replace(now, direction=1 if now.momentum > 0.0 else -1)
    for axis in moved_axes(constants):
        end = best_position(constants, rule, axis, now, leave=axis == switched)
        now = jump(constants, now, axis, end)
    return now


def best_position(
    constants: Constants, rule: Rule, axis: str, now: Instant, *, leave: bool = False
) -> float:
    """Position along an axis that the rule wants for a turning wheel [m].

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    rule : Rule
        The rule.
    axis : str
        The axis.
    now : Instant
        The state, with its direction.
    leave : bool, optional
        Whether the rule has just switched, so that the mass does not stay. Several positions may
        come to be better at once: which one is best shows a little further on.
    """
    urges = rule(axis, now.slides)
    here = getattr(now.slides, axis)
    wishes = {end: urge(now.angle, now.momentum, now.direction) for end, urge in urges.items()}
    if leave or min(abs(wish) for wish in wishes.values()) < TIE:
        angle, momentum = _ahead(constants, now)
        wishes = {end: urge(angle, momentum, now.direction) for end, urge in urges.items()}
    if here in positions_of(constants, axis) and not leave:
        wishes[here] = 0.0
    return max(wishes, key=wishes.__getitem__)


def _set_off(constants: Constants, now: Instant) -> Instant:
    """Leave a standstill from the corner that gains the most momentum, or stay at rest."""

    def torque(corner: Instant) -> float:
        return float(-constants.gravity * pull_arm(math, constants, corner.angle, corner.slides))

    def drive(corner: Instant) -> float:
        return abs(torque(corner)) if now.direction == 0 else now.direction * torque(corner)

    def gain(corner: Instant) -> float:
        spare = drive(corner) - held_torque(constants)
        return float(total_inertia(constants, corner.slides)) * spare

    corners = [placed(constants, now, slides) for slides in corners_of(constants)]
    best = max(corners, key=gain)
    hanging = height_moment(math, constants, best.angle, best.slides) < 0.0
    slack = SNAP if held_torque(constants) > 0.0 or hanging else 0.0
    if drive(best) <= held_torque(constants) + slack * full_pull(constants):
        return replace(now, direction=0)
    return replace(best, direction=1 if torque(best) > 0.0 else -1)


def _ahead(constants: Constants, now: Instant) -> tuple[float, float]:
    """Angle and momentum a little further along the motion."""
    speed = wheel_speed(constants, now.momentum, now.slides)
    rate = momentum_rate(math, constants, now.angle, speed, now.slides, now.direction)
    return now.angle + now.direction * AHEAD, now.momentum + rate * AHEAD / abs(speed)


def _standing(constants: Constants, now: Instant, horizon: float) -> Stretch:
    """Stand until the horizon, or for the time of a small swing if there is none."""
    length = horizon - now.time
    if not math.isfinite(length):
        length = 2.0 * math.pi * slowest_time(constants, heaviest_place(constants))
    return Stretch(
        np.array([now.time, now.time + length]),
        np.full(2, now.angle),
        np.full(2, now.momentum),
        now.slides,
        0,
        End.STUCK,
    )
