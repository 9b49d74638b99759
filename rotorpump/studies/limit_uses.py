# SPDX-License-Identifier: BSD-3-Clause
"""How a motion uses each limit of the drives: share of time at it, and its price."""

from __future__ import annotations

import math

from rotorpump.checking.margins import active_shares
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.solution.solution import LimitUse
from rotorpump.solution.trajectory import Trajectory

UNITS = {
    "speed": "m/s",
    "force": "N",
    "power": "W",
    "force_rate": "N/s",
    "continuous_force": "N",
    "motor_line": "N",
    "high stop": "m",
    "low stop": "m",
}
"""Limits of a slide, in the order in which they are reported, and their SI units."""


def limit_uses(
    rig: Rig, trajectory: Trajectory, prices: dict[tuple[str, str], float]
) -> tuple[LimitUse, ...]:
    """Report every limit that the rig has.

    Parameters
    ----------
    rig : Rig
        The rig.
    trajectory : Trajectory
        The motion.
    prices : dict
        Improvement of the objective per unit of a looser limit, by axis and limit.
    """
    shares = active_shares(rig, trajectory)
    return tuple(
        LimitUse(
            f"{axis} {name.replace('_', ' ')}",
            value,
            UNITS[name],
            shares[axis, name],
            prices.get((axis, name), math.nan),
        )
        for axis in rig.driven
        for name, value in _values(rig.slide(axis)).items()
        if math.isfinite(value)
    )


def _values(slide: Slide) -> dict[str, float]:
    """Value of each limit; infinite where the slide does not have it."""
    return {
        "speed": slide.speed,
        "force": slide.force,
        "power": slide.power,
        "force_rate": slide.force_rate,
        "continuous_force": slide.continuous_force,
        "motor_line": math.inf if slide.stall_force is None else slide.stall_force,
        "high stop": slide.stroke[1],
        "low stop": slide.stroke[0],
    }
