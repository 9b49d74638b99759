# SPDX-License-Identifier: BSD-3-Clause
"""Equations of motion of the radial rig, in two forms.

The momentum form (angle and angular momentum) serves solving, the force form (accelerations from
forces) serves checking: two statements of the same physics, so that a slip in either shows.
Plain operators and the maths namespace ``xp`` (numpy or casadi) make both work for numbers,
arrays and symbols.

Symbols: φ angle from hanging, ω its rate, ρ radial position, vρ its rate, Fρ force on the mass
along the slide, m moving mass, J wheel inertia, I = J + m ρ², Q torque of friction and load.
"""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque


def total_inertia(constants: Constants, radial: Any) -> Any:
    """Inertia about the axle, I = J + m ρ² [kg m2]."""
    return constants.wheel_inertia + constants.mass * radial**2


def wheel_speed(constants: Constants, momentum: Any, radial: Any) -> Any:
    """Wheel speed from angular momentum, ω = H / I [rad/s]."""
    return momentum / total_inertia(constants, radial)


def momentum_rate(
    xp: Any, constants: Constants, angle: Any, speed: Any, radial: Any, direction: Any
) -> Any:
    """Rate of angular momentum, Ḣ = -m g ρ sin φ + Q [N m]."""
    weight = -constants.mass * constants.gravity * radial * xp.sin(angle)
    return weight + friction_torque(constants, speed, direction)


def contact_force(
    xp: Any, constants: Constants, angle: Any, speed: Any, radial: Any, acceleration: Any
) -> Any:
    """Force along the slide that gives the mass this acceleration, m(ρ̈ - ρ ω² - g cos φ) [N]."""
    load = radial * speed**2 + constants.gravity * xp.cos(angle)
    return constants.mass * (acceleration - load)


def accelerations(
    xp: Any,
    constants: Constants,
    angle: Any,
    speed: Any,
    radial: Any,
    radial_speed: Any,
    radial_force: Any,
    direction: Any,
) -> tuple[Any, Any]:
    """Accelerations of wheel and mass (φ̈ [rad/s2], ρ̈ [m/s2]) under the whole radial force.

    Notes
    -----
    Force form with the rail's force on the mass eliminated:
    (J + m ρ²) φ̈ = Q - m g ρ sin φ - 2 m ρ vρ ω and ρ̈ = Fρ/m + g cos φ + ρ ω².
    """
    torque = friction_torque(constants, speed, direction)
    weight = constants.mass * constants.gravity * radial * xp.sin(angle)
    coriolis = 2.0 * constants.mass * radial * radial_speed * speed
    inertia = constants.wheel_inertia + constants.mass * radial * radial
    wheel = (torque - weight - coriolis) / inertia
    mass = radial_force / constants.mass + constants.gravity * xp.cos(angle) + radial * speed**2
    return wheel, mass
