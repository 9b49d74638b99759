# SPDX-License-Identifier: BSD-3-Clause
"""A trajectory from its states and forces; what follows from them is filled in."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import wheel_speed
from rotorpump.physics.forces import accelerations
from rotorpump.physics.state import HOLD, Push, Slides
from rotorpump.rig.rig import AXES, Rig
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]
Pair = tuple[ArrayLike, ArrayLike]


def trajectory_of(
    rig: Rig,
    time: ArrayLike,
    angle: ArrayLike,
    momentum: ArrayLike,
    slides: Slides,
    forces: Pair,
    breaks: ArrayLike,
    arcs: ArrayLike,
    *,
    contacts: Pair | None = None,
    direction: ArrayLike | None = None,
    load_torque: float = 0.0,
) -> Trajectory:
    """Assemble a trajectory.

    Parameters
    ----------
    rig : Rig
        The rig that moves.
    time, angle, momentum : array_like, shape (n,)
        Time [s], wheel angle [rad], angular momentum [kg m2/s].
    slides : Slides
        Place [m] and speed [m/s] of the mass, each of shape (n,) or a number.
    forces : pair of array_like, shape (n,) or numbers
        Forces of the radial and the tangential drive on the mass [N].
    breaks, arcs : array_like of int
        See `Trajectory`.
    contacts : pair of array_like, shape (n,) or numbers, optional
        Whole forces on the mass along the axes, end stops and rubbing included [N]; the drives'
        forces by default. Not read along an axis that has no slide.
    direction : array_like, shape (n,), optional
        Sign of the wheel speed, 0 where the wheel stands. By default the sign of the speed; at a
        single zero the sign before it (after it, at the start), and 0 where the speed is zero at
        two instants in a row.
    load_torque : float, optional
        Torque that a load takes from the wheel [N m].

    Returns
    -------
    Trajectory
        With wheel speed, energy above rest and axle load.
    """
    times = np.array(time, dtype=float)

    def column(values: ArrayLike) -> Array:
        return np.broadcast_to(np.asarray(values, dtype=float), times.shape).copy()

    angles, momenta = column(angle), column(momentum)
    places = Slides(*(column(values) for values in slides))
    drives = tuple(column(values) for values in forces)
    pushes = drives if contacts is None else tuple(column(values) for values in contacts)
    constants = Constants.of(rig, load_torque)
    speed = wheel_speed(constants, momenta, places)
    signs = _directions(times, speed) if direction is None else column(direction)
    radial, tangential = (
        Push(push) if axis in rig.driven else HOLD for axis, push in zip(AXES, pushes, strict=True)
    )

    def load(stuck: bool) -> Array:
        motion = accelerations(
            np, constants, angles, speed, places, radial, tangential, signs, stuck=stuck
        )
        return np.asarray(motion.axle_load)

    return Trajectory(
        time=times,
        angle=angles,
        speed=speed,
        momentum=momenta,
        radial=places.radial,
        radial_speed=places.radial_speed,
        radial_force=drives[0],
        tangential=places.tangential,
        tangential_speed=places.tangential_speed,
        tangential_force=drives[1],
        energy=energy_above_rest(np, constants, angles, momenta, places),
        # a standing wheel is held by static friction
        axle_load=np.where(signs == 0.0, load(stuck=True), load(stuck=False)),
        breaks=np.array(breaks, dtype=np.intp),
        arcs=np.array(arcs, dtype=np.intp),
    )


def _directions(time: Array, speed: Array) -> Array:
    """Sign of the wheel speed at each node, 0 where the wheel stands for a while."""
    signs = np.sign(speed)
    moving = np.flatnonzero(signs)
    if moving.size == 0:
        return signs
    # The nearest moving node on the left, or the first one of all.
    before = np.searchsorted(moving, np.arange(signs.size), side="right") - 1
    filled = signs[moving[np.maximum(before, 0)]]
    still = np.zeros(signs.size, dtype=bool)
    rest = (signs[1:] == 0.0) & (signs[:-1] == 0.0) & (np.diff(time) > 0.0)
    still[1:] |= rest
    still[:-1] |= rest
    return np.where(still, 0.0, filled)
