# SPDX-License-Identifier: BSD-3-Clause
"""What a sampled controller can make of the drive of a slide."""

from __future__ import annotations

import math
from typing import NamedTuple

from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide

MOVE_STEPS = 16
"""Steps that a move from end to end takes at least; a sampled controller needs some to brake."""

LINE_SHARE = 0.8
"""Share of the no-load speed at which a motor still has some force to drive with."""

WEIGHTS = 2.0
"""Weights of the mass that a drive of limited power has to lift at its usable speed."""


class Drive(NamedTuple):
    """Numbers of one drive, in the order in which the compiled loop takes them.

    Parameters
    ----------
    speed, force : float
        Largest speed [m/s] and force [N] that the controller plans with and asks for.
    power, stall_force, no_load_speed, force_rate : float
        The other limits of the slide [W, N, m/s, N/s]; infinite where there are none.
    """

    speed: float
    force: float
    power: float
    stall_force: float
    no_load_speed: float
    force_rate: float


def unlimited(limit: object) -> bool:
    """Whether a limit is a plain infinity, so that programs need not look at it."""
    return isinstance(limit, float) and math.isinf(limit)


def usable_drive(rig: Rig, axis: str, step: float, share: float = 1.0) -> Drive:
    """Drive of an axis as a controller with this step can make use of it.

    Parameters
    ----------
    rig : Rig
        The rig.
    axis : str
        The driven axis.
    step : float
        Step of the controller [s].
    share : float, optional
        Share of the limit on the force that is used.
    """
    slide, move = rig.slide(axis), MOVE_STEPS * step
    speed = min(_usable_speed(rig, slide), 2.0 * slide.length / move)
    force = min(share * slide.standing_force, 4.0 * rig.mass * slide.length / move**2)
    return Drive(
        speed,
        force,
        slide.power,
        math.inf if slide.stall_force is None else slide.stall_force,
        math.inf if slide.no_load_speed is None else slide.no_load_speed,
        slide.force_rate,
    )


def controller_step(rig: Rig) -> float:
    """Step of the sampled controller: short against the moves and against a swing [s]."""
    swing = rig.pendulum_period
    move = min(_move_time(rig, slide) for slide in rig.slides)
    return float(min(max(move / 60.0, swing / 1500.0), swing / 400.0))


def _usable_speed(rig: Rig, slide: Slide) -> float:
    """Speed at which the drive can still accelerate and brake [m/s]."""
    speed = slide.speed
    if slide.no_load_speed is not None:
        speed = min(speed, LINE_SHARE * slide.no_load_speed)
    if math.isfinite(slide.power):
        peak = 2.0 * slide.length / _power_time(rig, slide)
        speed = min(speed, peak, slide.power / (WEIGHTS * rig.mass * rig.gravity))
    return speed


def _power_time(rig: Rig, slide: Slide) -> float:
    """Time of a triangular move whose peak power is the limit [s], 8 m d²/T³ = P."""
    return float((8.0 * rig.mass * slide.length**2 / slide.power) ** (1.0 / 3.0))


def _move_time(rig: Rig, slide: Slide) -> float:
    """Least time of a move from end to end without load [s], roughly.

    The force-limited, speed-limited, power-limited and rate-limited move each alone.
    """
    strength = slide.standing_force / rig.mass
    ramp = slide.force_rate / rig.mass
    return max(
        2.0 * math.sqrt(slide.length / strength),
        slide.length / _usable_speed(rig, slide),
        _power_time(rig, slide),
        float((32.0 * slide.length / ramp) ** (1.0 / 3.0)),
    )
