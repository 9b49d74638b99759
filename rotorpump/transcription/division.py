# SPDX-License-Identifier: BSD-3-Clause
"""The same motion on a finer mesh, every interval divided into equal pieces."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.transcription.form import TIME
from rotorpump.transcription.nodes import lagrange_basis, radau_nodes
from rotorpump.transcription.path import RATE_LIMITED
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import SlidesWithin

Array = NDArray[np.float64]
Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Division:
    """Where the intervals of a finer mesh come from.

    Parameters
    ----------
    parent : ndarray of int, shape (fine intervals,)
        The coarse interval of which each one is a piece.
    rank : ndarray of int, shape (fine intervals,)
        Which piece it is.
    pieces : ndarray of int, shape (fine intervals,)
        Number of pieces of its parent.
    """

    parent: Indices
    rank: Indices
    pieces: Indices

    @classmethod
    def of(cls, pieces: Indices) -> Division:
        """Divide each interval into so many pieces."""
        parent = np.repeat(np.arange(pieces.size), pieces)
        first = np.concatenate(([0], np.cumsum(pieces)[:-1]))
        return cls(parent, np.arange(parent.size) - first[parent], pieces[parent])

    @property
    def begin(self) -> Array:
        """Share of its parent at which each piece begins, shape (fine intervals,)."""
        return np.asarray(self.rank / self.pieces)


def divide_variables(coarse: Program, z: Array, fine: Program, division: Division) -> Array:
    """Return the scaled variables on a finer mesh that describe the same motion.

    Parameters
    ----------
    coarse, fine : Program
        The same problem on both meshes.
    z : ndarray, shape (n,)
        Scaled variables on the coarse mesh.
    division : Division
        Where the fine intervals come from.
    """
    form, old, new = coarse.problem.form, coarse.layout, fine.layout
    points = radau_nodes(form.degree).points
    shares = division.begin[:, None] + points / division.pieces[:, None]
    basis = np.stack(lagrange_basis(points.tolist(), shares), axis=-1)
    out = np.zeros(new.variables)
    for fine_places, places in zip(new.collocated, old.collocated, strict=True):
        values = np.einsum("kpj,kj->kp", basis, z[places][division.parent])
        out[fine_places] = values
    other = "time" if form.independent == TIME else "angle"
    for name in (other, *form.sums):
        nodes = z[old.nodes(name)]
        ends = nodes[:-1][division.parent][:, None] * (1.0 - shares)
        ends = ends + nodes[1:][division.parent][:, None] * shares
        out[new.nodes(name)] = np.append(ends[:, 0], ends[-1, -1])
    if form.slacks:
        out[new.slacks] = z[old.slacks][division.parent]
    _divide_slides(coarse, z, fine, division, out)
    return fine.variable_bounds.clip(out)


def _divide_slides(
    coarse: Program, z: Array, fine: Program, division: Division, out: Array
) -> None:
    """Evaluate the slides' motion where the pieces meet."""
    new, scales = fine.layout, fine.scales
    time = out[new.nodes("time")] * scales.time
    start = z[coarse.layout.nodes("time")[:-1]] * scales.time
    sides = np.column_stack([time[:-1], time[1:]]) - start[division.parent][:, None]
    within = SlidesWithin.of(coarse, z).pieces(division.parent)
    for k, axis in enumerate(coarse.problem.form.axes):
        path, sizes = within.paths[axis.name], scales.slide(axis.name)
        orders = (path.position(sides), path.speed(sides), path.acceleration(sides))
        for order, name in enumerate(axis.node[:3]):
            values = sizes.scaled(order, orders[order])
            out[new.nodes(name)] = np.append(values[:, 0], values[-1, 1])
        if axis.rung == RATE_LIMITED:
            nodes = z[coarse.layout.nodes(axis.node[3])]
            share = division.begin
            begin = nodes[:-1][division.parent] * (1.0 - share) + nodes[1:][division.parent] * share
            out[new.nodes(axis.node[3])] = np.append(begin, nodes[-1])
        else:
            out[new.controls(k)] = sizes.scaled(axis.rung, orders[axis.rung])
