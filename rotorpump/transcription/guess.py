# SPDX-License-Identifier: BSD-3-Clause
"""A motion from which the solver starts, as dense samples."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Guess:
    """Samples of a motion, linear in between.

    Parameters
    ----------
    time, angle, momentum, radial, radial_speed : ndarray, shape (n,)
        Time from zero, increasing [s], angle [rad], angular momentum [kg m2/s], position [m] and
        speed [m/s] of the mass.
    """

    time: Array
    angle: Array
    momentum: Array
    radial: Array
    radial_speed: Array

    @classmethod
    def from_trajectory(cls, trajectory: Trajectory, *, points: int = 8) -> Guess:
        """Sample a trajectory densely, ``points`` times between neighbouring nodes."""
        nodes = np.unique(trajectory.time)
        shares = np.arange(points) / points
        times = np.append((nodes[:-1, None] + shares * np.diff(nodes)[:, None]).ravel(), nodes[-1])
        dense = trajectory.at(times)
        return cls(
            dense.time - dense.time[0],
            dense.angle,
            dense.momentum,
            dense.radial,
            dense.radial_speed,
        )

    def at(self, name: str, time: Array) -> Array:
        """Interpolate the quantity called ``name``."""
        return np.asarray(np.interp(time, self.time, getattr(self, name)))

    def cut(self, start: float, end: float) -> Guess:
        """Return the motion between two times, its time counted from the first."""
        inside = self.time[(self.time > start) & (self.time < end)]
        times = np.concatenate(([start], inside, [end]))
        columns = (self.at(n, times) for n in ("angle", "momentum", "radial", "radial_speed"))
        return Guess(times - start, *columns)
