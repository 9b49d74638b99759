# SPDX-License-Identifier: BSD-3-Clause
"""The nonlinear program of a problem on a mesh: functions, parameters, bounds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.transcription.blocks import Block, Functions, assemble
from rotorpump.transcription.bounds import Bounds, bound_rows, bound_variables
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.interval import SHARED, TIME, interval_kernel
from rotorpump.transcription.layout import Layout
from rotorpump.transcription.mesh import Mesh
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.path import FORCE_LIMITED, INSTANT
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.scaling import Scales
from rotorpump.transcription.terminal import (
    end_kernel,
    evenness_kernel,
    length_kernel,
    margin_kernel,
)

Array = NDArray[np.float64]

FLEXIBILITY = (0.2, 1.8)
"""Least and largest length of a flexible interval, in nominal lengths."""

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
        rig = self.problem.rig
        force = rig.radial.force if self.problem.form.rung == FORCE_LIMITED else 1.0
        shared = [*Constants.of(rig), *self.scales, force, self.relaxation]
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
        form, layout = self.problem.form, self.layout
        intervals = Block(
            interval_kernel(form), layout.places, self.directions[:, None].astype(float)
        )
        least, largest = FLEXIBILITY if self.mesh.flexible else (1.0, 0.0)
        shares = np.concatenate(self.mesh.shares)
        lengths = Block(
            length_kernel(),
            self._length_places,
            np.column_stack([least * shares, largest * shares]),
        )
        blocks = [intervals, lengths]
        if self.problem.keeps_margin:
            blocks.append(Block(margin_kernel(form), layout.node[-1:], np.zeros((1, 0))))
        if self.problem.goal is not None:
            kernel = end_kernel(self.problem.goal.name, form)
            blocks.append(Block(kernel, self._end_places(at_start=False), np.ones((1, 1))))
        return blocks

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
        which = 0 if self.problem.form.independent == TIME else 1
        nodes, edges = self.layout.node[:, which], self.mesh.edges
        starts = np.repeat(nodes[edges[:-1]], self.mesh.counts)
        ends = np.repeat(nodes[edges[1:]], self.mesh.counts)
        return np.column_stack([nodes[:-1], nodes[1:], starts, ends])

    def _end_places(self, *, at_start: bool) -> NDArray[np.intp]:
        # The outer one of the two controls comes last.
        if at_start:
            return np.concatenate([self.layout.node[0], self.layout.controls[0, ::-1]])[None, :]
        return np.concatenate([self.layout.node[-1], self.layout.controls[-1]])[None, :]

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
        first, momentum = layout.collocated(form)
        z = np.zeros(layout.variables)
        node_times = np.append(times[:, 0], times[-1, -1])
        z[layout.node[:, 0]] = node_times / scales.time
        z[layout.node[:, 1]] = np.append(angle_at[:, 0], angle_at[-1, -1])
        z[first] = angle_at if form.independent == TIME else times / scales.time
        z[momentum] = guess.at("momentum", times) / scales.momentum
        sides = np.column_stack([times[:, 0], times[:, -1]])
        spans = np.maximum(np.diff(sides, axis=1), 1e-9)
        radial, speed = guess.at("radial", sides), guess.at("radial_speed", sides)
        if form.rung == INSTANT:
            controls = radial
        elif form.rung == FORCE_LIMITED:
            controls = np.repeat(np.diff(speed, axis=1) / spans, 2, axis=1)
        else:
            controls = np.repeat(np.diff(radial, axis=1) / spans, 2, axis=1)
        for order, column in zip(range(form.rung), ("radial", "radial_speed"), strict=False):
            z[layout.node[:, 3 + order]] = scales.scale_slide(order, guess.at(column, node_times))
        z[layout.controls] = scales.scale_slide(form.rung, controls)
        return self.variable_bounds.clip(z)
