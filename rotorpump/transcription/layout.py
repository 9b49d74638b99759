# SPDX-License-Identifier: BSD-3-Clause
"""Where each quantity stands in the vector of variables."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.transcription.interval import TIME, Form

Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Layout:
    """Places of nodes and inner variables.

    Parameters
    ----------
    variables : int
        Length of the vector.
    node : ndarray of int, shape (intervals + 1, variables of a node)
        Places of each node's variables. In a periodic motion the last node has only some
        variables of its own and shares the rest with the first.
    inner : ndarray of int, shape (intervals, inner variables)
        Places of each interval's inner variables.
    """

    variables: int
    node: Indices
    inner: Indices

    @classmethod
    def of(cls, form: Form, intervals: int, *, own_last: int | None = None) -> Layout:
        """Lay out a chain of intervals, node by node.

        The last node has its leading ``own_last`` variables (all by default) of its own.
        """
        width = form.node + form.inner
        first = np.arange(intervals + 1)[:, None] * width
        node = first + np.arange(form.node)
        inner = first[:-1] + form.node + np.arange(form.inner)
        last = form.node if own_last is None else own_last
        node[-1, last:] = node[0, last:]
        return cls(intervals * width + last, node, inner)

    @property
    def intervals(self) -> int:
        """Number of intervals."""
        return int(self.inner.shape[0])

    @property
    def places(self) -> Indices:
        """Places that the interval kernel takes, shape (intervals, variables)."""
        return np.hstack([self.node[:-1], self.node[1:], self.inner])

    @property
    def controls(self) -> Indices:
        """Places of the control at both ends of each interval, shape (intervals, 2)."""
        return self.inner[:, -2:]

    def collocated(self, form: Form) -> tuple[Indices, Indices]:
        """Places of the two collocated quantities at all points of each interval.

        Returns
        -------
        first, momentum : ndarray of int, shape (intervals, degree + 1)
            Angle (time form) or time (angle form), and momentum.
        """
        which = 1 if form.independent == TIME else 0
        last = 2 * (form.degree - 1)
        first = np.column_stack(
            [self.node[:-1, which], self.inner[:, 0:last:2], self.node[1:, which]]
        )
        momentum = np.column_stack([self.node[:-1, 2], self.inner[:, 1:last:2], self.node[1:, 2]])
        return first, momentum
