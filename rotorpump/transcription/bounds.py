# SPDX-License-Identifier: BSD-3-Clause
"""Bounds of the program's variables."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rotorpump.transcription.layout import Layout
from rotorpump.transcription.mesh import FREE, HIGH, Mesh
from rotorpump.transcription.path import INSTANT, RATE_LIMITED
from rotorpump.transcription.problem import Problem, Start
from rotorpump.transcription.scaling import Scales

Array = NDArray[np.float64]


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

    def narrow(self, places: Any, lower: ArrayLike, upper: ArrayLike) -> None:
        """Tighten the bounds at ``places``, no two of which are the same."""
        self.lower[places] = np.maximum(self.lower[places], lower)
        self.upper[places] = np.minimum(self.upper[places], upper)

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
    form = problem.form
    time, angle = layout.nodes("time"), layout.nodes("angle")
    bounds.limit(time, 0.0, np.inf)
    for k in range(len(form.axes)):
        _bound_slide(bounds, problem, layout, scales, k)
    if form.centred:
        _, momentum = layout.collocated
        forward = directions[:, None] > 0
        bounds.limit(momentum, np.where(forward, 0.0, -np.inf), np.where(forward, np.inf, 0.0))
    for arc, k in zip(problem.chain, mesh.edges[1:], strict=True):
        if arc.end == "standstill" and form.centred:
            bounds.limit(layout.nodes("momentum")[k], 0.0, 0.0)
        elif arc.end == "angle":
            bounds.limit(angle[k], arc.angle, arc.angle)
    bounds.limit(time[0], 0.0, 0.0)
    for name in form.sums:
        bounds.limit(layout.nodes(name)[0], 0.0, 0.0)
    bounds.limit(layout.slacks, 0.0, np.inf)
    if problem.start is None:
        bounds.limit(angle[0], 0.0, 0.0)
    else:
        _bound_start(bounds, problem.start, layout, scales)
    if problem.horizon is not None:
        last = problem.horizon / scales.time
        bounds.limit(time[-1], last, last)
    elif problem.deadline is not None:
        bounds.limit(time[-1], 0.0, problem.deadline / scales.time)
    for k, axis in enumerate(form.axes):
        if axis.forceful:
            _bound_pattern(bounds, mesh, layout, k)
    return bounds


def _bound_start(bounds: Bounds, start: Start, layout: Layout, scales: Scales) -> None:
    """Fix the state at the beginning; the slides are at rest."""
    bounds.limit(layout.nodes("angle")[0], start.angle, start.angle)
    momentum = start.momentum / scales.momentum
    bounds.limit(layout.nodes("momentum")[0], momentum, momentum)
    for axis in layout.form.axes:
        if axis.rung == INSTANT:
            continue
        place = scales.slide(axis.name).scaled(0, getattr(start, axis.name))
        bounds.limit(layout.nodes(axis.name)[0], place, place)
        if axis.forceful:
            bounds.limit(layout.nodes(axis.node[1])[0], 0.0, 0.0)


def _bound_slide(
    bounds: Bounds, problem: Problem, layout: Layout, scales: Scales, number: int
) -> None:
    """Stroke, speed and force limit, on what is a variable at the rung of the ladder."""
    axis = problem.form.axes[number]
    slide, sizes = problem.rig.slide(axis.name), scales.slide(axis.name)
    top = slide.speed / sizes.speed
    limits = {0: (0.0, 1.0), 1: (-top, top), 2: (-np.inf, np.inf)}
    for order, name in enumerate(axis.node[:3]):
        bounds.limit(layout.nodes(name), *limits[order])
    if axis.rung == RATE_LIMITED:
        most = slide.standing_force / sizes.force
        bounds.limit(layout.nodes(axis.node[3]), -most, most)
    else:
        bounds.limit(layout.controls(number), *limits[axis.rung])


def _bound_pattern(bounds: Bounds, mesh: Mesh, layout: Layout, number: int) -> None:
    """Hold the mass on its stop in resting intervals, and to its direction where it rubs."""
    axis = layout.form.axes[number]
    place, pace = layout.nodes(axis.name), layout.nodes(f"{axis.name}_speed")
    resting = np.flatnonzero(mesh.rests[number] != FREE)
    seat = np.where(mesh.rests[number, resting] == HIGH, 1.0, 0.0)
    for side in (resting, resting + 1):
        bounds.limit(place[side], seat, seat)
        bounds.limit(pace[side], 0.0, 0.0)
        if axis.rung == RATE_LIMITED:
            bounds.limit(layout.nodes(axis.node[2])[side], 0.0, 0.0)
    bounds.limit(layout.controls(number)[resting], 0.0, 0.0)
    if axis.rubs and not layout.form.relaxed:
        for end in (0, 1):
            moving = np.flatnonzero(mesh.rests[number] == FREE)
            forward = mesh.signs[number, moving] > 0
            bounds.narrow(
                pace[moving + end],
                np.where(forward, 0.0, -np.inf),
                np.where(forward, np.inf, 0.0),
            )
