# SPDX-License-Identifier: BSD-3-Clause
"""What is to be achieved: pump for a given time, spin up to a goal, rotate steadily."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.errors import InputError
from rotorpump.quantities import choice, finite, positive
from rotorpump.rig.rig import Rig

BALANCED = 1e-9
"""Distance from hanging or upright [rad] below which a still wheel is balanced."""


@dataclass(frozen=True, kw_only=True)
class Start:
    """Where a motion begins; the slide is at rest.

    Parameters
    ----------
    start_angle : float
        Wheel angle from the hanging position [rad], within one half turn either way.
    start_speed : float, optional
        Wheel speed [rad/s].
    start_radial : float, optional
        Radial position of the mass [m]; the outer end of the stroke by default.

    Raises
    ------
    InputError
        If a value is not finite or the angle is beyond half a turn.
    """

    start_angle: float
    start_speed: float = 0.0
    start_radial: float | None = None

    def __post_init__(self) -> None:
        angle = finite("start_angle", self.start_angle)
        if abs(angle) > math.pi:
            raise InputError("start_angle", "must lie within -pi and pi", self.start_angle)
        object.__setattr__(self, "start_angle", angle)
        object.__setattr__(self, "start_speed", finite("start_speed", self.start_speed))
        if self.start_radial is not None:
            object.__setattr__(self, "start_radial", positive("start_radial", self.start_radial))

    def radial_in(self, rig: Rig) -> float:
        """Start position of the mass on this rig [m]."""
        return rig.radial.stroke[1] if self.start_radial is None else self.start_radial

    def check(self, rig: Rig) -> None:
        """Raise InputError if the motion cannot begin like this on this rig."""
        low, high = rig.radial.stroke
        if not low <= self.radial_in(rig) <= high:
            raise InputError(
                "start_radial", f"must lie within the stroke {low:g} to {high:g}", self.start_radial
            )
        if self.start_speed == 0.0 and abs(math.sin(self.start_angle)) < BALANCED:
            raise InputError(
                "start_angle",
                "must differ from 0 and from half a turn when start_speed is 0 (a balanced wheel"
                " feels no torque from a radial move)",
                self.start_angle,
            )


@dataclass(frozen=True, kw_only=True)
class Pump(Start):
    """Pump for a given time; the objective is taken at its end.

    Parameters
    ----------
    duration : float
        Length of the motion [s].
    start_angle, start_speed, start_radial
        See `Start`.
    """

    duration: float

    def __post_init__(self) -> None:
        super().__post_init__()
        object.__setattr__(self, "duration", positive("duration", self.duration))


@dataclass(frozen=True, kw_only=True)
class SpinUp(Start):
    """Reach a goal from the start; exactly one of the three goals is given.

    Parameters
    ----------
    energy : float, optional
        Energy above rest to reach [J].
    speed : float, optional
        Magnitude of the wheel speed to reach [rad/s].
    full_turn : bool, optional
        Pass over the top for the first time.
    start_angle, start_speed, start_radial
        See `Start`.
    """

    energy: float | None = None
    speed: float | None = None
    full_turn: bool = False

    def __post_init__(self) -> None:
        super().__post_init__()
        if not isinstance(self.full_turn, bool):
            raise InputError("full_turn", "must be true or false", self.full_turn)
        goals = {"energy": self.energy, "speed": self.speed}
        given = [name for name, value in goals.items() if value is not None]
        for name in given:
            object.__setattr__(self, name, positive(name, goals[name]))
        given += ["full_turn"] if self.full_turn else []
        if len(given) != 1:
            raise InputError(
                "goal", "exactly one of energy, speed, full_turn=true must be given", given
            )


@dataclass(frozen=True, kw_only=True)
class Rotate:
    """One turn of steady rotation, the same again and again, in the positive direction."""


Task = Pump | SpinUp | Rotate


@dataclass(frozen=True)
class Measure:
    """What an objective measures: its name, SI unit, and whether more of it is better."""

    name: str
    unit: str
    more_is_better: bool


MEASURES: dict[type, tuple[Measure, ...]] = {
    Pump: (Measure("energy", "J", True),),
    SpinUp: (Measure("time", "s", False),),
    Rotate: (Measure("speed", "rad/s", True),),
}
"""Objectives of each kind of task, the default first."""


def measure(task: Task, name: str | None = None) -> Measure:
    """Return the objective called ``name`` of this task, or its default one.

    Raises
    ------
    InputError
        If the task has no such objective.
    """
    offered = MEASURES[type(task)]
    if name is None:
        return offered[0]
    choice("objective", name, [entry.name for entry in offered])
    return next(entry for entry in offered if entry.name == name)
