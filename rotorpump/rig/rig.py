# SPDX-License-Identifier: BSD-3-Clause
"""The whole rig: wheel, moving mass, slide, axle friction, gravity."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.quantities import instance, positive
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

STANDARD_GRAVITY = 9.80665


@dataclass(frozen=True)
class Rig:
    """A wheel that is spun up by a mass moving along a radial slide.

    Parameters
    ----------
    wheel : Wheel
        The wheel without the moving mass.
    mass : float
        The moving mass [kg].
    radial : Slide
        The radial slide; its stroke counts from the axle.
    friction : AxleFriction
        Friction of the axle.
    gravity : float, optional
        Gravity in the plane of the wheel [m/s2]; on an inclined plane, 9.80665 times the sine of
        the slope.

    Raises
    ------
    InputError
        If a part is of the wrong kind or a value is out of its range.
    """

    wheel: Wheel
    mass: float
    radial: Slide
    friction: AxleFriction
    gravity: float = STANDARD_GRAVITY

    def __post_init__(self) -> None:
        instance("wheel", self.wheel, Wheel)
        instance("radial", self.radial, Slide)
        instance("friction", self.friction, AxleFriction)
        object.__setattr__(self, "mass", positive("mass", self.mass))
        object.__setattr__(self, "gravity", positive("gravity", self.gravity))

    def inertia(self, radial: float) -> float:
        """Moment of inertia about the axle with the mass at ``radial`` [kg m2]."""
        return self.wheel.inertia + self.mass * radial**2

    @property
    def pendulum_period(self) -> float:
        """Period of small swings with the mass at the outer end [s]."""
        outer = self.radial.stroke[1]
        return float(
            2.0 * math.pi * (self.inertia(outer) / (self.mass * self.gravity * outer)) ** 0.5
        )
