# SPDX-License-Identifier: BSD-3-Clause
"""Replay of a slide whose drive force is the control, its end stops as real contacts.

A mass that arrives at a stop loses its speed at once; it rests there while the net push presses
it on, the stop bearing whatever that takes, and leaves when the push turns away.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from rotorpump.checking.intervals import Polynomial
from rotorpump.checking.phases import Ending, Phase, State, follow
from rotorpump.checking.standstill import wheel_direction, wheel_endings
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import accelerations

SKIN = 1e-12
"""Depth in a stop at which an arrival counts [m]; parts arriving from leaving."""

LEAVING_PUSH = 1e-8
"""Net push away from a stop at which the mass leaves [m/s2]; parts leaving from resting."""

FREE, OUTWARD, INWARD = 0.0, 1.0, -1.0
"""Which stop the mass rests on, as the direction in which it presses."""


@dataclass(frozen=True)
class DrivenSlide:
    """Wheel and mass under a given drive force, in the force form of the equations.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    bearing : bool
        Whether the end stops bear a resting mass; without, there is nothing at the ends.
    arrivals : list of float
        Speed of every arrival at a stop so far [m/s].
    """

    constants: Constants
    bearing: bool
    arrivals: list[float] = field(default_factory=list)

    def advance(self, begin: float, end: float, force: Polynomial, state: State) -> State:
        """State (φ, ω, ρ, vρ) at the end of an interval of smooth force [rad, rad/s, m, m/s]."""
        if self.bearing:
            state = self._meet_stops(state)
        return follow(begin, end, state, lambda time, here: self._phase(force, time, here))

    def _meet_stops(self, state: State) -> State:
        """State with the mass between the stops, and not moving into one."""
        angle, speed, radial, slide_speed = state
        # the states of a solver may lie in a stop by a rounding; margins measure how deep
        radial = min(max(radial, self.constants.inner), self.constants.outer)
        outward = radial == self.constants.outer and slide_speed > 0.0
        inward = radial == self.constants.inner and slide_speed < 0.0
        if outward or inward:
            return self._arrive(state, radial)
        return [angle, speed, radial, slide_speed]

    def _push(self, force: float, state: State) -> float:
        """Acceleration the mass would have without a stop [m/s2]."""
        angle, speed, radial, pace = state
        push = accelerations(math, self.constants, angle, speed, radial, pace, force, 0.0)[1]
        return float(push)

    def _rest(self, force: float, state: State) -> float:
        """Direction in which the mass presses on a stop, or FREE."""
        if not self.bearing or state[3] != 0.0:
            return FREE
        if state[2] >= self.constants.outer and self._push(force, state) >= 0.0:
            return OUTWARD
        if state[2] <= self.constants.inner and self._push(force, state) <= 0.0:
            return INWARD
        return FREE

    def _phase(self, force: Polynomial, time: float, state: State) -> Phase:
        c = self.constants
        rest = self._rest(force(time), state)
        direction = wheel_direction(c, state)
        moves = 0.0 if rest else 1.0
        turns = 0.0 if direction == 0.0 else 1.0

        def rates(time: float, state: State) -> tuple[float, float, float, float]:
            angle, speed, radial, pace = state
            wheel, mass = accelerations(math, c, angle, speed, radial, pace, force(time), direction)
            return turns * speed, turns * wheel, moves * pace, moves * mass

        def leaves(time: float, state: State) -> float:
            return -rest * self._push(force(time), state) - LEAVING_PUSH

        endings = wheel_endings(c, direction)
        if rest:
            endings += (Ending(leaves, list),)
        elif self.bearing:
            endings += (
                Ending(lambda _, s: s[2] - c.outer - SKIN, lambda s: self._arrive(s, c.outer)),
                Ending(lambda _, s: c.inner - s[2] - SKIN, lambda s: self._arrive(s, c.inner)),
            )
        return Phase(rates, endings)

    def _arrive(self, state: State, stop: float) -> State:
        """Inelastic arrival; the wheel's speed stays, since H and ρ are continuous."""
        self.arrivals.append(abs(state[3]))
        return [state[0], state[1], stop, 0.0]
