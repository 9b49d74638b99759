# SPDX-License-Identifier: BSD-3-Clause
"""Stretches of motion with the mass held, and the trajectory they make."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.moves import Instant, jump_work, jumps_to
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import (
    contact_forces,
    momentum_rate,
    wheel_acceleration,
    wheel_speed,
)
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES, Rig
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


@dataclass(frozen=True, eq=False)
class Stretch:
    """A smooth piece of motion with the mass held and the wheel turning one way.

    Parameters
    ----------
    time, angle, momentum : ndarray, shape (n,)
        Nodes [s, rad, kg m2/s]; n is 1, 2, or one more than a multiple of three.
    slides : Slides
        Place of the mass.
    direction : int
        1 or -1, or 0 where the wheel stands.
    end : End
        Why it ends.
    axis : str, optional
        The axis that switches, if a switch ends it.
    """

    time: Array
    angle: Array
    momentum: Array
    slides: Slides
    direction: int
    end: End
    axis: str = ""

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
            self.slides,
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
        instant.slides,
        instant.direction,
        End.TIME,
    )


def work_along(constants: Constants, start: Instant, stretches: Sequence[Stretch]) -> float:
    """Work of the drives over a motion, those that brake not counted [J]."""
    befores = [start, *(stretch.last for stretch in stretches[:-1])]
    return sum(
        jump_work(constants, before, stretch.slides)
        for before, stretch in zip(befores, stretches, strict=True)
    )


def trajectory_along(
    rig: Rig, start: Instant, stretches: Sequence[Stretch], load_torque: float = 0.0
) -> Trajectory:
    """Join stretches, which follow each other in time, to a trajectory.

    Parameters
    ----------
    rig : Rig
        The rig that moves.
    start : Instant
        Where the mass is before the first stretch; jumps follow if it differs.
    stretches : sequence of Stretch
        At least one.
    load_torque : float, optional
        Torque that a load takes from the wheel [N m].

    Returns
    -------
    Trajectory
        Where the mass jumps along an axis, two nodes stand at one time, with an arc of no length
        between them; where it stays, stretches share a node. The forces of the drives are the
        whole forces that hold the mass: the impulse of a jump cannot be shown.
    """
    constants = Constants.of(rig, load_torque)
    pieces = _with_jumps(constants, start, stretches)
    columns: list[Array] = []
    breaks: list[NDArray[np.intp]] = []
    arcs: list[int] = []
    count = 0
    for index, piece in enumerate(pieces):
        shared = index > 0 and pieces[index - 1].slides == piece.slides
        offset = count - 1 if shared else count
        size = piece.time.size
        still = [piece.slides.radial, piece.slides.tangential, float(piece.direction)]
        rows = np.vstack(
            [piece.time, piece.angle, piece.momentum, *(np.full(size, value) for value in still)]
        )
        columns.append(rows[:, 1:] if shared else rows)
        breaks.append(offset + np.arange(0, size, 3 if size > 2 else 1, dtype=np.intp))
        arcs += [offset, offset + size - 1]
        count = offset + size
    time, angle, momentum, radial, tangential, direction = np.hstack(columns)
    slides = Slides(radial, 0.0, tangential, 0.0)
    return trajectory_of(
        rig,
        time,
        angle,
        momentum,
        slides,
        _holding_forces(rig, constants, angle, momentum, slides, direction),
        np.unique(np.concatenate(breaks)),
        np.unique(arcs),
        direction=direction,
        load_torque=load_torque,
    )


def _with_jumps(
    constants: Constants, start: Instant, stretches: Sequence[Stretch]
) -> list[Stretch]:
    """Stretches, with the places that the jumps between them pass as stretches without length."""
    pieces: list[Stretch] = []
    before = start
    for stretch in stretches:
        jumps = jumps_to(constants, before, stretch.slides)
        if jumps and not pieces:
            pieces.append(still_at(start))
        pieces += [still_at(passed) for passed in jumps[:-1]]
        pieces.append(stretch)
        before = stretch.last
    return pieces


def _holding_forces(
    rig: Rig, constants: Constants, angle: Array, momentum: Array, slides: Slides, direction: Array
) -> tuple[Array, Array]:
    """Return the forces that hold the mass along the driven axes, zero along the others [N]."""
    speed = wheel_speed(constants, momentum, slides)
    rate = momentum_rate(np, constants, angle, speed, slides, direction)
    free = wheel_acceleration(constants, rate, speed, slides, 0.0, 0.0)
    # a standing wheel is held by static friction
    wheel = np.where(direction == 0.0, 0.0, free)
    forces = contact_forces(np, constants, angle, speed, wheel, slides, 0.0, 0.0)
    radial, tangential = (
        np.asarray(force) if axis in rig.driven else np.zeros_like(angle)
        for axis, force in zip(AXES, forces, strict=True)
    )
    return radial, tangential
