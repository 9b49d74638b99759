# SPDX-License-Identifier: BSD-3-Clause
"""Load on the axle of the radial rig."""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants


def axle_load(
    xp: Any,
    constants: Constants,
    wheel_mass: Any,
    angle: Any,
    speed: Any,
    radial: Any,
    radial_speed: Any,
    radial_contact: Any,
    wheel_acceleration: Any,
) -> Any:
    """Magnitude of the axle's reaction [N].

    Parameters
    ----------
    xp : module
        Maths namespace, numpy or casadi.
    constants : Constants
        The rig's numbers.
    wheel_mass : float or symbol
        Mass that the axle carries without the moving mass, M [kg].
    angle, speed, wheel_acceleration : array_like or symbol, shape (n,)
        Wheel angle φ [rad], its rate ω [rad/s] and second rate φ̈ [rad/s2].
    radial, radial_speed : array_like or symbol, shape (n,)
        Position ρ of the mass [m] and its rate vρ [m/s].
    radial_contact : array_like or symbol, shape (n,)
        Whole force on the mass along the slide, drive and end stops together, Cρ [N].

    Notes
    -----
    In the wheel frame the reaction is R_ρ = Cρ - M g cos φ and R_τ = Cτ + M g sin φ, where the
    force across the slide is Cτ = m (ρ φ̈ + g sin φ + 2 vρ ω).
    """
    coriolis = 2.0 * radial_speed * speed
    across = radial * wheel_acceleration + constants.gravity * xp.sin(angle) + coriolis
    along = radial_contact - wheel_mass * constants.gravity * xp.cos(angle)
    sideways = constants.mass * across + wheel_mass * constants.gravity * xp.sin(angle)
    return xp.sqrt(along**2 + sideways**2)
