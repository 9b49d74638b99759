# SPDX-License-Identifier: BSD-3-Clause
"""Where each quantity stands in the vector of variables."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.transcription.form import TIME, Form

Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Layout:
    """Places of nodes and inner variables.

    Parameters
    ----------
    form : Form
        Structure of the intervals.
    variables : int
        Length of the vector.
    node : ndarray of int, shape (intervals + 1, variables of a node)
        Places of each node's variables. In a periodic motion the last node has only some
        variables of its own and shares the rest with the first.
    inner : ndarray of int, shape (intervals, inner variables)
        Places of each interval's inner variables.
    """

    form: Form
    variables: int
    node: Indices
    inner: Indices

    @classmethod
    def of(cls, form: Form, intervals: int, *, own_last: int | None = None) -> Layout:
        """Lay out a chain of intervals, node by node.

        The last node has its leading ``own_last`` variables (all by default) of its own.
        """
        size = len(form.node)
        width = size + form.inner
        first = np.arange(intervals + 1)[:, None] * width
        node = first + np.arange(size)
        inner = first[:-1] + size + np.arange(form.inner)
        last = size if own_last is None else own_last
        node[-1, last:] = node[0, last:]
        return cls(form, intervals * width + last, node, inner)

    @property
    def intervals(self) -> int:
        """Number of intervals."""
        return int(self.inner.shape[0])

    @property
    def places(self) -> Indices:
        """Places that the interval kernel takes, shape (intervals, variables)."""
        return np.hstack([self.node[:-1], self.node[1:], self.inner])

    def nodes(self, name: str) -> Indices:
        """Places of one quantity at all nodes, shape (intervals + 1,)."""
        return np.asarray(self.node[:, self.form.index(name)])

    def controls(self, axis: int) -> Indices:
        """Places of a slide's control at both ends of each interval, shape (intervals, 2 or 0)."""
        return np.asarray(self.inner[:, self.form.control(axis)])

    @property
    def slacks(self) -> Indices:
        """Places of the positive parts of power, shape (intervals, degree times axes, or 0)."""
        return np.asarray(self.inner[:, self.form.inner - self.form.slacks :])

    @property
    def collocated(self) -> tuple[Indices, Indices]:
        """Places of the two collocated quantities at all points of each interval.

        Returns
        -------
        first, momentum : ndarray of int, shape (intervals, degree + 1)
            Angle (time form) or time (angle form), and momentum.
        """
        leading = "angle" if self.form.independent == TIME else "time"
        last = self.form.collocated

        def points(name: str, offset: int) -> Indices:
            nodes = self.nodes(name)
            return np.column_stack([nodes[:-1], self.inner[:, offset:last:2], nodes[1:]])

        return points(leading, 0), points("momentum", 1)
