# SPDX-License-Identifier: BSD-3-Clause
"""Mechanical energy of the rig."""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import sliding_momentum, total_inertia
from rotorpump.physics.loads import static_moment
from rotorpump.physics.state import Slides


def energy_above_rest(
    xp: Any, constants: Constants, angle: Any, momentum: Any, slides: Slides
) -> Any:
    """Mechanical energy above the lowest the rig can have [J].

    Notes
    -----
    With L = m (ρ vτ - τ vρ) the kinetic energy is (H² - L²)/(2 I) + ½ m (vρ² + vτ²). The zero of
    the potential energy is where the rig hangs lowest; a balanced radial rig does so with the mass
    at the outer end.
    """
    sliding = sliding_momentum(constants, slides)
    turning = (momentum**2 - sliding**2) / (2.0 * total_inertia(constants, slides))
    pace = slides.radial_speed**2 + slides.tangential_speed**2
    height = constants.lowest_moment + height_moment(xp, constants, angle, slides)
    return turning + 0.5 * constants.mass * pace + constants.gravity * height


def height_moment(xp: Any, constants: Constants, angle: Any, slides: Slides) -> Any:
    """Masses times their heights above the axle [kg m].

    Notes
    -----
    -(m ρ + u_ρ) cos φ + (m τ + u_τ) sin φ.
    """
    along, across = static_moment(constants, slides)
    return across * xp.sin(angle) - along * xp.cos(angle)
