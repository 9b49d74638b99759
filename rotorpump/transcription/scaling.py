# SPDX-License-Identifier: BSD-3-Clause
"""Scales that bring every variable of the program to order one, and back."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig


class Scales(NamedTuple):
    """Typical sizes of the program's quantities; angles are left as they are.

    Parameters
    ----------
    time : float
        Time of a small swing over one radian of phase [s].
    momentum : float
        Angular momentum at one radian in that time [kg m2/s].
    energy : float
        Energy that belongs to it [J].
    origin, length : float
        Inner end and length of the stroke [m].
    speed, acceleration : float
        Typical speed [m/s] and acceleration [m/s2] of the slide.
    """

    time: Any
    momentum: Any
    energy: Any
    origin: Any
    length: Any
    speed: Any
    acceleration: Any

    @classmethod
    def of(cls, rig: Rig) -> Scales:
        """Scales of a rig, from its limits where it has them."""
        c = Constants.of(rig)
        inertia = rig.inertia(c.outer)
        time = math.sqrt(inertia / (c.mass * c.gravity * c.outer))
        length = rig.radial.length
        speed = min(rig.radial.speed, 4.0 * length / time)
        acceleration = min(rig.radial.force / c.mass, 16.0 * length / time**2)
        momentum = inertia / time
        return cls(time, momentum, momentum / time, c.inner, length, speed, acceleration)

    def slide(self, order: int) -> Any:
        """Scale of the slide's position, speed or acceleration."""
        return (self.length, self.speed, self.acceleration)[order]

    def slide_value(self, order: int, scaled: Any) -> Any:
        """Physical value of the slide's scaled position, speed or acceleration."""
        return self.origin + self.length * scaled if order == 0 else self.slide(order) * scaled

    def scale_slide(self, order: int, value: Any) -> Any:
        """Scaled value of the slide's position, speed or acceleration."""
        return (value - self.origin) / self.length if order == 0 else value / self.slide(order)
