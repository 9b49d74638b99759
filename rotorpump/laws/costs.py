# SPDX-License-Identifier: BSD-3-Clause
"""What a sampled motion costs its drives, and how hard it works them."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.laws.lead import ROWS, LeadRun
from rotorpump.measures import Measure
from rotorpump.rig.rig import AXES, Rig


def work_of(rig: Rig, run: LeadRun) -> float:
    """Work of the drives, those that brake not counted, ∫(Fv)⁺ dt [J].

    A force is constant within a step, so its work there is force times way.
    """
    parts = (
        np.maximum(run.forces[AXES.index(axis)] * np.diff(run.states[ROWS[axis][0]]), 0.0).sum()
        for axis in rig.driven
    )
    return float(sum(parts))


def heat_of(rig: Rig, run: LeadRun) -> float:
    """Copper loss ∫(F/Km)² dt [J]; infinite if a drive has no motor constant."""
    heat = 0.0
    for axis in rig.driven:
        constant = rig.slide(axis).motor_constant
        if constant is None:
            return math.inf
        heat += float(np.square(run.forces[AXES.index(axis)] / constant).sum()) * run.step
    return heat


def cost_of_run(rig: Rig, run: LeadRun, measure: Measure) -> float:
    """Work, heat or their sum [J]."""
    costs = {"work": lambda: work_of(rig, run), "heat": lambda: heat_of(rig, run)}
    return sum(costs[name]() for name in measure.name.split("+"))


def overheats(rig: Rig, run: LeadRun) -> bool:
    """Whether the root mean square of a drive's force exceeds its continuous force."""
    if run.forces.shape[1] == 0:
        return False
    mean_squares = np.square(run.forces).mean(axis=1)
    return any(
        mean_squares[AXES.index(axis)] > rig.slide(axis).continuous_force ** 2
        for axis in rig.driven
    )
