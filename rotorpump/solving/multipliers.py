# SPDX-License-Identifier: BSD-3-Clause
"""What the multipliers say: the price of each limit of the drive."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.solving.routes import Candidate
from rotorpump.tasks import Pump, Rotate
from rotorpump.transcription.path import FORCE_LIMITED, SPEED_LIMITED


def limit_prices(task: object, candidate: Candidate) -> dict[str, float]:
    """Improvement of the objective per unit of a looser limit.

    Returns
    -------
    prices : dict
        "speed" per m/s and "force" per N, where the rig has that limit.

    Notes
    -----
    A limit L bounds scaled quantities by ± L / s; so dJ/dL = - Σ |λ| / s over the multipliers λ of
    these bounds, for a minimised J.
    """
    program, outcome = candidate.program, candidate.outcome
    form, rig = program.problem.form, program.problem.rig
    rows = form.rows
    per_interval = sum(rows.values())
    multipliers = np.abs(outcome.row_multipliers[: program.mesh.intervals * per_interval])
    table = multipliers.reshape(program.mesh.intervals, per_interval)
    starts = dict(
        zip(rows, np.concatenate(([0], np.cumsum(list(rows.values()))[:-1])), strict=True)
    )

    def sum_rows(name: str) -> float:
        first = int(starts[name])
        return float(table[:, first : first + rows[name]].sum())

    unit = _unit_of_improvement(task, candidate)
    prices = {}
    if math.isfinite(rig.radial.force) and not form.relaxed:
        prices["force"] = unit * sum_rows("force") / rig.radial.force
    if math.isfinite(rig.radial.speed):
        free = program.mesh.rests == 0
        places = program.layout.controls
        if form.rung == FORCE_LIMITED:
            nodes = program.layout.node[:, SPEED_LIMITED + 3]
            moving = np.concatenate(([False], free)) & np.concatenate((free, [True]))
            places = np.unique(nodes[moving])
        speed = float(np.abs(outcome.variable_multipliers[places]).sum())
        if form.rung == FORCE_LIMITED:
            speed += sum_rows("speed")
        prices["speed"] = unit * speed / program.scales.speed
    return prices


def _unit_of_improvement(task: object, candidate: Candidate) -> float:
    """Improvement of the objective, in its own unit, per unit of the scaled minimised one."""
    scales = candidate.program.scales
    if isinstance(task, Pump):
        return float(scales.energy)
    if isinstance(task, Rotate):
        period = candidate.trajectory.duration
        return float(candidate.value / period * scales.time)
    return float(scales.time)
