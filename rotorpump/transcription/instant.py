# SPDX-License-Identifier: BSD-3-Clause
"""Everything that the rows of an interval need to know about one of its collocation points."""

from __future__ import annotations

from typing import Any, NamedTuple

from rotorpump.physics.state import Motion, Slides


class Instant(NamedTuple):
    """One collocation point, in SI units.

    Parameters
    ----------
    angle, speed : symbol
        Wheel angle [rad] and speed [rad/s].
    rate : symbol
        Rate of the angular momentum [N m].
    slides : Slides
        Place and speed of the mass.
    motion : Motion
        Accelerations and forces.
    elapsed, passing : symbol
        Time since the interval's start, and time that passes per unit of the interval [s].
    """

    angle: Any
    speed: Any
    rate: Any
    slides: Slides
    motion: Motion
    elapsed: Any
    passing: Any

    def place(self, axis: str) -> Any:
        """Position of the mass along an axis [m]."""
        return getattr(self.slides, axis)

    def pace(self, axis: str) -> Any:
        """Speed of the mass along an axis [m/s]."""
        return getattr(self.slides, f"{axis}_speed")

    def contact(self, axis: str) -> Any:
        """Whole force on the mass along an axis [N]."""
        return getattr(self.motion, f"{axis}_contact")
