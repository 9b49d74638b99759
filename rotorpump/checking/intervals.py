# SPDX-License-Identifier: BSD-3-Clause
"""The polynomials of a trajectory, evaluated at many points of every interval at once."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.state import Slides
from rotorpump.solution.trajectory import HELD, Trajectory

QUADRATURE_POINTS = 8

Array = NDArray[np.float64]
Indices = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class _Group:
    """Intervals with the same number of nodes, and their Lagrange polynomials."""

    rows: Indices
    nodes: Indices
    times: Array
    full: Array
    own: Array


class IntervalSamples:
    """Every quantity at the same places of each interval that has a length.

    Parameters
    ----------
    trajectory : Trajectory
        The motion.
    places : ndarray, shape (p,)
        Places within an interval, 0 at its start and 1 at its end.

    Attributes
    ----------
    time : ndarray, shape (k, p)
        Time of each sample [s]; one row per interval of positive length.
    length : ndarray, shape (k, 1)
        Length of each interval [s].

    Notes
    -----
    Held quantities use the interval's own nodes alone, as the trajectory's interpolation does.
    """

    def __init__(self, trajectory: Trajectory, places: Array) -> None:
        self._trajectory = trajectory
        breaks = trajectory.breaks
        edges = trajectory.time[breaks]
        kept = np.flatnonzero(np.diff(edges) > 0.0)
        self.length = np.diff(edges)[kept][:, None]
        self.time = edges[kept][:, None] + self.length * places
        counts = np.diff(breaks)[kept]
        self._groups = []
        for count in np.unique(counts):
            rows = np.flatnonzero(counts == count)
            nodes = breaks[kept[rows]][:, None] + np.arange(count + 1)
            full = _lagrange(trajectory.time[nodes], self.time[rows])
            own = _lagrange(trajectory.time[nodes[:, 1:]], self.time[rows])
            self._groups.append(_Group(rows, nodes, self.time[rows], full, own))

    def column(self, name: str) -> Array:
        """Return one quantity at every sample, shape (k, p), in its SI unit."""
        source = getattr(self._trajectory, name)
        values = np.empty_like(self.time)
        for group in self._groups:
            basis, nodes = (
                (group.own, group.nodes[:, 1:]) if name in HELD else (group.full, group.nodes)
            )
            values[group.rows] = np.einsum("rpn,rn->rp", basis, source[nodes])
        return values

    def rate(self, name: str) -> Array:
        """Return the rate of one quantity at every sample, shape (k, p), in its SI unit by s."""
        source = getattr(self._trajectory, name)
        values = np.empty_like(self.time)
        for group in self._groups:
            nodes = group.nodes[:, 1:] if name in HELD else group.nodes
            basis = _lagrange_rates(self._trajectory.time[nodes], group.times)
            values[group.rows] = np.einsum("rpn,rn->rp", basis, source[nodes])
        return values

    @property
    def slides(self) -> Slides:
        """Place and speed of the mass at every sample, each of shape (k, p) [m, m/s]."""
        return Slides(
            self.column("radial"),
            self.column("radial_speed"),
            self.column("tangential"),
            self.column("tangential_speed"),
        )


def gauss_samples(trajectory: Trajectory) -> tuple[IntervalSamples, Array]:
    """Return samples at the Gauss points of every interval, and their weights [s]."""
    places, shares = np.polynomial.legendre.leggauss(QUADRATURE_POINTS)
    samples = IntervalSamples(trajectory, 0.5 * (places + 1.0))
    return samples, 0.5 * shares * samples.length


def _lagrange(nodes: Array, wanted: Array) -> Array:
    """Lagrange polynomials on each row's nodes (r, n) at its times (r, p), shape (r, p, n)."""
    count = nodes.shape[1]
    basis = np.ones((*wanted.shape, count))
    for j in range(count):
        for i in range(count):
            if i != j:
                basis[:, :, j] *= (wanted - nodes[:, i, None]) / (nodes[:, j] - nodes[:, i])[
                    :, None
                ]
    return basis


def _lagrange_rates(nodes: Array, wanted: Array) -> Array:
    """Rates of the Lagrange polynomials, as `_lagrange`."""
    count = nodes.shape[1]
    rates = np.zeros((*wanted.shape, count))
    for j in range(count):
        for k in range(count):
            if k == j:
                continue
            term = np.ones(wanted.shape) / (nodes[:, j] - nodes[:, k])[:, None]
            for i in range(count):
                if i not in {j, k}:
                    term *= (wanted - nodes[:, i, None]) / (nodes[:, j] - nodes[:, i])[:, None]
            rates[:, :, j] += term
    return rates


@dataclass(frozen=True)
class Polynomial:
    """A polynomial in (t - middle) / half, highest power first; plain floats, for speed."""

    middle: float
    half: float
    coefficients: tuple[float, ...]

    def __call__(self, time: float) -> float:
        """Value at a time [s]."""
        place = (time - self.middle) / self.half
        value = 0.0
        for coefficient in self.coefficients:
            value = value * place + coefficient
        return value

    def rate(self) -> Polynomial:
        """Return its rate, a polynomial of one degree less."""
        degree = len(self.coefficients) - 1
        rates = [(degree - k) * value / self.half for k, value in enumerate(self.coefficients[:-1])]
        return Polynomial(self.middle, self.half, tuple(rates) or (0.0,))


def held_polynomials(trajectory: Trajectory, name: str) -> list[Polynomial | None]:
    """Polynomial of a held quantity in each interval; None where an interval has no length."""
    edges = trajectory.time[trajectory.breaks]
    found: list[Polynomial | None] = []
    for k, (begin, end) in enumerate(pairwise(edges)):
        if not end > begin:
            found.append(None)
            continue
        own = slice(trajectory.breaks[k] + 1, trajectory.breaks[k + 1] + 1)
        middle, half = 0.5 * (begin + end), 0.5 * (end - begin)
        powers = np.vander((trajectory.time[own] - middle) / half)
        coefficients = np.linalg.solve(powers, getattr(trajectory, name)[own])
        found.append(Polynomial(float(middle), float(half), tuple(coefficients.tolist())))
    return found
