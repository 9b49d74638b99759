# SPDX-License-Identifier: BSD-3-Clause
"""Bounds of the program's variables and rows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rotorpump.transcription.layout import Layout
from rotorpump.transcription.mesh import FREE, OUTER, Mesh
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.scaling import Scales

Array = NDArray[np.float64]

SHORTEST = 1e-4
"""Least length of an interval, in time scales or radians."""


@dataclass(frozen=True, eq=False)
class Bounds:
    """Lower and upper bounds, shape (n,) each."""

    lower: Array
    upper: Array

    @classmethod
    def free(cls, *shape: int) -> Bounds:
        """No bounds at all."""
        return cls(np.full(shape, -np.inf), np.full(shape, np.inf))

    def limit(self, places: Any, lower: ArrayLike, upper: ArrayLike) -> None:
        """Set the bounds at ``places``."""
        self.lower[places] = lower
        self.upper[places] = upper

    def clip(self, values: Array) -> Array:
        """Move values into the bounds."""
        return np.clip(values, self.lower, self.upper)


def bound_variables(
    problem: Problem,
    mesh: Mesh,
    layout: Layout,
    scales: Scales,
    directions: NDArray[np.intp],
) -> Bounds:
    """Bounds of the scaled variables."""
    bounds = Bounds.free(layout.variables)
    node, rung = layout.node, problem.form.rung
    bounds.limit(node[:, 0], 0.0, np.inf)
    _bound_slide(bounds, problem, layout, scales)
    _, momentum = layout.collocated(problem.form)
    forward = directions[:, None] > 0
    bounds.limit(momentum, np.where(forward, 0.0, -np.inf), np.where(forward, np.inf, 0.0))
    for arc, k in zip(problem.chain, mesh.edges[1:], strict=True):
        if arc.end == "standstill":
            bounds.limit(node[k, 2], 0.0, 0.0)
        elif arc.end == "angle":
            bounds.limit(node[k, 1], arc.angle, arc.angle)
    bounds.limit(node[0, 0], 0.0, 0.0)
    start = problem.start
    if start is None:
        bounds.limit(node[0, 1], 0.0, 0.0)
    else:
        bounds.limit(node[0, 1], start.angle, start.angle)
        momentum_start = start.momentum / scales.momentum
        bounds.limit(node[0, 2], momentum_start, momentum_start)
        for order, value in enumerate((start.radial, start.radial_speed)[:rung]):
            scaled = scales.scale_slide(order, value)
            bounds.limit(node[0, 3 + order], scaled, scaled)
    if problem.horizon is not None:
        last = problem.horizon / scales.time
        bounds.limit(node[-1, 0], last, last)
    _bound_rests(bounds, mesh, layout)
    return bounds


def _bound_slide(bounds: Bounds, problem: Problem, layout: Layout, scales: Scales) -> None:
    """Stroke and speed limit, on what is a variable at the rung of the ladder."""
    rung = problem.form.rung
    limits = {0: (0.0, 1.0), 1: (-1.0, 1.0), 2: (-np.inf, np.inf)}
    top = problem.rig.radial.speed / scales.speed
    limits[1] = (-top, top)
    for order in range(rung):
        bounds.limit(layout.node[:, 3 + order], *limits[order])
    bounds.limit(layout.controls, *limits[rung])


def _bound_rests(bounds: Bounds, mesh: Mesh, layout: Layout) -> None:
    """Hold the mass on its stop throughout resting intervals."""
    resting = np.flatnonzero(mesh.rests != FREE)
    if resting.size == 0:
        return
    seat = np.where(mesh.rests[resting] == OUTER, 1.0, 0.0)
    for side in (resting, resting + 1):
        bounds.limit(layout.node[side, 3], seat, seat)
        bounds.limit(layout.node[side, 4], 0.0, 0.0)
    bounds.limit(layout.controls[resting], 0.0, 0.0)


def bound_rows(problem: Problem, mesh: Mesh, scales: Scales) -> Bounds:
    """Bounds of the rows, in the order of the program's blocks."""
    rows = problem.form.rows
    intervals = Bounds.free(mesh.intervals, sum(rows.values()))
    top = problem.rig.radial.speed / scales.speed
    force = (-np.inf, 0.0) if problem.form.relaxed else (-1.0, 1.0)
    limits = {
        "wheel": (0.0, 0.0),
        "path": (0.0, 0.0),
        "stroke": (0.0, 1.0),
        "arrival": (-np.inf, 0.0),
        "speed": (-top, top),
        "force": force,
    }
    resting = np.flatnonzero(mesh.rests != FREE)
    outside = mesh.rests[resting] == OUTER
    first = 0
    for name, count in rows.items():
        group = slice(first, first + count)
        intervals.limit((slice(None), group), *limits[name])
        if name == "force":
            # A stop bears whatever presses on it, and nothing else.
            intervals.lower[resting[outside], group] = -np.inf
            intervals.upper[resting[~outside], group] = np.inf
        elif name != "wheel":
            # The slide's motion is fixed by bounds: rows on it would be redundant.
            intervals.limit((resting, group), -np.inf, np.inf)
        first += count
    lengths = Bounds.free(mesh.intervals, 2)
    if mesh.flexible:
        lengths.limit((slice(None), 0), 0.0, np.inf)
        lengths.limit((slice(None), 1), -np.inf, 0.0)
    else:
        lengths.limit((slice(None), 0), 0.0, 0.0)
        lengths.limit((slice(None), 1), SHORTEST, np.inf)
        # The lengths of an arc sum to the arc: its last one follows from the others.
        lengths.limit((mesh.edges[1:] - 1, 0), -np.inf, np.inf)
    lower = [intervals.lower.ravel(), lengths.lower.ravel()]
    upper = [intervals.upper.ravel(), lengths.upper.ravel()]
    if problem.keeps_margin:
        lower.append(np.array([0.0]))
        upper.append(np.array([1.0]))
    if problem.goal is not None:
        lower.append(np.array([problem.goal.least]))
        upper.append(np.array([np.inf]))
    return Bounds(np.concatenate(lower), np.concatenate(upper))
