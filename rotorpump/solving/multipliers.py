# SPDX-License-Identifier: BSD-3-Clause
"""What the multipliers say: the price of each limit of the drives."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from rotorpump.measures import COSTS
from rotorpump.solving.routes import Candidate, Wanted
from rotorpump.tasks import Pump, Rotate
from rotorpump.transcription.form import AxisForm
from rotorpump.transcription.mesh import FREE
from rotorpump.transcription.path import RATE_LIMITED, SPEED_LIMITED
from rotorpump.transcription.row_bounds import row_groups

Array = NDArray[np.float64]


def limit_prices(wanted: Wanted, candidate: Candidate) -> dict[tuple[str, str], float]:
    """Improvement of the objective per unit of a looser limit.

    Returns
    -------
    prices : dict
        By axis and name of the limit, where the rig has it: "speed" per m/s, "force" per N,
        "power" per W, "force_rate" per N/s, "continuous_force" per N.

    Notes
    -----
    A limit L bounds scaled quantities by ± L / s; so dJ/dL = - Σ |λ| / s over the multipliers λ of
    these bounds, for a minimised J.
    """
    prices = _Prices(wanted, candidate)
    found: dict[tuple[str, str], float] = {}
    for k, axis in enumerate(candidate.program.problem.form.axes):
        slide, scales = wanted.rig.slide(axis.name), candidate.program.scales.slide(axis.name)
        sums: dict[str, float] = {}
        if math.isfinite(slide.speed):
            sums["speed"] = prices.speed(k, axis) / scales.speed
        if math.isfinite(slide.force) and axis.forceful:
            sums["force"] = prices.force(k, axis) / scales.force
        if axis.power:
            sums["power"] = prices.rows(f"{axis.name} power") / (scales.force * scales.speed)
        if axis.rung == RATE_LIMITED:
            sums["force_rate"] = prices.rows(f"{axis.name} rate") / slide.force_rate
        if math.isfinite(slide.continuous_force):
            sums["continuous_force"] = prices.rating(axis)
        found |= {(axis.name, name): prices.unit * price for name, price in sums.items()}
    return found


class _Prices:
    """Multipliers of one candidate, summed by what they belong to."""

    def __init__(self, wanted: Wanted, candidate: Candidate) -> None:
        program, outcome = candidate.program, candidate.outcome
        self._program, self._outcome = program, outcome
        count = sum(program.problem.form.rows.values())
        rows = outcome.row_multipliers[: program.mesh.intervals * count]
        self._table: Array = np.abs(rows).reshape(program.mesh.intervals, count)
        self._groups = row_groups(program.problem.form)
        self.unit = _unit_of_improvement(wanted, candidate)

    def rows(self, name: str) -> float:
        """Sum over a group of rows in all intervals."""
        return float(self._table[:, self._groups[name]].sum())

    def force(self, number: int, axis: AxisForm) -> float:
        """Sum over all bounds of a drive's force."""
        total = self.rows(f"{axis.name} force")
        if axis.rung == RATE_LIMITED:
            places = self._program.layout.nodes(axis.node[3])
            total += float(np.abs(self._outcome.variable_multipliers[places]).sum())
        return total

    def speed(self, number: int, axis: AxisForm) -> float:
        """Sum over all bounds of a slide's speed, where the mass does not rest."""
        layout, mesh = self._program.layout, self._program.mesh
        multipliers = np.abs(self._outcome.variable_multipliers)
        if axis.rung == SPEED_LIMITED:
            return float(multipliers[layout.controls(number)].sum())
        free = mesh.rests[number] == FREE
        moving = np.concatenate(([False], free)) & np.concatenate((free, [True]))
        nodes = np.unique(layout.nodes(f"{axis.name}_speed")[moving])
        return float(multipliers[nodes].sum()) + self.rows(f"{axis.name} speed")

    def rating(self, axis: AxisForm) -> float:
        """Price of a continuous rating, scaled objective per newton.

        The row is ∫F²dt - (L/s)² T ≤ 0 in scaled units, whose derivative is 2 L T / s².
        """
        program = self._program
        form, mesh = program.problem.form, program.mesh
        place = mesh.intervals * (self._table.shape[1] + 2) + len(program.problem.margins)
        place += form.ratings.index(f"{axis.name}_square")
        multiplier = abs(float(self._outcome.row_multipliers[place]))
        last = float(self._outcome.variables[program.layout.nodes("time")[-1]])
        limit = program.problem.rig.slide(axis.name).continuous_force
        return float(multiplier * 2.0 * limit * last / program.scales.slide(axis.name).force ** 2)


def _unit_of_improvement(wanted: Wanted, candidate: Candidate) -> float:
    """Improvement of the objective, in its own unit, per unit of the scaled minimised one."""
    scales, value, name = candidate.program.scales, candidate.value, wanted.measure.name
    if wanted.measure in COSTS or name == "energy":
        return float(scales.energy)
    if isinstance(wanted.task, Pump):
        # the square of the scaled quantity is maximised
        unit = scales.momentum if name == "momentum" else 1.0 / scales.time
        return float(unit**2 / (2.0 * value))
    if isinstance(wanted.task, Rotate):
        return float(value / candidate.trajectory.duration * scales.time)
    return float(scales.time)
