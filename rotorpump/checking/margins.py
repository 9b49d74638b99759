# SPDX-License-Identifier: BSD-3-Clause
"""Limits between the nodes: how far each is exceeded, and for how long each is reached."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.intervals import IntervalSamples
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

SAMPLES = 20
"""Samples in each interval."""

STROKE_TOLERANCE = 1e-4
SPEED_TOLERANCE = 1e-3
FORCE_TOLERANCE = 5e-3
NEAR = 0.01
"""Relative distance within which a limit counts as reached."""


def margin_checks(rig: Rig, trajectory: Trajectory) -> tuple[Check, ...]:
    """Check stroke, slide speed and drive force, relative to their limits."""
    slide = rig.radial
    samples = IntervalSamples(trajectory, np.linspace(0.0, 1.0, SAMPLES))
    radial = samples.column("radial")
    beyond = np.maximum(slide.stroke[0] - radial, radial - slide.stroke[1]) / slide.length
    checks = [_excess("stroke", beyond, samples.time, STROKE_TOLERANCE)]
    for name, column, limit, tolerance in (
        ("slide speed", "radial_speed", slide.speed, SPEED_TOLERANCE),
        ("drive force", "radial_force", slide.force, FORCE_TOLERANCE),
    ):
        if not math.isinf(limit):
            over = np.abs(samples.column(column)) / limit - 1.0
            checks.append(_excess(name, over, samples.time, tolerance))
    return tuple(checks)


def active_shares(rig: Rig, trajectory: Trajectory) -> dict[str, float]:
    """Share of time that the motion spends within 1 % of each limit of the slide.

    Returns
    -------
    dict of str to float
        "stroke inner end", "stroke outer end" and, where there is such a limit, "speed" and
        "force"; each between 0 and 1.
    """
    slide = rig.radial
    places = (np.arange(SAMPLES) + 0.5) / SAMPLES
    samples = IntervalSamples(trajectory, places)
    weights = samples.length / SAMPLES / np.sum(samples.length)
    radial = samples.column("radial")
    band = NEAR * slide.length
    reached = {
        "stroke inner end": radial <= slide.stroke[0] + band,
        "stroke outer end": radial >= slide.stroke[1] - band,
    }
    if not math.isinf(slide.speed):
        pace = np.abs(samples.column("radial_speed"))
        reached["speed"] = pace >= (1.0 - NEAR) * slide.speed
    if not math.isinf(slide.force):
        effort = np.abs(samples.column("radial_force"))
        reached["force"] = effort >= (1.0 - NEAR) * slide.force
    return {name: float(np.sum(weights * near)) for name, near in reached.items()}


def _excess(name: str, over: Array, time: Array, tolerance: float) -> Check:
    # argmax finds a value that is not a number first, so such a motion cannot pass
    worst = np.unravel_index(int(np.argmax(over)), over.shape)
    value = float(np.maximum(over[worst], 0.0))
    return Check(name, value, tolerance, "1", f"largest at {time[worst]:.4g} s")
