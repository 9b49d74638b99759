# SPDX-License-Identifier: BSD-3-Clause
"""What a motion costs its drives: work and copper loss, from the trajectory's polynomials."""

from __future__ import annotations

import numpy as np

from rotorpump.checking.intervals import Polynomial, gauss_samples, held_polynomials
from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory

ROUNDING = 1e-12
"""Imaginary part, in half intervals, below which a root of a polynomial is real."""


def drive_work(rig: Rig, trajectory: Trajectory) -> float:
    """Work of the drives, Σ ∫ (F v)⁺ dt over the axes; power that flows back is lost [J]."""
    total = 0.0
    for axis in rig.driven:
        forces = held_polynomials(trajectory, f"{axis}_force")
        paces = held_polynomials(trajectory, f"{axis}_speed")
        for force, pace in zip(forces, paces, strict=True):
            if force is not None and pace is not None:
                total += _positive_work(force, pace)
    return total


def drive_heat(rig: Rig, trajectory: Trajectory) -> float:
    """Copper loss of the drives, Σ ∫ (F / Km)² dt over the axes [J]."""
    samples, weights = gauss_samples(trajectory)
    total = 0.0
    for axis in rig.driven:
        constant = rig.slide(axis).motor_constant
        assert constant is not None  # the objective asks for it
        total += float(np.sum(weights * (samples.column(f"{axis}_force") / constant) ** 2))
    return total


def _positive_work(force: Polynomial, pace: Polynomial) -> float:
    """Integral of the positive part of a power over an interval, cut at its roots: exact [J]."""
    power = np.polymul(force.coefficients, pace.coefficients)
    cuts = [-1.0, 1.0]
    for factor in (force, pace):
        if len(factor.coefficients) > 1:
            roots = np.roots(factor.coefficients)
            cuts += roots.real[
                (np.abs(roots.imag) < ROUNDING) & (np.abs(roots.real) < 1.0)
            ].tolist()
    work = np.polyval(np.polyint(power), np.sort(cuts))
    return float(force.half * np.sum(np.maximum(np.diff(work), 0.0)))
