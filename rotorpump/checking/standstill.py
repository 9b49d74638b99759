# SPDX-License-Identifier: BSD-3-Clause
"""Direction of the wheel, and where it turns, sticks and slips.

The sign of the speed gives the direction of the axle friction. At standstill the wheel sticks
while the torque of the weight does not exceed the Coulomb torque.
"""

from __future__ import annotations

import math

from rotorpump.checking.phases import Ending, State
from rotorpump.physics.constants import Constants

SLIP_MARGIN = 1e-9
"""Relative excess over the Coulomb torque at which a stuck wheel lets go; parts the two events."""


def weight_torque(c: Constants, angle: float, radial: float) -> float:
    """Torque of the mass's weight about the axle, -m g ρ sin φ [N m]."""
    return float(-c.mass * c.gravity * radial * math.sin(angle))


def wheel_direction(c: Constants, state: State) -> float:
    """Direction in which the wheel turns or starts to turn, 1 or -1; 0 where it sticks."""
    angle, speed, radial = state[:3]
    if speed != 0.0:
        return math.copysign(1.0, speed)
    torque = weight_torque(c, angle, radial)
    return 0.0 if abs(torque) <= c.coulomb else math.copysign(1.0, torque)


def wheel_endings(c: Constants, direction: float) -> tuple[Ending, ...]:
    """Events that change the wheel's direction: a turn where friction depends on it, or a slip."""
    if direction == 0.0:
        threshold = c.coulomb * (1.0 + SLIP_MARGIN) + 1e-12
        return (
            Ending(lambda _, state: abs(weight_torque(c, state[0], state[2])) - threshold, list),
        )
    if c.coulomb == 0.0 and c.quadratic == 0.0:
        return ()
    return (Ending(lambda _, state: -direction * state[1], _stand),)


def _stand(state: State) -> State:
    """Return the same state with the wheel standing."""
    return [state[0], 0.0, *state[2:]]
