# SPDX-License-Identifier: BSD-3-Clause
"""A trajectory from its states and forces; what follows from them is filled in."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import accelerations, wheel_speed
from rotorpump.physics.loads import axle_load
from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]


def trajectory_of(
    rig: Rig,
    time: ArrayLike,
    angle: ArrayLike,
    momentum: ArrayLike,
    radial: ArrayLike,
    radial_speed: ArrayLike,
    radial_force: ArrayLike,
    breaks: ArrayLike,
    arcs: ArrayLike,
    *,
    contact: ArrayLike | None = None,
    direction: ArrayLike | None = None,
) -> Trajectory:
    """Assemble a trajectory of a radial rig.

    Parameters
    ----------
    rig : Rig
        The rig that moves.
    time, angle, momentum : array_like, shape (n,)
        Time [s], wheel angle [rad], angular momentum [kg m2/s].
    radial, radial_speed, radial_force : array_like, shape (n,)
        Position [m] and speed [m/s] of the mass, force of the drive on it [N].
    breaks, arcs : array_like of int
        See `Trajectory`.
    contact : array_like, shape (n,), optional
        Whole force on the mass along the slide, end stops included [N]; the drive's force by
        default.
    direction : array_like, shape (n,), optional
        Sign of the wheel speed, 0 where the wheel stands. By default the sign of the momentum; at
        a single zero the sign before it (after it, at the start), and 0 where the momentum is zero
        at two instants in a row.

    Returns
    -------
    Trajectory
        With wheel speed, energy above rest and axle load; the tangential axis is at rest at zero.
    """
    times, angles, momenta, positions, slide_speeds, forces = (
        np.array(column, dtype=float)
        for column in (time, angle, momentum, radial, radial_speed, radial_force)
    )
    constants = Constants.of(rig)
    pushes = forces if contact is None else np.array(contact, dtype=float)
    signs = _directions(times, momenta) if direction is None else np.array(direction, dtype=float)
    speed = wheel_speed(constants, momenta, positions)
    turning, _ = accelerations(np, constants, angles, speed, positions, slide_speeds, pushes, signs)
    # A standing wheel is held by static friction, which balances the weight.
    turning = np.where(signs == 0.0, 0.0, turning)
    zero = np.zeros_like(times)
    return Trajectory(
        time=times,
        angle=angles,
        speed=speed,
        momentum=momenta,
        radial=positions,
        radial_speed=slide_speeds,
        radial_force=forces,
        tangential=zero,
        tangential_speed=zero.copy(),
        tangential_force=zero.copy(),
        energy=energy_above_rest(np, constants, angles, momenta, positions, slide_speeds),
        axle_load=axle_load(
            np,
            constants,
            rig.wheel.mass,
            angles,
            speed,
            positions,
            slide_speeds,
            pushes,
            turning,
        ),
        breaks=np.array(breaks, dtype=np.intp),
        arcs=np.array(arcs, dtype=np.intp),
    )


def _directions(time: Array, momentum: Array) -> Array:
    """Sign of the wheel speed at each node, 0 where the wheel stands for a while."""
    signs = np.sign(momentum)
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
