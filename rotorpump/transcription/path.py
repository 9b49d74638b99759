# SPDX-License-Identifier: BSD-3-Clause
"""Motion of a slide within an interval, as a polynomial of the elapsed time.

The ladder of drive limits decides what jumps from interval to interval: nothing but the rate of
the acceleration when the force's rate is limited, the acceleration when the force is, the speed
when only the speed is, the position when neither is. What jumps is linear within an interval (a
position that jumps is constant there), so that its limits hold everywhere once they hold at both
ends.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from rotorpump.rig.slide import Slide

INSTANT, SPEED_LIMITED, FORCE_LIMITED, RATE_LIMITED = 0, 1, 2, 3


def rung_of(slide: Slide, *, forced: bool) -> int:
    """Rung of the ladder on which a slide stands: how often its control is integrated.

    ``forced`` tells whether forces move the mass.
    """
    if slide.force_rate < float("inf"):
        return RATE_LIMITED
    if forced:
        return FORCE_LIMITED
    return SPEED_LIMITED if slide.speed < float("inf") else INSTANT


@dataclass(frozen=True)
class SlidePath:
    """Polynomial motion of one slide over one interval.

    Parameters
    ----------
    start : sequence
        Values at the interval's start before the first that is linear: position and speed,
        position alone, or nothing.
    first, last : number or symbol
        The value that is linear, at the interval's start and end.
    duration : number or symbol
        Length of the interval [s].
    """

    start: tuple[Any, ...]
    first: Any
    last: Any
    duration: Any

    def _derivative(self, order: int, elapsed: Any) -> Any:
        """Differentiate the position so many times, after ``elapsed`` seconds."""
        rung = len(self.start)
        steps = rung - order
        if steps < 0:
            return (self.last - self.first) / self.duration if steps == -1 else 0.0
        slope = (self.last - self.first) / self.duration
        value: Any = 0.0
        power: Any = 1.0
        for k in range(steps):
            value = value + self.start[order + k] * power
            power = power * elapsed / (k + 1)
        return value + self.first * power + slope * power * elapsed / (steps + 1)

    def position(self, elapsed: Any) -> Any:
        """Position [m]."""
        return self._derivative(0, elapsed)

    def speed(self, elapsed: Any) -> Any:
        """Speed [m/s]."""
        return self._derivative(1, elapsed)

    def acceleration(self, elapsed: Any) -> Any:
        """Acceleration [m/s2]."""
        return self._derivative(2, elapsed)

    def end(self) -> tuple[Any, ...]:
        """Values at the interval's end that are continuous with the next one."""
        return tuple(self._derivative(k, self.duration) for k in range(len(self.start)))
