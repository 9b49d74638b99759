# SPDX-License-Identifier: BSD-3-Clause
"""Stretches of motion with the mass held, and the trajectory they make."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import contact_force, total_inertia, wheel_speed
from rotorpump.rig.rig import Rig
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]


class End(Enum):
    """What ends a stretch."""

    TURN = "turning point"
    BOTTOM = "lowest point"
    TOP = "top"
    SWITCH = "switch of the law"
    SPEED = "wheel speed reached"
    TIME = "time is up"
    STUCK = "friction holds the wheel"


@dataclass(frozen=True)
class Instant:
    """State of the rig at one instant, the mass at rest on its slide.

    Parameters
    ----------
    time, angle, momentum, radial : float
        Time [s], wheel angle [rad], angular momentum [kg m2/s], position of the mass [m].
    direction : int, optional
        Direction in which the wheel goes on, 0 if it stands or is not known yet.
    """

    time: float
    angle: float
    momentum: float
    radial: float
    direction: int = 0

    def energy(self, constants: Constants) -> float:
        """Energy above rest [J]."""
        return float(energy_above_rest(np, constants, self.angle, self.momentum, self.radial, 0.0))

    def pace(self, constants: Constants) -> float:
        """Magnitude of the wheel speed [rad/s]."""
        return abs(float(wheel_speed(constants, self.momentum, self.radial)))


@dataclass(frozen=True, eq=False)
class Stretch:
    """A smooth piece of motion with the mass held and the wheel turning one way.

    Parameters
    ----------
    time, angle, momentum : ndarray, shape (n,)
        Nodes [s, rad, kg m2/s]; n is 1, 2, or one more than a multiple of three.
    radial : float
        Position of the mass [m].
    direction : int
        1 or -1, or 0 where the wheel stands.
    end : End
        Why it ends.
    """

    time: Array
    angle: Array
    momentum: Array
    radial: float
    direction: int
    end: End

    @property
    def first(self) -> Instant:
        """Its first instant, after the jump."""
        return self._instant(0)

    @property
    def last(self) -> Instant:
        """Its last instant, before the next jump."""
        return self._instant(-1)

    def _instant(self, node: int) -> Instant:
        return Instant(
            float(self.time[node]),
            float(self.angle[node]),
            float(self.momentum[node]),
            self.radial,
            self.direction,
        )

    def opening(self) -> Stretch:
        """Its first instant alone, as a stretch without length."""
        return replace(self, time=self.time[:1], angle=self.angle[:1], momentum=self.momentum[:1])


def still_at(instant: Instant) -> Stretch:
    """Return a single instant as a stretch without length."""
    return Stretch(
        np.array([instant.time]),
        np.array([instant.angle]),
        np.array([instant.momentum]),
        instant.radial,
        instant.direction,
        End.TIME,
    )


def _breaks(size: int, offset: int) -> NDArray[np.intp]:
    """Nodes at which the cubic pieces of a stretch of ``size`` nodes meet."""
    return offset + np.arange(0, size, 3 if size > 2 else 1, dtype=np.intp)


def trajectory_along(rig: Rig, start: Instant, stretches: Sequence[Stretch]) -> Trajectory:
    """Join stretches, which follow each other in time, to a trajectory.

    Parameters
    ----------
    rig : Rig
        The rig that moves.
    start : Instant
        Where the mass is before the first stretch; a jump follows if it differs.
    stretches : sequence of Stretch
        At least one.

    Returns
    -------
    Trajectory
        Where the mass jumps, two nodes stand at one time, with an arc of no length between them;
        where it stays, stretches share a node. ``radial_force`` is the whole force that holds the
        mass, m (-ρ ω² - g cos φ): the impulse of a jump cannot be shown.
    """
    pieces = list(stretches)
    if start.radial != pieces[0].radial:
        pieces.insert(0, still_at(start))
    columns: list[Array] = []
    breaks: list[NDArray[np.intp]] = []
    arcs: list[int] = []
    count = 0
    for index, piece in enumerate(pieces):
        shared = index > 0 and pieces[index - 1].radial == piece.radial
        offset = count - 1 if shared else count
        size = piece.time.size
        held = np.full(size, piece.radial)
        sign = np.full(size, float(piece.direction))
        rows = np.vstack([piece.time, piece.angle, piece.momentum, held, sign])
        columns.append(rows[:, 1:] if shared else rows)
        breaks.append(_breaks(size, offset))
        arcs += [offset, offset + size - 1]
        count = offset + size
    time, angle, momentum, radial, direction = np.hstack(columns)
    constants = Constants.of(rig)
    speed = momentum / total_inertia(constants, radial)
    return trajectory_of(
        rig,
        time,
        angle,
        momentum,
        radial,
        np.zeros_like(time),
        contact_force(np, constants, angle, speed, radial, 0.0),
        np.unique(np.concatenate(breaks)),
        np.unique(arcs),
        direction=direction,
    )
