# SPDX-License-Identifier: BSD-3-Clause
"""The wheel without the moving mass."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.quantities import non_negative, positive


@dataclass(frozen=True)
class Wheel:
    """A balanced wheel on a horizontal axle.

    Parameters
    ----------
    inertia : float
        Moment of inertia about the axle without the moving mass [kg m2].
    mass : float, optional
        Mass that the axle carries without the moving mass [kg].

    Raises
    ------
    InputError
        If the inertia is not positive or the mass is negative.
    """

    inertia: float
    mass: float = 0.0

    def __post_init__(self) -> None:
        object.__setattr__(self, "inertia", positive("inertia", self.inertia))
        object.__setattr__(self, "mass", non_negative("mass", self.mass))
