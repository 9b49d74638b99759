# SPDX-License-Identifier: BSD-3-Clause
"""Scales that bring every variable of the program to order one, and back."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

from rotorpump.rig.rig import AXES, Rig
from rotorpump.rig.slide import Slide


class SlideScales(NamedTuple):
    """Typical sizes of one slide's quantities.

    Parameters
    ----------
    origin, length : float
        Low end and length of the stroke [m].
    speed, acceleration, force : float
        Typical speed [m/s], acceleration [m/s2] and drive force [N].
    """

    origin: Any
    length: Any
    speed: Any
    acceleration: Any
    force: Any

    def of_order(self, order: int) -> Any:
        """Scale of the position, the speed or the acceleration."""
        return (self.length, self.speed, self.acceleration)[order]

    def value(self, order: int, scaled: Any) -> Any:
        """Physical value of a scaled position, speed or acceleration."""
        return self.origin + self.length * scaled if order == 0 else self.of_order(order) * scaled

    def scaled(self, order: int, value: Any) -> Any:
        """Scaled value of a position, speed or acceleration."""
        return (value - self.origin) / self.length if order == 0 else value / self.of_order(order)


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
    radial, tangential : SlideScales
        Sizes of the slides' quantities; of no meaning along an axis that has no slide.
    """

    time: Any
    momentum: Any
    energy: Any
    radial: SlideScales
    tangential: SlideScales

    @classmethod
    def of(cls, rig: Rig) -> Scales:
        """Scales of a rig, from its limits where it has them."""
        time = rig.pendulum_period / (2.0 * math.pi)
        momentum = rig.inertia(*rig.lowest_place) / time
        slides = {
            axis: _slide_scales(rig.slide(axis), rig.mass, time)
            if axis in rig.driven
            else SlideScales(0.0, 1.0, 1.0, 1.0, 1.0)
            for axis in AXES
        }
        return cls(time, momentum, momentum / time, slides["radial"], slides["tangential"])

    def slide(self, axis: str) -> SlideScales:
        """Scales of an axis."""
        return self.radial if axis == "radial" else self.tangential

    @property
    def flat(self) -> list[Any]:
        """All of them in a row."""
        return [self.time, self.momentum, self.energy, *self.radial, *self.tangential]

    @classmethod
    def from_flat(cls, values: Any) -> Scales:
        """Undo `flat`."""
        width = len(SlideScales._fields)
        time, momentum, energy = values[:3]
        radial, tangential = values[3 : 3 + width], values[3 + width : 3 + 2 * width]
        return cls(time, momentum, energy, SlideScales(*radial), SlideScales(*tangential))


def _slide_scales(slide: Slide, mass: float, time: float) -> SlideScales:
    length = slide.length
    speed = min(slide.top_speed, 4.0 * length / time)
    acceleration = min(slide.standing_force / mass, 16.0 * length / time**2)
    force = slide.standing_force
    if math.isinf(force):
        force = mass * acceleration
    return SlideScales(slide.stroke[0], length, speed, acceleration, force)
