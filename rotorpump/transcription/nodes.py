# SPDX-License-Identifier: BSD-3-Clause
"""Collocation nodes of one interval."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Nodes:
    """Collocation nodes on the unit interval.

    Parameters
    ----------
    points : ndarray, shape (d + 1,)
        The start 0 followed by the d collocation points, the last of which is 1.
    slopes : ndarray, shape (d, d + 1)
        Row j gives the derivative at collocation point j from the values at all points.
    weights : ndarray, shape (d,)
        Quadrature weights of the collocation points.
    start_slope : ndarray, shape (d + 1,)
        The derivative at the start from the values at all points.
    """

    points: Array
    slopes: Array
    weights: Array
    start_slope: Array

    @property
    def degree(self) -> int:
        """Number of collocation points."""
        return self.points.size - 1


def radau_nodes(degree: int) -> Nodes:
    """Nodes of the Radau IIA method with ``degree`` points; its order is 2 ``degree`` - 1.

    Notes
    -----
    The points are 1 and the roots of the Jacobi polynomial P^(1,0) mapped to (0, 1)
    (Hairer & Wanner, Solving Ordinary Differential Equations II, section IV.5; citation from
    memory).
    """
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.special import roots_jacobi  # noqa: PLC0415

    inner = (roots_jacobi(degree - 1, 1.0, 0.0)[0] + 1.0) / 2.0 if degree > 1 else np.empty(0)
    points = np.concatenate(([0.0], inner, [1.0]))
    weights = np.linalg.solve(
        np.vander(points[1:], increasing=True).T, 1.0 / np.arange(1, degree + 1)
    )
    slopes = _slopes(points)
    return Nodes(points, slopes[1:], weights, slopes[0])


def lagrange_basis(nodes: Sequence[Any], place: Any) -> list[Any]:
    """Values at ``place`` of the Lagrange polynomials on ``nodes``, numbers or symbols."""
    basis = []
    for j, own in enumerate(nodes):
        value: Any = 1.0
        for i, other in enumerate(nodes):
            if i != j:
                value = value * (place - other) / (own - other)
        basis.append(value)
    return basis


def _slopes(points: Array) -> Array:
    """Differentiation matrix of the Lagrange polynomial through ``points`` (barycentric form)."""
    gaps = points[:, None] - points[None, :]
    np.fill_diagonal(gaps, 1.0)
    barycentric = 1.0 / gaps.prod(axis=1)
    matrix = barycentric[None, :] / barycentric[:, None] / gaps
    np.fill_diagonal(matrix, 0.0)
    np.fill_diagonal(matrix, -matrix.sum(axis=1))
    return np.asarray(matrix)
