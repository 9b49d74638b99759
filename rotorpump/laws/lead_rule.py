# SPDX-License-Identifier: BSD-3-Clause
"""Where the practical law wants the mass: the ideal rule of each axis, with two leads.

Symbolic, for the compiled loop. The direction of turning is that of the angular momentum, which a
moving mass leaves alone; the wheel's own speed swings with it.
"""

from __future__ import annotations

from typing import Any, NamedTuple

import casadi

from rotorpump.laws.drive import Drive, unlimited
from rotorpump.laws.moves import turned_by
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import pull_arm, total_inertia
from rotorpump.physics.state import Slides

TINY = 1e-9


class Present(NamedTuple):
    """What a rule looks at: angle [rad], momentum [kg m2/s], place of the mass, a held wheel."""

    angle: Any
    momentum: Any
    slides: Slides
    stuck: Any = False


def wants_high(c: Constants, axis: str, now: Present, drive: Drive, leads: Any, offset: Any) -> Any:
    """Whether the law wants the mass at the high end of an axis.

    Parameters
    ----------
    c : Constants
        The rig's numbers.
    axis : str
        The axis.
    now : Present
        The state.
    drive : Drive
        Drive of this axis.
    leads : pair of symbols
        Leads before the lowest point (sideways: before the radial axis is level) and before the
        turning point (or top), in units of the move time.
    offset : symbol or float
        Angle by which the weight of the rest of the rig displaces the rule [rad].
    """
    rule = _radial if axis == "radial" else _tangential
    return rule(c, now, drive, leads, offset)


def middle_of(c: Constants, axis: str) -> Any:
    """Middle of a stroke [m]."""
    low, high = c.stroke(axis)
    return 0.5 * (low + high)


def lean_of(c: Constants, axis: str, angle: Any) -> Any:
    """Gravity along an axis [m/s2]."""
    return c.gravity * (casadi.cos(angle) if axis == "radial" else -casadi.sin(angle))


def _radial(c: Constants, now: Present, drive: Drive, leads: Any, offset: Any) -> Any:
    """Outside while the mass falls, inside while it rises."""
    slides = now.slides
    middle = middle_of(c, "radial")
    phase = now.angle + turned_by(casadi, c, slides.tangential, slides.radial, middle) + offset
    speed = now.momentum / total_inertia(c, slides)
    pace = casadi.fmax(casadi.fabs(speed), TINY)
    from_bottom = casadi.fabs(casadi.atan2(casadi.sin(phase), casadi.cos(phase)))
    load = c.mass * (middle * speed**2 + lean_of(c, "radial", now.angle))
    length = c.radial_high - c.radial_low
    slowing = c.gravity * casadi.fabs(pull_arm(casadi, c, now.angle, slides))
    to_turn = casadi.fmin(
        pace * total_inertia(c, slides) / casadi.fmax(slowing, TINY),
        (casadi.pi - from_bottom) / pace,
    )
    falling = speed * casadi.sin(phase) <= 0.0
    fall_out = from_bottom / pace > leads[0] * _move_time(c, drive, load, length)
    rise_out = to_turn < leads[1] * _move_time(c, drive, -load, length)
    return casadi.if_else(falling, fall_out, rise_out)


def _tangential(c: Constants, now: Present, drive: Drive, leads: Any, offset: Any) -> Any:
    """On the side that falls."""
    slides = now.slides
    middle = middle_of(c, "tangential")
    phase = now.angle + turned_by(casadi, c, -slides.radial, slides.tangential, middle) + offset
    inertia = total_inertia(c, slides)
    speed = now.momentum / inertia
    pace = casadi.fmax(casadi.fabs(speed), TINY)
    direction = casadi.if_else(now.momentum >= 0.0, 1.0, -1.0)
    rising = direction * casadi.cos(phase) < 0.0
    # along the motion to where the axis is level, and gravity changes sides
    level = casadi.cos(phase)
    ahead = direction * casadi.sin(phase) * casadi.if_else(level >= 0.0, 1.0, -1.0)
    to_level = casadi.atan2(casadi.fabs(level), ahead) / pace
    slowing = direction * c.gravity * pull_arm(casadi, c, now.angle, slides) + c.coulomb
    to_turn = pace * inertia / casadi.fmax(slowing, TINY)
    load = c.mass * lean_of(c, "tangential", now.angle)
    length = c.tangential_high - c.tangential_low
    move = _move_time(c, drive, casadi.fabs(load), length)
    turning = casadi.logic_and(slowing > 0.0, to_turn < leads[1] * move)
    soon = casadi.logic_or(to_level < leads[0] * move, turning)
    high = casadi.if_else(soon, casadi.logic_not(rising), rising)
    if now.stuck is False:
        return high
    # a held wheel starts the way in which it hangs to one side, if at all
    return casadi.if_else(now.stuck, casadi.sin(phase) > 0.0, high)


def _move_time(c: Constants, drive: Drive, load: Any, distance: Any) -> Any:
    """Least time for a rest-to-rest move against a constant load [s]."""
    floor = 0.02 * drive.force / c.mass
    start = casadi.fmax((drive.force - load) / c.mass, floor)
    stop = casadi.fmax((drive.force + load) / c.mass, floor)
    peak = casadi.sqrt(2.0 * distance * start * stop / (start + stop))
    ramps = 0.5 * (1.0 / start + 1.0 / stop)
    time = casadi.if_else(
        peak < drive.speed, 2.0 * distance / peak, distance / drive.speed + drive.speed * ramps
    )
    return time if unlimited(drive.force_rate) else time + drive.force / drive.force_rate
