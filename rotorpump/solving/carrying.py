# SPDX-License-Identifier: BSD-3-Clause
"""Multipliers of a solution carried to a finer mesh.

A multiplier of an equation that is collocated is a costate times a quadrature weight, whatever the
length of the interval; one of an equation between neighbouring nodes is a costate; one of a limit
is a density times a length, and is shared by the pieces of an interval.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rotorpump.solving.ipopt import Multipliers, Outcome
from rotorpump.transcription.division import Division
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.program import Program
from rotorpump.transcription.row_bounds import row_groups

Array = NDArray[np.float64]


def carry_multipliers(
    coarse: Program, outcome: Outcome, fine: Program, division: Division
) -> Multipliers:
    """Estimate the multipliers on a finer mesh.

    Parameters
    ----------
    coarse, fine : Program
        The same problem on both meshes.
    outcome : Outcome
        Solution on the coarse mesh.
    division : Division
        Where the fine intervals come from.
    """
    split = _Split(division)
    return Multipliers(
        _variable_multipliers(coarse, outcome.variable_multipliers, fine, split),
        _row_multipliers(coarse, outcome.row_multipliers, fine, split),
    )


class _Split:
    """Where the fine intervals come from."""

    def __init__(self, division: Division) -> None:
        self.parent, self.rank = division.parent, division.rank
        self.pieces = division.pieces.astype(float)
        self.begin = division.parent + division.begin
        """Place of each fine interval's start, in coarse intervals."""

    def shared(self, values: Array) -> Array:
        """Values of the coarse intervals (first axis), shared by their pieces."""
        shape = (-1,) + (1,) * (values.ndim - 1)
        return np.asarray(values[self.parent] / self.pieces.reshape(shape))

    def at_ends(self, values: Array) -> Array:
        """Values at the right ends of the coarse intervals, interpolated at the fine ends."""
        ends = np.arange(1, values.shape[0] + 1, dtype=float)
        places = self.begin + 1.0 / self.pieces
        columns = [np.interp(places, ends, column) for column in values.T]
        return np.column_stack(columns)

    def at_points(self, values: Array, points: Array) -> Array:
        """Values at points within the coarse intervals, interpolated at those of the fine ones."""
        places = (np.arange(values.shape[0])[:, None] + points).ravel()
        wanted = self.begin[:, None] + points / self.pieces[:, None]
        return np.asarray(np.interp(wanted, places, values.ravel()))


def _row_multipliers(coarse: Program, old: Array, fine: Program, split: _Split) -> Array:
    form = coarse.problem.form
    nodes = radau_nodes(form.degree)
    points, weights = nodes.points[1:], nodes.weights
    count = sum(form.rows.values())
    intervals = coarse.mesh.intervals
    table = old[: intervals * count].reshape(intervals, count)
    new = np.zeros((fine.mesh.intervals, count))
    for name, group in row_groups(form).items():
        if group.stop == group.start:
            continue
        kind = name.rpartition(" ")[2]
        if kind == "wheel":
            for offset in (0, 1):
                rows = slice(group.start + offset, group.stop, 2)
                costate = split.at_points(table[:, rows] / weights, points)
                new[:, rows] = costate * weights
        elif kind in ("path", "sums", "drive"):
            new[:, group] = split.at_ends(table[:, group])
        else:
            new[:, group] = split.shared(table[:, group])
    lengths = old[intervals * count : intervals * (count + 2)].reshape(intervals, 2)
    rest = old[intervals * (count + 2) :]
    return np.concatenate([new.ravel(), split.shared(lengths).ravel(), rest])


def _variable_multipliers(coarse: Program, old: Array, fine: Program, split: _Split) -> Array:
    new = np.zeros(fine.layout.variables)
    if fine.problem.form.inner:
        new[fine.layout.inner] = split.shared(old[coarse.layout.inner])
    # a bound at a node belongs to half of each interval beside it
    kept = np.flatnonzero(split.rank == 0)
    right = old[coarse.layout.node[1:]]
    new[fine.layout.node[1:]] = split.shared(right)
    new[fine.layout.node[:-1][kept]] = old[coarse.layout.node[:-1]] / split.pieces[kept][:, None]
    new[fine.layout.node[-1]] = old[coarse.layout.node[-1]]
    return new
