# SPDX-License-Identifier: BSD-3-Clause
"""Mechanical energy of the rig."""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import total_inertia


def energy_above_rest(
    xp: Any, constants: Constants, angle: Any, momentum: Any, radial: Any, radial_speed: Any
) -> Any:
    """Mechanical energy above the lowest the rig can have [J].

    Notes
    -----
    E = H²/(2 I) + ½ m vρ² + m g (ρ_outer - ρ cos φ): zero when the rig hangs still with the mass
    at the outer end.
    """
    turning = momentum**2 / (2.0 * total_inertia(constants, radial))
    sliding = 0.5 * constants.mass * radial_speed**2
    height = constants.outer - radial * xp.cos(angle)
    return turning + sliding + constants.mass * constants.gravity * height
