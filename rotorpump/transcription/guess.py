# SPDX-License-Identifier: BSD-3-Clause
"""A motion from which the solver starts, as dense samples."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import wheel_speed
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Guess:
    """Samples of a motion, linear in between.

    Parameters
    ----------
    time, angle, momentum, speed : ndarray, shape (n,)
        Time from zero, increasing [s], wheel angle [rad], angular momentum [kg m2/s] and wheel
        speed [rad/s].
    radial, radial_speed, tangential, tangential_speed : ndarray, shape (n,)
        Position [m] and speed [m/s] of the mass along both axes.
    """

    time: Array
    angle: Array
    momentum: Array
    speed: Array
    radial: Array
    radial_speed: Array
    tangential: Array
    tangential_speed: Array

    @classmethod
    def from_states(cls, rig: Rig, time: Array, states: Array) -> Guess:
        """Take samples of angle, momentum, and place and speed of the mass, shape (6, n)."""
        angle, momentum, *slides = states
        speed = wheel_speed(Constants.of(rig), momentum, Slides(*slides))
        return cls(time, angle, momentum, np.asarray(speed), *slides)

    @classmethod
    def from_trajectory(cls, trajectory: Trajectory, *, points: int = 4) -> Guess:
        """Sample a trajectory densely, ``points`` times between neighbouring nodes."""
        nodes = np.unique(trajectory.time)
        shares = np.arange(points) / points
        times = np.append((nodes[:-1, None] + shares * np.diff(nodes)[:, None]).ravel(), nodes[-1])
        dense = trajectory.at(times)
        columns = (getattr(dense, field.name) for field in fields(cls)[1:])
        return cls(dense.time - dense.time[0], *columns)

    def at(self, name: str, time: Array) -> Array:
        """Interpolate the quantity called ``name``."""
        return np.asarray(np.interp(time, self.time, getattr(self, name)))

    def cut(self, start: float, end: float) -> Guess:
        """Return the motion between two times, its time counted from the first."""
        inside = self.time[(self.time > start) & (self.time < end)]
        times = np.concatenate(([start], inside, [end]))
        columns = (self.at(field.name, times) for field in fields(self)[1:])
        return Guess(times - start, *columns)
