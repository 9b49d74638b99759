# SPDX-License-Identifier: BSD-3-Clause
"""A slide with its drive and end stops."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.errors import InputError
from rotorpump.quantities import choice, interval, limit, non_negative, positive

END_STOPS = ("bear", "avoid")


@dataclass(frozen=True)
class Slide:
    """A straight slide fixed to the wheel, the drive that moves the mass along it, its end stops.

    Every limit but the stroke is optional, and infinite where it is not given.

    Parameters
    ----------
    stroke : tuple of float
        Lowest and highest position of the mass [m].
    speed : float, optional
        Largest speed of the mass along the slide [m/s].
    force : float, optional
        Largest force of the drive on the mass, in either direction [N].
    power : float, optional
        Largest mechanical power of the drive, whether it drives or brakes [W].
    force_rate : float, optional
        Largest rate of the drive's force [N/s].
    continuous_force : float, optional
        Largest root mean square of the drive's force over the motion [N], as linear drives are
        rated.
    stall_force, no_load_speed : float, optional
        Motor line: the drive's force is at most ``stall_force (1 - v / no_load_speed)`` in the
        direction of the motion [N, m/s]. A drive that brakes may exceed the stall force along the
        same line, as a motor at a given voltage does. Both or neither are given.
    motor_constant : float, optional
        Force per square root of the copper loss, Km [N/√W]; the loss is (F/Km)².
    rubbing : float, optional
        Coulomb friction along the rail [N].
    end_stops : {"bear", "avoid"}, optional
        Whether a resting mass may lean on an end stop ("bear"), or the drive has to carry it
        everywhere ("avoid"). A stop never brakes a moving mass.

    Raises
    ------
    InputError
        If a value is out of its range, or one half of the motor line is missing.
    """

    stroke: tuple[float, float]
    speed: float = math.inf
    force: float = math.inf
    power: float = math.inf
    force_rate: float = math.inf
    continuous_force: float = math.inf
    stall_force: float | None = None
    no_load_speed: float | None = None
    motor_constant: float | None = None
    rubbing: float = 0.0
    end_stops: str = "bear"

    def __post_init__(self) -> None:
        object.__setattr__(self, "stroke", interval("stroke", self.stroke))
        for name in ("speed", "force", "power", "force_rate", "continuous_force"):
            object.__setattr__(self, name, limit(name, getattr(self, name)))
        for name in ("stall_force", "no_load_speed", "motor_constant"):
            if getattr(self, name) is not None:
                object.__setattr__(self, name, positive(name, getattr(self, name)))
        if (self.stall_force is None) != (self.no_load_speed is None):
            missing = "stall_force" if self.stall_force is None else "no_load_speed"
            raise InputError(missing, "is required: it makes the motor line with its twin", None)
        object.__setattr__(self, "rubbing", non_negative("rubbing", self.rubbing))
        choice("end_stops", self.end_stops, END_STOPS)

    @property
    def length(self) -> float:
        """Length of the stroke [m]."""
        return self.stroke[1] - self.stroke[0]

    @property
    def middle(self) -> float:
        """Middle of the stroke [m]."""
        return 0.5 * (self.stroke[0] + self.stroke[1])

    @property
    def bearing(self) -> bool:
        """Whether a resting mass may lean on the end stops."""
        return self.end_stops == "bear"

    @property
    def standing_force(self) -> float:
        """Largest force of the drive on a standing mass [N]; infinite without such a limit."""
        return min(self.force, math.inf if self.stall_force is None else self.stall_force)

    @property
    def top_speed(self) -> float:
        """Largest speed at which the drive still drives [m/s]; infinite without such a limit."""
        return min(self.speed, math.inf if self.no_load_speed is None else self.no_load_speed)

    @property
    def forceful(self) -> bool:
        """Whether anything limits the drive's force, so that the mass has to be accelerated."""
        limits = (self.standing_force, self.power, self.force_rate, self.continuous_force)
        return min(limits) < math.inf
