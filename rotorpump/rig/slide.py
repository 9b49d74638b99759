# SPDX-License-Identifier: BSD-3-Clause
"""A slide with its drive and end stops."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.quantities import choice, interval, limit

END_STOPS = ("bear", "avoid")


@dataclass(frozen=True)
class Slide:
    """A straight slide fixed to the wheel, the drive that moves the mass along it, its end stops.

    Parameters
    ----------
    stroke : tuple of float
        Lowest and highest position of the mass [m].
    speed : float, optional
        Largest speed of the mass along the slide [m/s]; infinite without a limit.
    force : float, optional
        Largest force of the drive on the mass, in either direction [N]; infinite without a limit.
    end_stops : {"bear", "avoid"}, optional
        Whether a resting mass may lean on an end stop ("bear"), or the drive has to carry it
        everywhere ("avoid"). A stop never brakes a moving mass.

    Raises
    ------
    InputError
        If a value is out of its range.
    """

    stroke: tuple[float, float]
    speed: float = math.inf
    force: float = math.inf
    end_stops: str = "bear"

    def __post_init__(self) -> None:
        object.__setattr__(self, "stroke", interval("stroke", self.stroke))
        object.__setattr__(self, "speed", limit("speed", self.speed))
        object.__setattr__(self, "force", limit("force", self.force))
        choice("end_stops", self.end_stops, END_STOPS)

    @property
    def length(self) -> float:
        """Length of the stroke [m]."""
        return self.stroke[1] - self.stroke[0]

    @property
    def bearing(self) -> bool:
        """Whether a resting mass may lean on the end stops."""
        return self.end_stops == "bear"
