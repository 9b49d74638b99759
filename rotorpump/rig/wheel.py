# SPDX-License-Identifier: BSD-3-Clause
"""The wheel without the moving mass."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.quantities import finite, non_negative, positive


@dataclass(frozen=True)
class Wheel:
    """A wheel on a horizontal axle, balanced unless an unbalance is given.

    Parameters
    ----------
    inertia : float
        Moment of inertia about the axle without the moving mass [kg m2].
    mass : float, optional
        Mass that the axle carries without the moving mass [kg].
    unbalance : float, optional
        Unbalance of the wheel, mass times radius [kg m].
    unbalance_angle : float, optional
        Direction of the unbalance in the wheel, counter-clockwise from the radial axis [rad].

    Raises
    ------
    InputError
        If the inertia is not positive, a mass is negative, or the angle is not finite.
    """

    inertia: float
    mass: float = 0.0
    unbalance: float = 0.0
    unbalance_angle: float = 0.0

    def __post_init__(self) -> None:
        object.__setattr__(self, "inertia", positive("inertia", self.inertia))
        object.__setattr__(self, "mass", non_negative("mass", self.mass))
        object.__setattr__(self, "unbalance", non_negative("unbalance", self.unbalance))
        object.__setattr__(self, "unbalance_angle", finite("unbalance_angle", self.unbalance_angle))
