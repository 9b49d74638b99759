# SPDX-License-Identifier: BSD-3-Clause
"""Equations of motion in the force form: accelerations from the forces on wheel and mass.

Checking and plain simulation use this form; solving uses the momentum form (`equations`).
"""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants, absent
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.loads import axle_reaction, self_consistent_load
from rotorpump.physics.state import Motion, Push, Slides


def accelerations(
    xp: Any,
    constants: Constants,
    angle: Any,
    speed: Any,
    slides: Slides,
    radial: Push,
    tangential: Push,
    direction: Any,
    *,
    stuck: bool = False,
) -> Motion:
    """Accelerations of wheel and mass, and the forces between them.

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
    radial, tangential : Push
        Force along each axis, or the acceleration that is enforced there.
    direction : array_like or symbol
        Sign of the wheel speed.
    stuck : bool, optional
        Whether friction holds the wheel, so that its acceleration is zero.

    Notes
    -----
    J φ̈ = Q + Q_u - (ρ Fτ - τ Fρ), with Q_u = -g (u_ρ sin φ + u_τ cos φ) the weight of the wheel's
    unbalance; ρ̈ = Fρ/m + g cos φ + τ φ̈ + 2 vτ ω + ρ ω²; τ̈ = Fτ/m - g sin φ - ρ φ̈ - 2 vρ ω + τ ω².
    Along an axis with an enforced acceleration the force is what the second or third equation
    demands, and so part of the wheel's inertia.
    """
    c, (rho, rho_rate, tau, tau_rate) = constants, slides
    drift_radial = c.gravity * xp.cos(angle) + 2.0 * tau_rate * speed + rho * speed**2
    drift_tangential = -c.gravity * xp.sin(angle) - 2.0 * rho_rate * speed + tau * speed**2

    # each force is one part that is known and one part per acceleration of the wheel
    known_radial, known_tangential = radial.force, tangential.force
    per_radial: Any = 0.0
    per_tangential: Any = 0.0
    if radial.held:
        known_radial = c.mass * (radial.acceleration - drift_radial)
        per_radial = -c.mass * tau
    if tangential.held:
        known_tangential = c.mass * (tangential.acceleration - drift_tangential)
        per_tangential = c.mass * rho
    inertia = c.wheel_inertia + rho * per_tangential - tau * per_radial

    passive = _unbalance_torque(xp, c, angle) - (rho * known_tangential - tau * known_radial)

    def at_load(axle_load: Any) -> tuple[Any, tuple[Any, Any], tuple[Any, Any]]:
        rubbed = friction_torque(c, speed, direction, axle_load) - direction * c.load_torque
        wheel = 0.0 * inertia if stuck else (passive + rubbed) / inertia
        contact = known_radial + per_radial * wheel, known_tangential + per_tangential * wheel
        return wheel, contact, axle_reaction(xp, c, angle, speed, wheel, contact)

    wheel, contact, reaction = at_load(0.0)
    if stuck or absent(c.load_arm):
        load = xp.sqrt(reaction[0] ** 2 + reaction[1] ** 2)
    else:
        turning = -direction * c.load_arm / inertia
        slope_radial = (per_radial - c.unbalance_tangential) * turning
        slope_tangential = (per_tangential + c.unbalance_radial) * turning
        load = self_consistent_load(xp, c, reaction, (slope_radial, slope_tangential))
        wheel, contact, _ = at_load(load)
    radial_acceleration, tangential_acceleration = radial.acceleration, tangential.acceleration
    if not radial.held:
        radial_acceleration = contact[0] / c.mass + drift_radial + tau * wheel
    if not tangential.held:
        tangential_acceleration = contact[1] / c.mass + drift_tangential - rho * wheel
    return Motion(wheel, radial_acceleration, tangential_acceleration, *contact, load)


def standing_torque(
    xp: Any, constants: Constants, angle: Any, slides: Slides, radial: Push, tangential: Push
) -> tuple[Any, Any]:
    """Torque on a standing wheel without friction, and the torque that friction can hold [N m].

    The wheel sticks while the magnitude of the first does not exceed the second.

    Parameters
    ----------
    xp : module
        Maths namespace.
    constants : Constants
        The rig's numbers.
    angle : array_like
        Wheel angle [rad].
    slides : Slides
        Place and speed of the mass.
    radial, tangential : Push
        Force along each axis, or the acceleration that is enforced there.

    Notes
    -----
    Friction holds c + μ a |R|, with the reaction R of the standing wheel.
    """
    still = accelerations(xp, constants, angle, 0.0, slides, radial, tangential, 0.0, stuck=True)
    return torque_against_hold(xp, constants, angle, slides, still)


def torque_against_hold(
    xp: Any, constants: Constants, angle: Any, slides: Slides, still: Motion
) -> tuple[Any, Any]:
    """Return what `standing_torque` does, from the motion of a wheel that is held."""
    c = constants
    moment = slides.radial * still.tangential_contact - slides.tangential * still.radial_contact
    held = c.coulomb + c.load_arm * still.axle_load
    return _unbalance_torque(xp, c, angle) - moment, held


def _unbalance_torque(xp: Any, c: Constants, angle: Any) -> Any:
    """Torque of the weight of the wheel's unbalance [N m]."""
    return -c.gravity * (
        c.unbalance_radial * xp.sin(angle) + c.unbalance_tangential * xp.cos(angle)
    )
