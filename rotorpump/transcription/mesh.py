# SPDX-License-Identifier: BSD-3-Clause
"""The mesh: how each arc is divided into intervals, and which of them rest on an end stop."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

FREE, HIGH, LOW = 0, 1, -1
"""The mass moves freely along an axis, or rests on the high or the low end stop."""

Marks = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Mesh:
    """Division of a chain of arcs into intervals.

    Parameters
    ----------
    shares : tuple of ndarray
        For each arc, the nominal length of each interval as a share of the arc; sums to one.
    rests : ndarray of int, shape (axes, intervals)
        FREE, HIGH or LOW for each slide and interval.
    signs : ndarray of int, shape (axes, intervals)
        Direction in which each slide moves in each interval; it matters where the mass rubs.
    flexible : bool
        Whether interval lengths may depart from the nominal ones, so that the ends of intervals
        move to the switches.
    """

    shares: tuple[Array, ...]
    rests: Marks
    signs: Marks
    flexible: bool

    @classmethod
    def uniform(cls, arcs: int, intervals: int, axes: int, *, flexible: bool) -> Mesh:
        """Divide each arc into equal intervals, none of them resting."""
        share = np.full(intervals, 1.0 / intervals)
        marks = np.zeros((axes, arcs * intervals), dtype=np.intp)
        return cls((share,) * arcs, marks, marks, flexible)

    @property
    def intervals(self) -> int:
        """Number of intervals."""
        return int(self.rests.shape[1])

    @property
    def counts(self) -> tuple[int, ...]:
        """Number of intervals of each arc."""
        return tuple(share.size for share in self.shares)

    @cached_property
    def edges(self) -> NDArray[np.intp]:
        """Nodes at which arcs meet, shape (arcs + 1,)."""
        return np.concatenate(([0], np.cumsum(self.counts))).astype(np.intp)

    def node_times(self, ends: Sequence[float]) -> Array:
        """Place the nodes at their nominal shares of arcs that end at the given times."""
        starts = (0.0, *ends[:-1])
        pieces = [
            a + (b - a) * np.concatenate(([0.0], np.cumsum(share[:-1])))
            for a, b, share in zip(starts, ends, self.shares, strict=True)
        ]
        return np.append(np.concatenate(pieces), ends[-1])

    def with_pattern(self, rests: Marks, signs: Marks, *, flexible: bool) -> Mesh:
        """Return the same division with other resting intervals and directions."""
        return Mesh(self.shares, rests, signs, flexible)

    def settled(self, nodes: Array) -> Mesh:
        """Take the lengths that a solution found, between its ``nodes``, as the nominal ones."""
        lengths = np.diff(nodes)
        pieces = np.split(lengths, self.edges[1:-1])
        return replace(self, shares=tuple(p / p.sum() for p in pieces))

    def split(self, pieces: Marks) -> Mesh:
        """Divide each interval into so many equal pieces."""
        shares = [
            np.repeat(share / count, count)
            for share, count in zip(self.shares, np.split(pieces, self.edges[1:-1]), strict=True)
        ]
        rests, signs = (np.repeat(marks, pieces, axis=1) for marks in (self.rests, self.signs))
        return Mesh(tuple(shares), rests, signs, self.flexible)
