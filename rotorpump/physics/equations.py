# SPDX-License-Identifier: BSD-3-Clause
"""Equations of motion in the momentum form: angle and angular momentum under a given slide motion.

No force appears in this form. Solving uses it; checking uses the force form (`forces`): two
statements of the same physics, so that a slip in either shows. Plain operators and the maths
namespace ``xp`` (numpy, math or casadi) make it work for numbers, arrays and symbols.

Symbols: φ angle from hanging, ω its rate, ρ and τ radial and tangential place of the mass, vρ and
vτ their rates, m moving mass, J wheel inertia, I = J + m (ρ² + τ²), u unbalance of the wheel, Q
torque of friction and load.
"""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants, absent
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.loads import (
    axle_reaction,
    reaction_slope,
    self_consistent_load,
    static_moment,
)
from rotorpump.physics.state import Motion, Slides


def total_inertia(constants: Constants, slides: Slides) -> Any:
    """Inertia about the axle, I = J + m (ρ² + τ²) [kg m2]."""
    return constants.wheel_inertia + constants.mass * (slides.radial**2 + slides.tangential**2)


def sliding_momentum(constants: Constants, slides: Slides) -> Any:
    """Angular momentum of the mass relative to the wheel, m (ρ vτ - τ vρ) [kg m2/s]."""
    across = slides.radial * slides.tangential_speed
    return constants.mass * (across - slides.tangential * slides.radial_speed)


def wheel_speed(constants: Constants, momentum: Any, slides: Slides) -> Any:
    """Wheel speed from angular momentum, ω = (H - m (ρ vτ - τ vρ)) / I [rad/s]."""
    return (momentum - sliding_momentum(constants, slides)) / total_inertia(constants, slides)


def angular_momentum(constants: Constants, speed: Any, slides: Slides) -> Any:
    """Angular momentum about the axle, H = I ω + m (ρ vτ - τ vρ) [kg m2/s]."""
    return total_inertia(constants, slides) * speed + sliding_momentum(constants, slides)


def pull_arm(xp: Any, constants: Constants, angle: Any, slides: Slides) -> Any:
    """Masses times their horizontal arms about the axle [kg m].

    Notes
    -----
    (m ρ + u_ρ) sin φ + (m τ + u_τ) cos φ; gravity turns the wheel back with g times this.
    """
    along, across = static_moment(constants, slides)
    return along * xp.sin(angle) + across * xp.cos(angle)


def momentum_rate(
    xp: Any,
    constants: Constants,
    angle: Any,
    speed: Any,
    slides: Slides,
    direction: Any,
    axle_load: Any = 0.0,
) -> Any:
    """Rate of angular momentum, Ḣ = -g [(m ρ + u_ρ) sin φ + (m τ + u_τ) cos φ] + Q [N m]."""
    weight = -constants.gravity * pull_arm(xp, constants, angle, slides)
    load = direction * constants.load_torque
    return weight + friction_torque(constants, speed, direction, axle_load) - load


def wheel_acceleration(
    constants: Constants,
    momentum_rate: Any,
    speed: Any,
    slides: Slides,
    radial_acceleration: Any,
    tangential_acceleration: Any,
) -> Any:
    """Acceleration of the wheel from the rate of angular momentum [rad/s2].

    Notes
    -----
    The rate of H = I ω + m (ρ vτ - τ vρ), solved for φ̈:
    I φ̈ = Ḣ - 2 m (ρ vρ + τ vτ) ω - m (ρ τ̈ - τ ρ̈).
    """
    radial, radial_speed, tangential, tangential_speed = slides
    spreading = 2.0 * (radial * radial_speed + tangential * tangential_speed) * speed
    sliding = radial * tangential_acceleration - tangential * radial_acceleration
    return (momentum_rate - constants.mass * (spreading + sliding)) / total_inertia(
        constants, slides
    )


def contact_forces(
    xp: Any,
    constants: Constants,
    angle: Any,
    speed: Any,
    wheel: Any,
    slides: Slides,
    radial_acceleration: Any,
    tangential_acceleration: Any,
) -> tuple[Any, Any]:
    """Whole forces on the mass along the radial and the tangential axis [N].

    Notes
    -----
    C_ρ = m (ρ̈ - g cos φ - τ φ̈ - 2 vτ ω - ρ ω²), C_τ = m (τ̈ + g sin φ + ρ φ̈ + 2 vρ ω - τ ω²).
    """
    radial, radial_speed, tangential, tangential_speed = slides
    outward = radial * speed**2 + tangential * wheel + 2.0 * tangential_speed * speed
    sideways = tangential * speed**2 - radial * wheel - 2.0 * radial_speed * speed
    along = radial_acceleration - constants.gravity * xp.cos(angle) - outward
    across = tangential_acceleration + constants.gravity * xp.sin(angle) - sideways
    return constants.mass * along, constants.mass * across


def motion_along(
    xp: Any,
    constants: Constants,
    angle: Any,
    speed: Any,
    slides: Slides,
    radial_acceleration: Any,
    tangential_acceleration: Any,
    direction: Any,
) -> tuple[Any, Motion]:
    """Rate of angular momentum and motion under a given motion of the slides.

    Parameters
    ----------
    xp : module
        Maths namespace.
    constants : Constants
        The rig's numbers.
    angle, speed : array_like or symbol
        Wheel angle [rad] and speed [rad/s].
    slides : Slides
        Place and speed of the mass.
    radial_acceleration, tangential_acceleration : array_like or symbol
        Accelerations of the mass relative to the wheel [m/s2].
    direction : array_like or symbol
        Sign of the wheel speed.

    Returns
    -------
    rate : array_like or symbol
        Rate of angular momentum [N m].
    motion : Motion
        Accelerations and forces. Friction that depends on the axle's load acts on the wheel,
        which acts on the load: both are solved for together, in closed form.
    """
    acceleration = radial_acceleration, tangential_acceleration

    def at_load(axle_load: Any) -> tuple[Any, Any, tuple[Any, Any], tuple[Any, Any]]:
        rate = momentum_rate(xp, constants, angle, speed, slides, direction, axle_load)
        wheel = wheel_acceleration(constants, rate, speed, slides, *acceleration)
        contact = contact_forces(xp, constants, angle, speed, wheel, slides, *acceleration)
        return rate, wheel, contact, axle_reaction(xp, constants, angle, speed, wheel, contact)

    rate, wheel, contact, reaction = at_load(0.0)
    if absent(constants.load_arm):
        load = xp.sqrt(reaction[0] ** 2 + reaction[1] ** 2)
    else:
        turning = -direction * constants.load_arm / total_inertia(constants, slides)
        along, across = reaction_slope(constants, slides)
        load = self_consistent_load(xp, constants, reaction, (along * turning, across * turning))
        rate, wheel, contact, _ = at_load(load)
    return rate, Motion(wheel, *acceleration, *contact, load)
