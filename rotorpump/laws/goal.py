# SPDX-License-Identifier: BSD-3-Clause
"""The goal of a spin-up, checked on a motion made of stretches."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.laws.moves import Instant
from rotorpump.laws.stretch import End, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.tasks import SpinUp


@dataclass(frozen=True)
class Goal:
    """The goal of a spin-up on one rig.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    energy, speed : float
        Energy above rest [J] and wheel speed [rad/s] to reach; infinite where not asked for.
    full_turn : bool
        Whether the first passage over the top is asked for.
    """

    constants: Constants
    energy: float
    speed: float
    full_turn: bool

    @classmethod
    def of(cls, constants: Constants, task: SpinUp) -> Goal:
        """Take the goal from ``task``."""
        return cls(
            constants,
            math.inf if task.energy is None else task.energy,
            math.inf if task.speed is None else task.speed,
            task.full_turn,
        )

    def met_at(self, instant: Instant) -> bool:
        """Whether energy or speed suffice at this instant, or a jump took it over the top."""
        over = self.full_turn and abs(instant.angle) > math.pi
        # a wheel that comes down from the top has not passed it, wherever its first jump turns it
        over = over and (_outward(instant) or instant.time > 0.0)
        enough = instant.energy(self.constants) >= self.energy
        return over or enough or instant.pace(self.constants) >= self.speed

    def met_by(self, stretch: Stretch) -> bool:
        """Whether the end of this stretch is the goal.

        The energy is not looked at: with the mass held, friction alone does work, so it cannot
        rise.
        """
        passed = self.full_turn and stretch.end is End.TOP and _outward(stretch.last)
        return passed or stretch.end is End.SPEED


def _outward(instant: Instant) -> bool:
    """Whether the wheel turns away from where it hangs on this turn."""
    return instant.angle * instant.direction > 0.0
