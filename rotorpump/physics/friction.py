# SPDX-License-Identifier: BSD-3-Clause
"""Friction torque of the axle while the wheel turns."""

from __future__ import annotations

from typing import Any

from rotorpump.physics.constants import Constants


def friction_torque(constants: Constants, speed: Any, direction: Any, axle_load: Any = 0.0) -> Any:
    """Torque of the axle friction on the wheel [N m].

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    speed : array_like or symbol
        Wheel speed [rad/s].
    direction : array_like or symbol
        Sign of the wheel speed, known by the caller: 1 or -1, or 0 where the wheel stands.
    axle_load : array_like or symbol, optional
        Load on the axle [N]; without it, the part of the friction that grows with it is left out.

    Notes
    -----
    T = -sign(ω) (c + μ a |R|) - b ω - k |ω| ω. The sign is an argument, so that no smoothing is
    needed where the direction of an arc is known.
    """
    dry = constants.coulomb + constants.load_arm * axle_load
    drag = constants.quadratic * direction * speed**2
    return -direction * dry - constants.viscous * speed - drag
