# SPDX-License-Identifier: BSD-3-Clause
"""A motion of the rig as nodes in time, with interpolation between them."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rotorpump.physics.state import Slides

Array = NDArray[np.float64]
Indices = NDArray[np.intp]

HELD = frozenset(
    {"radial_speed", "radial_force", "tangential_speed", "tangential_force", "axle_load"}
)
"""Quantities that may jump at the start of an interval: its first node does not belong to it."""

MIRRORED = (
    "angle",
    "speed",
    "momentum",
    "tangential",
    "tangential_speed",
    "tangential_force",
)
"""Quantities that change their sign when the rig is seen from the other side."""


@dataclass(frozen=True, eq=False)
class Trajectory:
    """A motion of the rig.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Time of each node [s], not decreasing; two nodes at one time are a jump.
    angle, speed, momentum : ndarray, shape (n,)
        Wheel angle from hanging [rad], wheel speed [rad/s], angular momentum [kg m2/s].
    radial, radial_speed, radial_force : ndarray, shape (n,)
        Radial position [m] and speed [m/s] of the mass, force of the drive on it [N].
    tangential, tangential_speed, tangential_force : ndarray, shape (n,)
        The same along the tangential axis [m, m/s, N].
    energy : ndarray, shape (n,)
        Mechanical energy above rest [J].
    axle_load : ndarray, shape (n,)
        Magnitude of the axle's reaction [N].
    breaks : ndarray of int, shape (m + 1,)
        Nodes at which intervals meet; every quantity is one polynomial within an interval.
    arcs : ndarray of int, shape (k + 1,)
        Nodes at which arcs of the motion meet, a subset of ``breaks``.

    Notes
    -----
    Positions, momenta and energies are interpolated through all nodes of an interval, both ends
    included. Forces and slide speeds may jump where intervals meet: at a break, the node holds the
    value on its left, and the interval on its right uses its own nodes alone.
    """

    time: Array
    angle: Array
    speed: Array
    momentum: Array
    radial: Array
    radial_speed: Array
    radial_force: Array
    tangential: Array
    tangential_speed: Array
    tangential_force: Array
    energy: Array
    axle_load: Array
    breaks: Indices
    arcs: Indices

    @classmethod
    def quantities(cls) -> tuple[str, ...]:
        """Names of the sampled quantities, time first."""
        return tuple(f.name for f in fields(cls) if f.name not in {"breaks", "arcs"})

    @property
    def duration(self) -> float:
        """Time from the first to the last node [s]."""
        return float(self.time[-1] - self.time[0])

    @property
    def slides(self) -> Slides:
        """Place and speed of the mass at the nodes [m, m/s]."""
        return Slides(self.radial, self.radial_speed, self.tangential, self.tangential_speed)

    def mirrored(self) -> Trajectory:
        """Return the motion as seen from the other side, that of the mirrored rig."""
        turned = {name: -getattr(self, name) for name in MIRRORED}
        return replace(self, **turned)

    def columns(self) -> dict[str, Array]:
        """Return every sampled quantity by its name, time first."""
        return {name: getattr(self, name) for name in self.quantities()}

    def at(self, time: ArrayLike) -> Trajectory:
        """Interpolate at the given times.

        Parameters
        ----------
        time : array_like, shape (n,) or scalar
            Times within the motion, not decreasing [s].

        Returns
        -------
        Trajectory
            Its nodes are the given times; at a jump, the value after it. In a motion of no
            duration, every value is that of its last node.

        Raises
        ------
        ValueError
            If a time lies outside the motion.
        """
        wanted = np.atleast_1d(np.asarray(time, dtype=float))
        slack = 1e-9 * max(1.0, abs(float(self.time[-1])))
        if wanted.min() < self.time[0] - slack or wanted.max() > self.time[-1] + slack:
            raise ValueError(
                f"time: must lie within {self.time[0]:g} and {self.time[-1]:g};"
                f" received {wanted.min():g} to {wanted.max():g}"
            )
        wanted = np.clip(wanted, self.time[0], self.time[-1])
        values = {name: np.empty_like(wanted) for name in self.quantities()}
        values["time"] = wanted
        if self.duration == 0.0:
            for name in self.quantities()[1:]:
                values[name].fill(getattr(self, name)[-1])
        else:
            self._interpolate(wanted, values)
        ends = np.arange(wanted.size, dtype=np.intp)
        return Trajectory(**values, breaks=ends, arcs=ends[[0, -1]])

    def sample(self, rate: float) -> Trajectory:
        """Sample uniformly from the start at ``rate`` [Hz]; the last sample is not after the end.

        Raises
        ------
        ValueError
            If the rate is not positive and finite.
        """
        if not (np.isfinite(rate) and rate > 0.0):
            raise ValueError(f"rate: must be greater than 0; received {rate!r}")
        count = int(np.floor(self.duration * rate * (1.0 + 1e-12))) + 1
        return self.at(self.time[0] + np.arange(count) / rate)

    @cached_property
    def _last_interval(self) -> int:
        lengths = np.diff(self.time[self.breaks])
        return int(np.flatnonzero(lengths > 0.0)[-1])

    def _interpolate(self, wanted: Array, values: dict[str, Array]) -> None:
        """Fill ``values`` for times within the motion, interval by interval."""
        edges = self.time[self.breaks]
        where = np.searchsorted(edges, wanted, side="right") - 1
        where = np.minimum(where, self._last_interval)
        for interval in np.unique(where):
            chosen = where == interval
            nodes = np.arange(self.breaks[interval], self.breaks[interval + 1] + 1)
            full = _lagrange(self.time[nodes], wanted[chosen])
            own = _lagrange(self.time[nodes[1:]], wanted[chosen])
            for name in self.quantities()[1:]:
                source = getattr(self, name)
                values[name][chosen] = (
                    own @ source[nodes[1:]] if name in HELD else full @ source[nodes]
                )


def _lagrange(nodes: Array, wanted: Array) -> Array:
    """Values of the Lagrange polynomials on ``nodes`` at ``wanted``, shape (wanted, nodes)."""
    basis = np.ones((wanted.size, nodes.size))
    for j in range(nodes.size):
        for i in range(nodes.size):
            if i != j:
                basis[:, j] *= (wanted - nodes[i]) / (nodes[j] - nodes[i])
    return basis
