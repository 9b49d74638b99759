# SPDX-License-Identifier: BSD-3-Clause
"""The nonlinear program of a problem on a mesh: functions, parameters, bounds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from rotorpump.transcription.blocks import Block, Functions, assemble
from rotorpump.transcription.bounds import Bounds, bound_variables
from rotorpump.transcription.form import TIME
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.interval import interval_kernel
from rotorpump.transcription.layout import Layout
from rotorpump.transcription.mesh import FREE, Mesh
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.path import INSTANT, RATE_LIMITED, SPEED_LIMITED
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.row_bounds import bound_rows
from rotorpump.transcription.scaling import Scales
from rotorpump.transcription.shared import SHARED, shared_values
from rotorpump.transcription.terminal import (
    end_kernel,
    evenness_kernel,
    length_kernel,
    margin_kernel,
    rating_kernel,
)

Array = NDArray[np.float64]

FLEXIBILITY = (0.2, 1.8)
RATED_FLEXIBILITY = (0.04, 3.0)
"""Least and largest length of a flexible interval, in nominal lengths; the second where forces take
a short time to change."""

EVENNESS = 3e-3
"""Weight of the mean squared departure from nominal lengths."""


@dataclass(frozen=True, eq=False)
class Program:
    """A problem on a mesh, ready for the solver.

    Parameters
    ----------
    problem : Problem
        What is asked.
    mesh : Mesh
        The division into intervals.
    relaxation : float
        Share of force limit times stroke that the product of an end stop's force and its gap may
        reach (relaxed forms only).
    """

    problem: Problem
    mesh: Mesh
    relaxation: float = 0.0

    @cached_property
    def layout(self) -> Layout:
        """Places of the variables."""
        return Layout.of(self.problem.form, self.mesh.intervals, own_last=self.problem.own_last)

    @cached_property
    def scales(self) -> Scales:
        """Scales of the variables."""
        return Scales.of(self.problem.rig)

    @cached_property
    def directions(self) -> NDArray[np.intp]:
        """Sign of the wheel speed in each interval."""
        return np.repeat([arc.direction for arc in self.problem.chain], self.mesh.counts)

    @cached_property
    def functions(self) -> Functions:
        """Objective, rows and their derivatives."""
        return assemble(self.layout.variables, SHARED, self._constraints, self._objectives)

    @property
    def parameters(self) -> Array:
        """Values of all parameters."""
        problem = self.problem
        shared = shared_values(problem.rig, problem.load_torque, self.relaxation)
        own = [block.own.ravel() for block in (*self._constraints, *self._objectives)]
        return np.concatenate([shared, *own])

    @cached_property
    def variable_bounds(self) -> Bounds:
        """Bounds of the scaled variables."""
        return bound_variables(self.problem, self.mesh, self.layout, self.scales, self.directions)

    @cached_property
    def row_bounds(self) -> Bounds:
        """Bounds of the rows: intervals, interval lengths, goal."""
        return bound_rows(self.problem, self.mesh, self.scales)

    @property
    def objective_scale(self) -> float:
        """Weight that keeps the objective from drowning among the barrier's many terms."""
        return float(self.mesh.intervals)

    @cached_property
    def _constraints(self) -> list[Block]:
        problem, form, layout = self.problem, self.problem.form, self.layout
        intervals = Block(interval_kernel(form), layout.places, self._interval_parameters)
        flexibility = RATED_FLEXIBILITY if form.rated else FLEXIBILITY
        least, largest = flexibility if self.mesh.flexible else (1.0, 0.0)
        shares = np.concatenate(self.mesh.shares)
        lengths = Block(
            length_kernel(),
            self._length_places,
            np.column_stack([least * shares, largest * shares]),
        )
        blocks = [intervals, lengths]
        last = layout.node[-1:]
        if problem.margins:
            blocks.append(Block(margin_kernel(form, problem.margins), last, np.zeros((1, 0))))
        if form.ratings:
            blocks.append(Block(rating_kernel(form, form.ratings), last, self._ratings))
        if problem.goal is not None:
            kernel = end_kernel(problem.goal.name, form)
            blocks.append(Block(kernel, self._end_places(at_start=False), np.ones((1, 1))))
        return blocks

    @property
    def _interval_parameters(self) -> Array:
        """Own parameters of the intervals: direction; resting stop and direction of each slide."""
        columns = [self.directions]
        for rests, signs in zip(self.mesh.rests, self.mesh.signs, strict=True):
            columns += [rests, np.where(rests == FREE, signs, 0)]
        return np.column_stack(columns).astype(float)

    @property
    def _ratings(self) -> Array:
        """Growth of the squared forces at their ratings, in scaled units, shape (1, ratings)."""
        rated = [name.removesuffix("_square") for name in self.problem.form.ratings]
        return np.array(
            [
                [
                    (self.problem.rig.slide(axis).continuous_force / self.scales.slide(axis).force)
                    ** 2
                    for axis in rated
                ]
            ]
        )

    @cached_property
    def _objectives(self) -> list[Block]:
        blocks = [
            Block(
                end_kernel(term.name, self.problem.form),
                self._end_places(at_start=term.at_start),
                np.array([[term.weight]]),
            )
            for term in self.problem.terms
        ]
        if self.mesh.flexible:
            shares = np.concatenate(self.mesh.shares)
            weights = np.full_like(shares, EVENNESS / shares.size)
            blocks.append(
                Block(evenness_kernel(), self._length_places, np.column_stack([shares, weights]))
            )
        return blocks

    @cached_property
    def _length_places(self) -> NDArray[np.intp]:
        """Independent variable at an interval's ends and at its arc's ends."""
        nodes, edges = self.layout.nodes(self.problem.form.independent), self.mesh.edges
        starts = np.repeat(nodes[edges[:-1]], self.mesh.counts)
        ends = np.repeat(nodes[edges[1:]], self.mesh.counts)
        return np.column_stack([nodes[:-1], nodes[1:], starts, ends])

    def _end_places(self, *, at_start: bool) -> NDArray[np.intp]:
        # The outer one of the two controls comes last.
        end = 0 if at_start else -1
        outer = [
            (self.layout.controls(k)[end, end] if axis.controls else self.layout.node[end, 0])
            for k, axis in enumerate(self.problem.form.axes)
        ]
        return np.concatenate([self.layout.node[end], outer])[None, :]

    def start_from(self, guess: Guess, ends: Sequence[float]) -> Array:
        """Scaled variables of a guess whose arcs end at the given times (or angles)."""
        form, layout, scales = self.problem.form, self.layout, self.scales
        marks = self.mesh.node_times(ends)
        points = radau_nodes(form.degree).points
        inside = marks[:-1, None] + np.diff(marks)[:, None] * points
        if form.independent == TIME:
            times, angle_at = inside, guess.at("angle", inside)
        else:
            times, angle_at = np.interp(inside, guess.angle, guess.time), inside
        first, momentum = layout.collocated
        z = np.zeros(layout.variables)
        node_times = np.append(times[:, 0], times[-1, -1])
        z[layout.nodes("time")] = node_times / scales.time
        z[layout.nodes("angle")] = np.append(angle_at[:, 0], angle_at[-1, -1])
        z[first] = angle_at if form.independent == TIME else times / scales.time
        z[momentum] = guess.at("momentum", times) / scales.momentum
        for k in range(len(form.axes)):
            self._start_slide(z, k, guess, np.column_stack([times[:, 0], times[:, -1]]))
        return self.variable_bounds.clip(z)

    def _start_slide(self, z: Array, number: int, guess: Guess, sides: Array) -> None:
        """Set one slide's variables; ``sides`` are the times at which intervals begin and end."""
        axis, layout = self.problem.form.axes[number], self.layout
        scales = self.scales.slide(axis.name)
        node_times = np.append(sides[:, 0], sides[-1, 1])
        spans = np.maximum(np.diff(sides, axis=1), 1e-9)
        place, pace = guess.at(axis.name, sides), guess.at(f"{axis.name}_speed", sides)
        if axis.rung == INSTANT:
            controls = place
        elif axis.rung == SPEED_LIMITED:
            controls = np.repeat(np.diff(place, axis=1) / spans, 2, axis=1)
        else:
            controls = np.repeat(np.diff(pace, axis=1) / spans, 2, axis=1)
        for order, name in enumerate(axis.node[:2]):
            z[layout.nodes(name)] = scales.scaled(order, guess.at(name, node_times))
        if axis.rung == RATE_LIMITED:
            # an acceleration that is shared by two intervals, and a force that gives it
            shared = 0.5 * (np.append(controls[:, 0], 0.0) + np.append(0.0, controls[:, 1]))
            z[layout.nodes(axis.node[2])] = shared / scales.acceleration
            load = _load(guess, axis.name, node_times, self.problem.rig.gravity)
            force = (shared - load) * self.problem.rig.mass
            z[layout.nodes(axis.node[3])] = force / scales.force
        else:
            z[layout.controls(number)] = scales.scaled(axis.rung, controls)


def _load(guess: Guess, axis: str, time: Array, gravity: float) -> Array:
    """Acceleration of a free mass along an axis, that of the wheel left out [m/s2]."""
    angle = guess.at("angle", time)
    pull = np.cos(angle) if axis == "radial" else -np.sin(angle)
    return np.asarray(guess.at(axis, time) * guess.at("speed", time) ** 2 + gravity * pull)
