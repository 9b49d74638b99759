# SPDX-License-Identifier: BSD-3-Clause
"""Energy, momentum and torques, written out once more from the velocities of wheel and mass.

They share nothing with the formulas from which a trajectory's columns are filled in.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig

Array = NDArray[np.float64]


def mechanical_energy(rig: Rig, angle: Array, speed: Array, slides: Slides) -> Array:
    """Energy above the rig's rest, shape of the arguments [J].

    Notes
    -----
    ½ J ω² + ½ m [(vρ - τ ω)² + (vτ + ρ ω)²] + m g y + u g y_u, less the least of the last two.
    """
    wheel = rig.wheel
    along = slides.radial_speed - slides.tangential * speed
    across = slides.tangential_speed + slides.radial * speed
    kinetic = 0.5 * wheel.inertia * speed**2 + 0.5 * rig.mass * (along**2 + across**2)
    height = slides.tangential * np.sin(angle) - slides.radial * np.cos(angle)
    unbalanced = -wheel.unbalance * np.cos(angle + wheel.unbalance_angle)
    lowest = -math.hypot(*rig.static_moment(*rig.lowest_place))
    moment = rig.mass * height + unbalanced - lowest
    return np.asarray(kinetic + rig.gravity * moment)


def angular_momentum(rig: Rig, speed: Array, slides: Slides) -> Array:
    """Angular momentum about the axle, J ω + m [ρ (vτ + ρ ω) - τ (vρ - τ ω)] [kg m2/s]."""
    along = slides.radial_speed - slides.tangential * speed
    across = slides.tangential_speed + slides.radial * speed
    mass = slides.radial * across - slides.tangential * along
    return np.asarray(rig.wheel.inertia * speed + rig.mass * mass)


def weight_torque(rig: Rig, angle: Array, slides: Slides) -> Array:
    """Torque of all weights about the axle [N m]."""
    wheel = rig.wheel
    arm = slides.radial * np.sin(angle) + slides.tangential * np.cos(angle)
    unbalanced = wheel.unbalance * np.sin(angle + wheel.unbalance_angle)
    return np.asarray(-rig.gravity * (rig.mass * arm + unbalanced))


def dry_torque(rig: Rig, axle_load: Array) -> Array:
    """Largest torque of the axle's dry friction, c + μ a |R| [N m]."""
    friction = rig.friction
    return np.asarray(friction.coulomb + friction.load * friction.journal_radius * axle_load)


def braking_torque(rig: Rig, speed: Array, axle_load: Array) -> Array:
    """Magnitude of the axle friction's torque while the wheel turns [N m]."""
    pace = np.abs(speed)
    drag = rig.friction.viscous * pace + rig.friction.quadratic * pace**2
    return np.asarray(dry_torque(rig, axle_load) + drag)
