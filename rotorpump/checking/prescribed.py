# SPDX-License-Identifier: BSD-3-Clause
"""Replay of a slide without a force limit: its speed is the control, its forces hold impulses.

The wheel is integrated under the prescribed slide speed. Where that speed jumps, the wheel's
does not, since H and ρ are continuous; where the position itself jumps, H is kept.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.checking.intervals import Polynomial
from rotorpump.checking.phases import Phase, State, follow
from rotorpump.checking.standstill import wheel_direction, wheel_endings
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import accelerations


@dataclass(frozen=True)
class PrescribedSlide:
    """The wheel under a given slide speed, φ̈ = (Q - m g ρ sin φ - 2 m ρ vρ ω) / (J + m ρ²)."""

    constants: Constants

    def advance(self, begin: float, end: float, slide_speed: Polynomial, state: State) -> State:
        """State (φ, ω, ρ) at the end of an interval of smooth slide speed [rad, rad/s, m]."""
        return follow(begin, end, state, lambda _, here: self._phase(slide_speed, here))

    def jump(self, state: State, radial: float) -> State:
        """State after the mass jumps to ``radial`` [m]: H and φ stay, ω₊ = ω₋ I₋ / I₊."""
        c = self.constants
        before = c.wheel_inertia + c.mass * state[2] ** 2
        after = c.wheel_inertia + c.mass * radial**2
        return [state[0], state[1] * before / after, radial]

    def _phase(self, slide_speed: Polynomial, state: State) -> Phase:
        c = self.constants
        direction = wheel_direction(c, state)
        turns = 0.0 if direction == 0.0 else 1.0

        def rates(time: float, state: State) -> tuple[float, float, float]:
            angle, speed, radial = state
            pace = slide_speed(time)
            wheel, _ = accelerations(math, c, angle, speed, radial, pace, 0.0, direction)
            return turns * speed, turns * wheel, pace

        return Phase(rates, wheel_endings(c, direction))
