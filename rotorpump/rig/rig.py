# SPDX-License-Identifier: BSD-3-Clause
"""The whole rig: wheel, moving mass, slides, axle friction, gravity."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from numbers import Real

from rotorpump.errors import InputError
from rotorpump.quantities import finite, instance, non_negative, positive
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

STANDARD_GRAVITY = 9.80665

AXES = ("radial", "tangential")
"""The wheel's axes along which the mass may be driven."""


@dataclass(frozen=True)
class Rig:
    """A wheel that is spun up by a mass moving along slides fixed to it.

    Parameters
    ----------
    wheel : Wheel
        The wheel without the moving mass.
    mass : float
        The moving mass [kg].
    radial : Slide or float
        The radial slide; its stroke counts from the axle. A number holds the mass at that
        distance [m].
    friction : AxleFriction
        Friction of the axle.
    tangential : Slide or float, optional
        The tangential slide; its stroke counts from the radial axis, either way. A number holds
        the mass at that offset [m].
    gravity : float, optional
        Gravity in the plane of the wheel [m/s2]; on an inclined plane, 9.80665 times the sine of
        the slope.

    Raises
    ------
    InputError
        If a part is of the wrong kind, a value is out of its range, or there is no slide.
    """

    wheel: Wheel
    mass: float
    radial: Slide | float
    friction: AxleFriction
    tangential: Slide | float = 0.0
    gravity: float = STANDARD_GRAVITY

    def __post_init__(self) -> None:
        instance("wheel", self.wheel, Wheel)
        instance("friction", self.friction, AxleFriction)
        object.__setattr__(self, "mass", positive("mass", self.mass))
        object.__setattr__(self, "gravity", positive("gravity", self.gravity))
        for axis, validate in (("radial", non_negative), ("tangential", finite)):
            part = getattr(self, axis)
            if not isinstance(part, Slide):
                if isinstance(part, bool) or not isinstance(part, Real):
                    raise InputError(axis, "must be a Slide, or a number that holds it", part)
                object.__setattr__(self, axis, validate(axis, part))
        if isinstance(self.radial, Slide) and self.radial.stroke[0] < 0.0:
            rule = "must satisfy 0 <= lo < hi for the radial slide"
            raise InputError("stroke", rule, self.radial.stroke)
        if not self.driven:
            raise InputError("radial", "must be a slide where tangential is held", self.radial)

    @property
    def driven(self) -> tuple[str, ...]:
        """Names of the axes that have a slide."""
        return tuple(axis for axis in AXES if isinstance(getattr(self, axis), Slide))

    @property
    def slides(self) -> tuple[Slide, ...]:
        """The slides, in the order of `driven`."""
        return tuple(self.slide(axis) for axis in self.driven)

    def slide(self, axis: str) -> Slide:
        """Return the slide of a driven axis."""
        slide = getattr(self, axis)
        if not isinstance(slide, Slide):
            raise TypeError(f"the {axis} axis has no slide")
        return slide

    def stroke(self, axis: str) -> tuple[float, float]:
        """Lowest and highest position along an axis [m]; they are equal where it is held."""
        part = getattr(self, axis)
        return part.stroke if isinstance(part, Slide) else (part, part)

    def inertia(self, radial: float, tangential: float = 0.0) -> float:
        """Moment of inertia about the axle with the mass at this place [kg m2]."""
        return self.wheel.inertia + self.mass * (radial**2 + tangential**2)

    def static_moment(self, radial: float, tangential: float) -> tuple[float, float]:
        """Masses times their places along the radial and the tangential axis [kg m]."""
        wheel, angle = self.wheel, self.wheel.unbalance_angle
        return (
            self.mass * radial + wheel.unbalance * math.cos(angle),
            self.mass * tangential + wheel.unbalance * math.sin(angle),
        )

    @property
    def lowest_place(self) -> tuple[float, float]:
        """Place of the mass with which the rig hangs lowest: radial, tangential [m]."""
        corners = [(r, t) for r in self.stroke("radial")[::-1] for t in self.stroke("tangential")]
        return max(corners, key=lambda corner: math.hypot(*self.static_moment(*corner)))

    @property
    def pendulum_period(self) -> float:
        """Period of small swings with the mass where the rig hangs lowest [s]."""
        place = self.lowest_place
        pull = self.gravity * math.hypot(*self.static_moment(*place))
        return 2.0 * math.pi * math.sqrt(self.inertia(*place) / pull)

    def with_slides(self, change: Callable[[Slide], Slide]) -> Rig:
        """Return the rig with every slide changed."""
        radial, tangential = (
            change(part) if isinstance(part, Slide) else part
            for part in (self.radial, self.tangential)
        )
        return replace(self, radial=radial, tangential=tangential)

    def mirrored(self) -> Rig:
        """Return the rig seen from the other side: angles and tangential places change signs."""
        tangential: Slide | float
        if isinstance(self.tangential, Slide):
            low, high = self.tangential.stroke
            tangential = replace(self.tangential, stroke=(-high, -low))
        else:
            tangential = -self.tangential
        wheel = replace(self.wheel, unbalance_angle=-self.wheel.unbalance_angle)
        return replace(self, wheel=wheel, tangential=tangential)
