# SPDX-License-Identifier: BSD-3-Clause
"""Limits between the nodes: how far each is exceeded, and for how long each is reached."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.intervals import IntervalSamples, gauss_samples
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

SAMPLES = 20
"""Samples in each interval."""

STROKE_TOLERANCE = 1e-4
FORCE_TOLERANCE = 5e-3
TOLERANCES = {
    "speed": 1e-3,
    "force": FORCE_TOLERANCE,
    "power": FORCE_TOLERANCE,
    "force_rate": FORCE_TOLERANCE,
    "motor_line": FORCE_TOLERANCE,
    "continuous_force": 1e-3,
}
"""Relative excess of each limit that passes."""

NEAR = 0.01
"""Relative distance within which a limit counts as reached."""


def margin_checks(rig: Rig, trajectory: Trajectory) -> tuple[Check, ...]:
    """Check stroke and every limit of each slide, relative to the limit."""
    checks = []
    samples = IntervalSamples(trajectory, np.linspace(0.0, 1.0, SAMPLES))
    for axis in rig.driven:
        slide = rig.slide(axis)
        place = samples.column(axis)
        beyond = np.maximum(slide.stroke[0] - place, place - slide.stroke[1]) / slide.length
        checks.append(_excess(f"{axis} stroke", beyond, samples.time, STROKE_TOLERANCE))
        for name, use in _uses(slide, samples, axis).items():
            title = f"{axis} {name.replace('_', ' ')}"
            checks.append(_excess(title, use - 1.0, samples.time, TOLERANCES[name]))
        if not math.isinf(slide.force_rate):
            checks.append(_continuity(samples, axis))
        if not math.isinf(slide.continuous_force):
            over = float(np.maximum(_effective_use(slide, trajectory, axis) - 1.0, 0.0))
            tolerance = TOLERANCES["continuous_force"]
            checks.append(Check(f"{axis} continuous force", over, tolerance, "1"))
    return tuple(checks)


def active_shares(rig: Rig, trajectory: Trajectory) -> dict[tuple[str, str], float]:
    """Share of time that the motion spends within 1 % of each limit of its slides.

    Returns
    -------
    dict of (str, str) to float
        By axis and limit, each between 0 and 1: "low stop", "high stop" and, where there is such a
        limit, "speed", "force", "power", "force_rate" and "motor_line"; "continuous_force" is 1 or
        0, whether the force's root mean square over the motion is that near to its limit.
    """
    samples = IntervalSamples(trajectory, (np.arange(SAMPLES) + 0.5) / SAMPLES)
    weights = samples.length / SAMPLES / np.sum(samples.length)
    shares = {}
    for axis in rig.driven:
        slide = rig.slide(axis)
        place, band = samples.column(axis), NEAR * slide.length
        near = {
            "low stop": place <= slide.stroke[0] + band,
            "high stop": place >= slide.stroke[1] - band,
        }
        for name, use in _uses(slide, samples, axis).items():
            near[name] = use >= 1.0 - NEAR
        for name, reached in near.items():
            shares[axis, name] = float(np.sum(weights * reached))
        if not math.isinf(slide.continuous_force):
            effective = _effective_use(slide, trajectory, axis)
            shares[axis, "continuous_force"] = float(effective >= 1.0 - NEAR)
    return shares


def _uses(slide: Slide, samples: IntervalSamples, axis: str) -> dict[str, Array]:
    """Use of each limit at every sample, 1 where it is reached."""
    pace, force = samples.column(f"{axis}_speed"), samples.column(f"{axis}_force")
    used = {"speed": pace, "force": force, "power": force * pace}
    if not math.isinf(slide.force_rate):
        used["force_rate"] = samples.rate(f"{axis}_force")
    limits = {name: float(getattr(slide, name)) for name in used}
    uses = {
        name: np.abs(values) / limits[name]
        for name, values in used.items()
        if not math.isinf(limits[name])
    }
    if slide.stall_force is not None and slide.no_load_speed is not None:
        uses["motor_line"] = np.abs(force / slide.stall_force + pace / slide.no_load_speed)
    return uses


def _effective_use(slide: Slide, trajectory: Trajectory, axis: str) -> float:
    """Root mean square of the force over the motion, by its limit."""
    samples, weights = gauss_samples(trajectory)
    square = np.sum(weights * samples.column(f"{axis}_force") ** 2) / np.sum(weights)
    return float(np.sqrt(square)) / slide.continuous_force


def _continuity(samples: IntervalSamples, axis: str) -> Check:
    """Jumps of the force where intervals meet, relative to the largest force."""
    force = samples.column(f"{axis}_force")
    most = float(np.max(np.abs(force))) or 1.0
    over = np.append(np.abs(force[1:, 0] - force[:-1, -1]) / most, 0.0)
    return _excess(f"{axis} force continuity", over, samples.time[:, -1], FORCE_TOLERANCE)


def _excess(name: str, over: Array, time: Array, tolerance: float) -> Check:
    # argmax finds a value that is not a number first, so such a motion cannot pass
    worst = np.unravel_index(int(np.argmax(over)), over.shape)
    value = float(np.maximum(over[worst], 0.0))
    return Check(name, value, tolerance, "1", f"largest at {time[worst]:.4g} s")
