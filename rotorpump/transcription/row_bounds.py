# SPDX-License-Identifier: BSD-3-Clause
"""Bounds of the program's rows."""

from __future__ import annotations

import numpy as np

from rotorpump.transcription.bounds import Bounds
from rotorpump.transcription.form import Form
from rotorpump.transcription.mesh import FREE, HIGH, Marks, Mesh
from rotorpump.transcription.path import RATE_LIMITED
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.scaling import Scales

SHORTEST = 1e-4
"""Least length of an interval, in time scales or radians."""


def bound_rows(problem: Problem, mesh: Mesh, scales: Scales) -> Bounds:
    """Bounds of the rows, in the order of the program's blocks."""
    form = problem.form
    parts = [_bound_intervals(problem, mesh, scales), _bound_lengths(mesh)]
    if problem.margins:
        # a mass that rests on its stop at the end has none to keep
        rests = mesh.rests[list(problem.margins), -1] != FREE
        wide = np.where(rests, np.inf, 0.0)
        parts.append(Bounds(-wide, 1.0 + wide))
    if form.ratings:
        count = len(form.ratings)
        parts.append(Bounds(np.full(count, -np.inf), np.zeros(count)))
    if problem.goal is not None:
        parts.append(Bounds(np.array([problem.goal.least]), np.array([np.inf])))
    return Bounds(
        np.concatenate([part.lower.ravel() for part in parts]),
        np.concatenate([part.upper.ravel() for part in parts]),
    )


def row_groups(form: Form) -> dict[str, slice]:
    """Places of each group among the rows of an interval."""
    groups, first = {}, 0
    for name, count in form.rows.items():
        groups[name] = slice(first, first + count)
        first += count
    return groups


def _bound_intervals(problem: Problem, mesh: Mesh, scales: Scales) -> Bounds:
    form, groups = problem.form, row_groups(problem.form)
    bounds = Bounds.free(mesh.intervals, sum(form.rows.values()))
    everywhere = slice(None)
    for name in ("wheel", "sums"):
        bounds.limit((everywhere, groups[name]), 0.0, 0.0)
    for name in ("turning", "slacks"):
        bounds.limit((everywhere, groups[name]), 0.0, np.inf)
    if not form.centred:
        # a standstill is the end of its arc
        stops = [
            k - 1
            for arc, k in zip(problem.chain, mesh.edges[1:], strict=True)
            if arc.end == "standstill"
        ]
        bounds.limit((stops, groups["turning"].stop - 1), 0.0, 0.0)
    for k, axis in enumerate(form.axes):
        limits = _limits(problem, scales, axis.name)
        rests = np.flatnonzero(mesh.rests[k] != FREE)
        high = mesh.rests[k, rests] == HIGH
        for name, pair in limits.items():
            group = groups[f"{axis.name} {name}"]
            bounds.limit((everywhere, group), *pair)
            if name in ("force", "line"):
                # a stop bears whatever presses on it, and nothing else
                bounds.lower[rests[high], group] = -np.inf
                bounds.upper[rests[~high], group] = np.inf
            else:
                # the slide's motion is fixed by bounds there: rows on it would be redundant
                bounds.limit((rests, group), -np.inf, np.inf)
        if axis.forceful:
            _free_seated(bounds, groups[f"{axis.name} stroke"], problem, mesh, k)
        if axis.rubs and not form.relaxed:
            _bound_signs(bounds, groups[f"{axis.name} speed"], mesh, k)
        _bound_rated(bounds, groups, axis.name, rests, periodic=problem.start is None)
    return bounds


def _limits(problem: Problem, scales: Scales, axis: str) -> dict[str, tuple[float, float]]:
    """Bounds of the rows of one slide, by group, where the mass is free."""
    slide, sizes = problem.rig.slide(axis), scales.slide(axis)
    top, force = slide.speed / sizes.speed, slide.force / sizes.force
    power = slide.power / (sizes.force * sizes.speed)
    return {
        "path": (0.0, 0.0),
        "stroke": (0.0, 1.0),
        "arrival": (-np.inf, 0.0),
        "speed": (-top, top),
        "stops": (-np.inf, 0.0),
        "force": (-force, force),
        "power": (-power, power),
        "line": (-1.0, 1.0),
    }


def _free_seated(bounds: Bounds, group: slice, problem: Problem, mesh: Mesh, axis: int) -> None:
    """Free the stroke rows next to a seat, where place and speed of the mass are given.

    Such a row holds with equality whatever the other variables are: without an interior, it would
    have no finite multiplier. Where the acceleration is given there as well, both rows do so.
    """
    resting = mesh.rests[axis] != FREE
    start = problem.start
    if start is None:
        before, after = np.roll(resting, 1), np.roll(resting, -1)
    else:
        # the motion begins with the mass at rest, perhaps at an end of its stroke
        before, after = np.append(True, resting[:-1]), np.append(resting[1:], False)
    if problem.form.axes[axis].rung == RATE_LIMITED:
        seated = np.append(False, resting[:-1]) if start is not None else before
        before, after = before | after, after | seated
    bounds.limit((before, group.start), -np.inf, np.inf)
    bounds.limit((after, group.start + 1), -np.inf, np.inf)


def _bound_signs(bounds: Bounds, group: slice, mesh: Mesh, axis: int) -> None:
    """Hold the speed within an interval to the direction in which the mass moves."""
    for sign, side in ((1, bounds.lower), (-1, bounds.upper)):
        chosen = np.flatnonzero((mesh.rests[axis] == FREE) & (mesh.signs[axis] == sign))
        side[chosen, group] = 0.0


def _bound_rated(
    bounds: Bounds, groups: dict[str, slice], axis: str, rests: Marks, *, periodic: bool
) -> None:
    """Rows of a drive whose force changes at a limited rate; none of them otherwise."""
    rate, drive, bearing = (groups[f"{axis} {name}"] for name in ("rate", "drive", "bearing"))
    if rate.stop == rate.start:
        return
    everywhere = slice(None)
    free = slice(rate.start, rate.stop - 1)
    bounds.limit((everywhere, free), -1.0, 1.0)
    bounds.limit((rests, free), -np.inf, np.inf)
    bounds.limit((rests, rate.stop - 1), -1.0, 1.0)
    bounds.limit((rests, bearing), 0.0, np.inf)
    # the drive's force at the end of a free interval, and at its start where no free one ends, is
    # what the motion needs; a rest between the two begins and ends with it
    resting = np.zeros(bounds.lower.shape[0], dtype=bool)
    resting[rests] = True
    before, after = (
        (np.roll(resting, 1), np.roll(resting, -1))
        if periodic
        else (np.append(True, resting[:-1]), np.append(resting[1:], True))
    )
    bounds.limit((~resting & before, drive.start), 0.0, 0.0)
    bounds.limit((~resting, drive.stop - 1), 0.0, 0.0)
    # at the nodes, the force that is a variable there has the bounds already
    force = groups[f"{axis} force"]
    for row in (force.start, force.stop - 1):
        bounds.limit((everywhere, row), -np.inf, np.inf)
    bounds.limit((resting & ~before, bearing.start), -np.inf, np.inf)
    bounds.limit((resting & ~after, bearing.stop - 1), -np.inf, np.inf)
    # what is needed on a stop is not what the drive does
    bounds.limit((rests, groups[f"{axis} force"]), -np.inf, np.inf)
    bounds.limit((rests, groups[f"{axis} line"]), -np.inf, np.inf)


def _bound_lengths(mesh: Mesh) -> Bounds:
    lengths = Bounds.free(mesh.intervals, 2)
    everywhere = slice(None)
    if mesh.flexible:
        lengths.limit((everywhere, 0), 0.0, np.inf)
        lengths.limit((everywhere, 1), -np.inf, 0.0)
    else:
        lengths.limit((everywhere, 0), 0.0, 0.0)
        lengths.limit((everywhere, 1), SHORTEST, np.inf)
        # The lengths of an arc sum to the arc: its last one follows from the others.
        lengths.limit((mesh.edges[1:] - 1, 0), -np.inf, np.inf)
    return lengths
