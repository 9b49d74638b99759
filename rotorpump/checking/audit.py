# SPDX-License-Identifier: BSD-3-Clause
"""Audit: what went in equals what is there plus what was lost."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.intervals import IntervalSamples
from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

QUADRATURE_POINTS = 8
STORED_SHARE = 0.01
"""Share of the largest energy that an audit counts as turned over at least, where hardly any is."""


def audit_check(rig: Rig, trajectory: Trajectory, accuracy: float) -> Check:
    """Balance the energy of the motion, or its momentum where forces hold impulses."""
    if math.isinf(rig.radial.force):
        return _momentum_balance(rig, trajectory, accuracy)
    return _energy_balance(rig, trajectory, accuracy)


def mechanical_energy(
    rig: Rig, angle: Array, speed: Array, radial: Array, radial_speed: Array
) -> Array:
    """Energy above rest from the wheel's speed, shape of the arguments [J].

    Notes
    -----
    E = ½ J ω² + ½ m (vρ² + (ρ ω)²) + m g (ρ_outer - ρ cos φ).
    """
    wheel = 0.5 * rig.wheel.inertia * speed**2
    mass = 0.5 * rig.mass * (radial_speed**2 + (radial * speed) ** 2)
    height = rig.radial.stroke[1] - radial * np.cos(angle)
    return wheel + mass + rig.mass * rig.gravity * height


def _energy_balance(rig: Rig, trajectory: Trajectory, accuracy: float) -> Check:
    """Drive work ∫F v dt less friction loss ∫|T ω| dt, against the rise of energy."""
    samples, weights = _quadrature(trajectory)
    speed = samples.column("speed")
    power = samples.column("radial_force") * samples.column("radial_speed")
    lost = float(np.sum(weights * np.abs(speed * _friction(rig, speed))))
    stored = mechanical_energy(
        rig, trajectory.angle, trajectory.speed, trajectory.radial, trajectory.radial_speed
    )
    gap = float(np.sum(weights * power)) - lost - float(stored[-1] - stored[0])
    turned_over = float(np.sum(weights * np.abs(power))) + lost
    scale = np.maximum(turned_over, STORED_SHARE * np.max(stored))
    detail = f"{gap:.3g} J missing of {turned_over:.4g} J turned over"
    return Check("energy audit", float(abs(gap) / scale), 10.0 * accuracy, "1", detail)


def _momentum_balance(rig: Rig, trajectory: Trajectory, accuracy: float) -> Check:
    """Torque of weight and friction over time, against the rise of I ω."""
    samples, weights = _quadrature(trajectory)
    speed, radial = samples.column("speed"), samples.column("radial")
    weight = -rig.mass * rig.gravity * radial * np.sin(samples.column("angle"))
    friction = _friction(rig, speed)
    sticking = (speed == 0.0) & (np.abs(weight) <= rig.friction.coulomb)
    torque = np.where(sticking, 0.0, weight + friction)
    momentum = (rig.wheel.inertia + rig.mass * trajectory.radial**2) * trajectory.speed
    gap = float(np.sum(weights * torque)) - float(momentum[-1] - momentum[0])
    turned_over = np.sum(weights * (np.abs(weight) + np.abs(friction)))
    detail = f"{gap:.3g} N m s missing; impulses on the slide leave no energy to audit"
    return Check("momentum audit", float(abs(gap) / turned_over), 10.0 * accuracy, "1", detail)


def _quadrature(trajectory: Trajectory) -> tuple[IntervalSamples, Array]:
    """Return samples at the Gauss points of every interval, and their weights [s]."""
    places, shares = np.polynomial.legendre.leggauss(QUADRATURE_POINTS)
    samples = IntervalSamples(trajectory, 0.5 * (places + 1.0))
    return samples, 0.5 * shares * samples.length


def _friction(rig: Rig, speed: Array) -> Array:
    torque: Array = friction_torque(Constants.of(rig), speed, np.sign(speed))
    return torque
