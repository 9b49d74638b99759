# SPDX-License-Identifier: BSD-3-Clause
"""What a motion asks of a drive, anew: SciPy's interpolation and quadrature on the nodes alone."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy.integrate import simpson
from scipy.interpolate import BarycentricInterpolator

from rotorpump.rig.rig import Rig
from rotorpump.solution.solution import Solution
from rotorpump.solution.trajectory import Trajectory

POINTS = 2001
"""Points of an interval, so many that the corner where a power changes its sign is no matter."""

Array = NDArray[np.float64]


def measured_use(rig: Rig, trajectory: Trajectory, axis: str) -> dict[str, float]:
    """Peak and root mean square force [N], peak power [W], work and heat [J] of one drive."""
    square = work = peak_force = peak_power = 0.0
    for first, last in pairwise(trajectory.breaks):
        begin, end = trajectory.time[[first, last]]
        if not end > begin:
            continue
        times = np.linspace(begin, end, POINTS)
        force, pace = (
            _within(trajectory, f"{axis}_{quantity}", first, last, times)
            for quantity in ("force", "speed")
        )
        square += simpson(force**2, x=times)
        work += simpson(np.maximum(force * pace, 0.0), x=times)
        peak_force = max(peak_force, float(np.abs(force).max()))
        peak_power = max(peak_power, float(np.abs(force * pace).max()))
    constant = rig.slide(axis).motor_constant
    return {
        "peak_force": peak_force,
        "rms_force": math.sqrt(square / trajectory.duration),
        "peak_power": peak_power,
        "work": work,
        "heat": math.nan if constant is None else square / constant**2,
    }


def _within(trajectory: Trajectory, name: str, first: int, last: int, times: Array) -> Array:
    """Values within an interval; forces and speeds may jump at its start, which is left out."""
    own = slice(first + 1, last + 1)
    polynomial = BarycentricInterpolator(trajectory.time[own], getattr(trajectory, name)[own])
    return np.asarray(polynomial(times))


def differences(solution: Solution) -> dict[tuple[str, str], float]:
    """Relative differences between `Solution.drives` and the quadrature, by axis and quantity."""
    if solution.trajectory is None:
        return {}
    return {
        (use.axis, name): abs(getattr(use, name) - value) / value
        for use in solution.drives
        for name, value in measured_use(solution.rig, solution.trajectory, use.axis).items()
        if value > 0.0
    }
