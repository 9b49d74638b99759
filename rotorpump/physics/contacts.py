# SPDX-License-Identifier: BSD-3-Clause
"""What end stops, rails and axle do to wheel and mass: rest, stick, slide.

A mass that rests off its stops sticks while the force that keeps it there is at most the rubbing;
on a stop, which bears whatever presses on it, rubbing is added to the stop. A standing wheel
sticks while the torque on it is at most what friction and load hold.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import NamedTuple

from rotorpump.physics.constants import Constants
from rotorpump.physics.forces import accelerations, standing_torque
from rotorpump.physics.phases import State
from rotorpump.physics.state import HOLD, Motion, Push, Slides

Course = Callable[[float], float]
"""A force [N] or an acceleration [m/s2] over time [s]."""

LEAVING_FORCE = 1e-8
"""Force per mass beyond what holds the mass at which it leaves [m/s2]; parts leaving from rest."""

SLIP_MARGIN = 1e-9
"""Relative excess over the held torque at which a stuck wheel lets go; parts the two events."""


class Action(NamedTuple):
    """What determines the motion along one axis over a stretch of time.

    Parameters
    ----------
    force : callable, optional
        Force of the drive on the mass over time [N].
    acceleration : callable, optional
        Enforced acceleration over time [m/s2], whatever force it takes. With neither, the mass
        stays where it is.
    """

    force: Course | None = None
    acceleration: Course | None = None


class Rail(NamedTuple):
    """End stops and rubbing of one axis.

    Parameters
    ----------
    low, high : float
        Ends of the stroke [m].
    bearing : bool
        Whether there are stops that bear the mass at them.
    rubbing : float
        Coulomb friction [N].
    """

    low: float
    high: float
    bearing: bool
    rubbing: float

    def seat(self, place: float) -> float:
        """Which stop the mass is at: 1 the high one, -1 the low one, 0 none."""
        if not self.bearing:
            return 0.0
        return 1.0 if place >= self.high else -1.0 if place <= self.low else 0.0


class Grip(NamedTuple):
    """What the rail of a driven axis does: hold the mass, or rub against its way.

    Parameters
    ----------
    holds : bool
        Whether the mass stays where it is.
    seat : float
        The stop that it is at, see `Rail.seat`; only of a mass at rest.
    way : float
        Direction in which it slides, 1 or -1; 0 where nothing depends on it.
    """

    holds: bool = False
    seat: float = 0.0
    way: float = 0.0


class Contact(NamedTuple):
    """Direction of the wheel, 0 where it sticks, and the grip along both axes."""

    direction: float
    grips: tuple[Grip, Grip]


def push_over_time(action: Action, rail: Rail, grip: Grip) -> Callable[[float], Push]:
    """Return what acts along one axis, over time [s]."""
    force, acceleration = action.force, action.acceleration
    if force is not None and not grip.holds:
        rubbed = grip.way * rail.rubbing
        return lambda time: Push(force(time) - rubbed)
    if acceleration is not None:
        return lambda time: Push(0.0, True, acceleration(time))
    return lambda _: HOLD


class Situation(NamedTuple):
    """A contact under given actions, and the motion that follows from it.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    actions : tuple of Action
        What acts along the radial and the tangential axis.
    rails : tuple of Rail
        Stops and rubbing of both.
    contact : Contact
        What the stops, rails and axle do.
    pushes : tuple of callable
        See `push_over_time`.
    """

    constants: Constants
    actions: tuple[Action, Action]
    rails: tuple[Rail, Rail]
    contact: Contact
    pushes: tuple[Callable[[float], Push], Callable[[float], Push]]

    def motion(self, time: float, state: State) -> Motion:
        """Accelerations and forces."""
        direction = self.contact.direction
        return accelerations(
            math,
            self.constants,
            state[0],
            state[1],
            Slides(state[2], state[3], state[4], state[5]),
            self.pushes[0](time),
            self.pushes[1](time),
            direction,
            stuck=direction == 0.0,
        )

    def unheld_torque(self, time: float, state: State) -> float:
        """Torque on the standing wheel beyond what friction and load hold [N m]."""
        torque, held = standing_torque(
            math,
            self.constants,
            state[0],
            Slides(state[2], state[3], state[4], state[5]),
            self.pushes[0](time),
            self.pushes[1](time),
        )
        return float(abs(torque) - (held + self.constants.load_torque) * (1.0 + SLIP_MARGIN))

    def unheld_force(self, axis: int, time: float, motion: Motion) -> float:
        """Force on a resting mass beyond what rail and stop hold [N]."""
        drive = self.actions[axis].force
        assert drive is not None
        demand = (motion.radial_contact, motion.tangential_contact)[axis] - drive(time)
        seat = self.contact.grips[axis].seat
        size = seat * demand if seat else abs(demand)
        return float(size - self.rails[axis].rubbing)

    def violation(self, time: float, state: State) -> float:
        """How far the motion contradicts the contact; not above zero if it does not."""
        motion = self.motion(time, state)
        worst = -math.inf
        if state[1] == 0.0:
            direction = self.contact.direction
            stands = direction == 0.0
            worst = self.unheld_torque(time, state) if stands else -direction * motion.wheel
        for axis, acceleration in enumerate((motion.radial, motion.tangential)):
            grip = self.contact.grips[axis]
            if grip.holds:
                worst = max(worst, self.unheld_force(axis, time, motion))
            elif state[3 + 2 * axis] == 0.0 and self.actions[axis].force is not None:
                # a mass that starts to slide does so in its way, and away from a stop
                worst = max(worst, -grip.way * acceleration, grip.seat * acceleration)
        return worst


def grips_of(action: Action, rail: Rail, place: float, speed: float) -> list[Grip]:
    """Return what the rail may do to the mass at this place and speed; rest stands first."""
    if action.force is None:
        return [Grip()]
    if speed != 0.0:
        return [Grip(way=math.copysign(1.0, speed) if rail.rubbing else 0.0)]
    seat = rail.seat(place)
    ways = [way for way in (1.0, -1.0) if way != seat] if rail.rubbing else [0.0]
    found = [Grip(seat=seat, way=way) for way in ways]
    return [Grip(holds=True, seat=seat), *found] if seat or rail.rubbing else found


def directions_of(constants: Constants, speed: float) -> list[float]:
    """Directions in which the wheel may turn at this speed; rest stands first."""
    if speed != 0.0:
        return [math.copysign(1.0, speed)]
    return [0.0, 1.0, -1.0] if depends_on_direction(constants) else [1.0]


def depends_on_direction(constants: Constants) -> bool:
    """Whether friction or load depend on the direction in which the wheel turns."""
    c = constants
    return bool(c.coulomb or c.quadratic or c.load_arm or c.load_torque)
