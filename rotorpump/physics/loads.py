# SPDX-License-Identifier: BSD-3-Clause
"""Load on the axle, and the friction that depends on it."""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides

FLOOR = 1e-7
"""Part of the rig's weight that rounds the load off where it would vanish, so that it stays smooth;
its effect on a friction torque is below rounding unless the rig falls freely."""


def axle_reaction(
    xp: Any, constants: Constants, angle: Any, speed: Any, wheel: Any, contact: tuple[Any, Any]
) -> tuple[Any, Any]:
    """Force of the axle on the wheel, along the wheel's radial and tangential axis [N].

    Parameters
    ----------
    xp : module
        Maths namespace.
    constants : Constants
        The rig's numbers.
    angle, speed, wheel : array_like or symbol
        Wheel angle φ [rad], its rate ω [rad/s] and second rate φ̈ [rad/s2].
    contact : tuple
        Whole forces on the mass along both axes, C_ρ and C_τ [N].

    Notes
    -----
    R_ρ = C_ρ - M g cos φ - u_τ φ̈ - u_ρ ω² and R_τ = C_τ + M g sin φ + u_ρ φ̈ - u_τ ω², with u the
    unbalance of the wheel, whose own inertia the axle carries as well.
    """
    c = constants
    along = contact[0] - c.wheel_mass * c.gravity * xp.cos(angle)
    across = contact[1] + c.wheel_mass * c.gravity * xp.sin(angle)
    along = along - c.unbalance_tangential * wheel - c.unbalance_radial * speed**2
    across = across + c.unbalance_radial * wheel - c.unbalance_tangential * speed**2
    return along, across


def static_moment(constants: Constants, slides: Slides) -> tuple[Any, Any]:
    """Masses times their places along the wheel's axes, m ρ + u_ρ and m τ + u_τ [kg m]."""
    along = constants.mass * slides.radial + constants.unbalance_radial
    across = constants.mass * slides.tangential + constants.unbalance_tangential
    return along, across


def reaction_slope(constants: Constants, slides: Slides) -> tuple[Any, Any]:
    """Change of the axle's reaction per acceleration of the wheel, slides held [kg m].

    Notes
    -----
    ∂R_ρ/∂φ̈ = -(m τ + u_τ), ∂R_τ/∂φ̈ = m ρ + u_ρ.
    """
    along, across = static_moment(constants, slides)
    return -across, along


def self_consistent_load(
    xp: Any, constants: Constants, fixed: tuple[Any, Any], slope: tuple[Any, Any]
) -> Any:
    """Load N on an axle whose reaction itself depends on N by way of friction [N].

    Parameters
    ----------
    xp : module
        Maths namespace.
    constants : Constants
        The rig's numbers.
    fixed : tuple
        Reaction without load-dependent friction [N].
    slope : tuple
        Change of the reaction per newton of load [1]; its magnitude is below 1.

    Notes
    -----
    The positive root of N = |fixed + N slope|.
    """
    size = fixed[0] ** 2 + fixed[1] ** 2
    along = fixed[0] * slope[0] + fixed[1] * slope[1]
    rest = 1.0 - slope[0] ** 2 - slope[1] ** 2
    weight = (constants.mass + constants.wheel_mass) * constants.gravity
    root = xp.sqrt(along**2 + rest * (size + (FLOOR * weight) ** 2))
    return (along + root) / rest
