# SPDX-License-Identifier: BSD-3-Clause
"""What is to be achieved: pump for a given time, spin up to a goal, rotate steadily."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.errors import InputError
from rotorpump.quantities import finite, non_negative, positive
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide

BALANCED = 1e-9
"""Distance from balance [rad], or share of the static moment, below which a wheel is balanced."""


@dataclass(frozen=True, kw_only=True)
class Start:
    """Where a motion begins; the slides are at rest.

    Parameters
    ----------
    start_angle : float
        Wheel angle from the hanging position [rad], within one half turn either way.
    start_speed : float, optional
        Wheel speed [rad/s].
    start_radial : float, optional
        Radial position of the mass [m]; the outer end of the stroke by default.
    start_tangential : float, optional
        Tangential position of the mass [m]; the middle of the stroke by default.

    Raises
    ------
    InputError
        If a value is not finite or the angle is beyond half a turn.
    """

    start_angle: float
    start_speed: float = 0.0
    start_radial: float | None = None
    start_tangential: float | None = None

    def __post_init__(self) -> None:
        angle = finite("start_angle", self.start_angle)
        if abs(angle) > math.pi:
            raise InputError("start_angle", "must lie within -pi and pi", self.start_angle)
        object.__setattr__(self, "start_angle", angle)
        object.__setattr__(self, "start_speed", finite("start_speed", self.start_speed))
        for name, rule in (("start_radial", non_negative), ("start_tangential", finite)):
            if getattr(self, name) is not None:
                object.__setattr__(self, name, rule(name, getattr(self, name)))

    def place_in(self, rig: Rig) -> tuple[float, float]:
        """Start position of the mass on this rig: radial, tangential [m]."""
        radial, tangential = self.start_radial, self.start_tangential
        if radial is None:
            radial = rig.stroke("radial")[1]
        if tangential is None:
            slide = rig.tangential
            tangential = slide.middle if isinstance(slide, Slide) else slide
        return radial, tangential

    def check(self, rig: Rig) -> None:
        """Raise InputError if the motion cannot begin like this on this rig."""
        place = self.place_in(rig)
        for axis, value in zip(("radial", "tangential"), place, strict=True):
            low, high = rig.stroke(axis)
            if not low <= value <= high:
                rule = f"must lie within the stroke {low:g} to {high:g}"
                raise InputError(f"start_{axis}", rule, value)
        if self.start_speed == 0.0:
            self._check_torque(rig, place)

    def _check_torque(self, rig: Rig, place: tuple[float, float]) -> None:
        """Raise InputError where no move of the only slide gives the wheel a torque.

        That is where the slide is vertical and the centre of mass is on its line through the axle.
        """
        along, across = rig.static_moment(*place)
        if rig.driven == ("radial",):
            aside, slope, angles = across, math.sin(self.start_angle), "0 and from half a turn"
        elif rig.driven == ("tangential",):
            aside, slope, angles = along, math.cos(self.start_angle), "a quarter turn either way"
        else:
            return
        centred = abs(aside) <= BALANCED * (rig.mass * math.hypot(*place) + rig.wheel.unbalance)
        if centred and abs(slope) < BALANCED:
            rule = (
                f"must differ from {angles} when start_speed is 0 (a balanced wheel feels no torque"
                f" from a {rig.driven[0]} move)"
            )
            raise InputError("start_angle", rule, self.start_angle)


@dataclass(frozen=True, kw_only=True)
class Pump(Start):
    """Pump for a given time; the objective is taken at its end.

    Parameters
    ----------
    duration : float
        Length of the motion [s].
    start_angle, start_speed, start_radial, start_tangential
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
    deadline : float, optional
        Time that the motion may take at most [s].
    start_angle, start_speed, start_radial, start_tangential
        See `Start`.
    """

    energy: float | None = None
    speed: float | None = None
    full_turn: bool = False
    deadline: float | None = None

    def __post_init__(self) -> None:
        super().__post_init__()
        if not isinstance(self.full_turn, bool):
            raise InputError("full_turn", "must be true or false", self.full_turn)
        goals = {"energy": self.energy, "speed": self.speed}
        given = [name for name, value in goals.items() if value is not None]
        for name in given:
            object.__setattr__(self, name, positive(name, goals[name]))
        if self.deadline is not None:
            object.__setattr__(self, "deadline", positive("deadline", self.deadline))
        given += ["full_turn"] if self.full_turn else []
        if len(given) != 1:
            raise InputError(
                "goal", "exactly one of energy, speed, full_turn=true must be given", given
            )


@dataclass(frozen=True, kw_only=True)
class Rotate:
    """One turn of steady rotation, the same again and again.

    Parameters
    ----------
    mean_speed : float, optional
        Mean speed that the rotation has to have, 2π by its period [rad/s]; free by default.
    load_torque : float, optional
        Torque that a load takes from the wheel [N m].
    direction : {1, -1}, optional
        Direction of turning, counter-clockwise by default.

    Raises
    ------
    InputError
        If the speed is not positive, the torque negative, or the direction neither 1 nor -1.
    """

    mean_speed: float | None = None
    load_torque: float = 0.0
    direction: int = 1

    def __post_init__(self) -> None:
        if self.mean_speed is not None:
            object.__setattr__(self, "mean_speed", positive("mean_speed", self.mean_speed))
        object.__setattr__(self, "load_torque", non_negative("load_torque", self.load_torque))
        if self.direction not in (1, -1) or isinstance(self.direction, bool):
            raise InputError("direction", "must be 1 or -1", self.direction)
        object.__setattr__(self, "direction", int(self.direction))


Task = Pump | SpinUp | Rotate
