# SPDX-License-Identifier: BSD-3-Clause
"""Audit: what went in equals what is there plus what was lost."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.case import Case
from rotorpump.checking.first_principles import (
    angular_momentum,
    braking_torque,
    dry_torque,
    mechanical_energy,
    weight_torque,
)
from rotorpump.checking.intervals import IntervalSamples, gauss_samples
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

STORED_SHARE = 0.01
"""Share of the largest energy or momentum that counts as turned over at least."""

STANDING = 1e-9
"""Share of the largest wheel speed below which the wheel counts as standing."""


def audit_check(case: Case, trajectory: Trajectory, accuracy: float) -> Check:
    """Balance the energy of the motion, or its momentum where forces hold impulses."""
    balance = _momentum_balance if case.told else _energy_balance
    return balance(case, trajectory, 10.0 * accuracy)


def _energy_balance(case: Case, trajectory: Trajectory, tolerance: float) -> Check:
    """Work of the drives less what axle, rails and load take, against the rise of energy."""
    rig = case.rig
    samples, weights = gauss_samples(trajectory)
    speed = samples.column("speed")
    powers = {axis: _drive_power(samples, axis) for axis in case.forced}
    taken = np.abs(speed) * (
        braking_torque(rig, speed, samples.column("axle_load")) + case.load_torque
    )
    for axis in case.forced:
        rubbing = rig.slide(axis).rubbing
        taken = taken + rubbing * np.abs(samples.column(f"{axis}_speed"))
    lost = float(np.sum(weights * taken))
    work = sum(float(np.sum(weights * power)) for power in powers.values())
    stored = mechanical_energy(rig, trajectory.angle, trajectory.speed, trajectory.slides)
    gap = work - lost - float(stored[-1] - stored[0])
    turned_over = sum(float(np.sum(weights * np.abs(power))) for power in powers.values()) + lost
    scale = np.maximum(turned_over, STORED_SHARE * np.max(stored))
    detail = f"{gap:.3g} J missing of {turned_over:.4g} J turned over"
    return Check("energy audit", float(abs(gap) / scale), tolerance, "1", detail)


def _drive_power(samples: IntervalSamples, axis: str) -> Array:
    return samples.column(f"{axis}_force") * samples.column(f"{axis}_speed")


def _momentum_balance(case: Case, trajectory: Trajectory, tolerance: float) -> Check:
    """Torque of weight, friction and load over time, against the rise of H."""
    rig = case.rig
    samples, weights = gauss_samples(trajectory)
    speed, load = samples.column("speed"), samples.column("axle_load")
    weight = weight_torque(rig, samples.column("angle"), samples.slides)
    braking = braking_torque(rig, speed, load) + case.load_torque
    standing = np.abs(speed) <= STANDING * np.max(np.abs(trajectory.speed))
    # what holds a standing wheel is what the rate of its momentum asks for, within its bounds
    held = dry_torque(rig, load) + case.load_torque
    holding = np.clip(samples.rate("momentum") - weight, -held, held)
    resistance = np.where(standing, holding, -np.sign(speed) * braking)
    momentum = angular_momentum(rig, trajectory.speed, trajectory.slides)
    gap = float(np.sum(weights * (weight + resistance))) - float(momentum[-1] - momentum[0])
    turned_over = float(np.sum(weights * (np.abs(weight) + np.abs(resistance))))
    scale = np.maximum(turned_over, STORED_SHARE * np.max(np.abs(momentum))) or 1.0
    detail = f"{gap:.3g} N m s missing; impulses on the slide leave no energy to audit"
    return Check("momentum audit", float(abs(gap) / scale), tolerance, "1", detail)
