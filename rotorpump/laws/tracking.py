# SPDX-License-Identifier: BSD-3-Clause
"""The controller of one drive: towards the end that the rule wants, within every limit.

Symbolic, for the compiled loop.
"""

from __future__ import annotations

from typing import Any

import casadi

from rotorpump.laws.drive import Drive, unlimited
from rotorpump.laws.lead_rule import TINY, Present, lean_of
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import total_inertia

RAMP_SHARE = 0.7
"""Share of the rate of the force that the law plans with."""

HALVINGS = 5
"""Halvings of the range in which the next change of the force is looked for."""

BRAKE_SHARE = 0.9
"""Share of the available braking that the law plans with; the rest is reserve."""


def wanted_acceleration(
    c: Constants, axis: str, now: Present, drive: Drive, goal: Any, step: Any, present: Any
) -> Any:
    """Acceleration relative to the wheel that tracks a braking curve towards ``goal`` [m/s2].

    Parameters
    ----------
    c : Constants
        The rig's numbers.
    axis : str
        The axis.
    now : Present
        The state.
    drive : Drive
        Drive of the axis.
    goal : symbol
        Where the mass shall come to rest [m].
    step : symbol
        Step of the controller [s].
    present : symbol
        Acceleration that the drive's last force gives [m/s2]; read where the force's rate is
        limited.
    """
    position = getattr(now.slides, axis)
    slide_speed = getattr(now.slides, f"{axis}_speed")
    outward = casadi.if_else(goal > position, 1.0, -1.0)
    room = casadi.fabs(goal - position)
    approach = outward * slide_speed
    brake = _braking(c, axis, now, drive, goal, outward)
    # The speed after this step from which the room then left is just enough to brake.
    gain = 0.5 * brake * step
    spare = casadi.fmax(gain**2 + 2.0 * brake * room - brake * approach * step, 0.0)
    pace = casadi.fmax(casadi.sqrt(spare) - gain, 0.0)
    landing = casadi.fmax(2.0 * room / step - approach, 0.0)
    wanted = outward * casadi.fmin(casadi.fmin(drive.speed, pace), landing)
    acceleration = (wanted - slide_speed) / step
    if unlimited(drive.force_rate):
        return acceleration
    return outward * _eased(
        outward * acceleration, approach, outward * present, brake, room, drive, c.mass, step
    )


def within_limits(drive: Drive, force: Any, slide_speed: Any, last: Any, step: Any) -> Any:
    """Force that the drive's limits leave of a wanted one [N].

    The rate of the force gives way where the others demand it.
    """
    if not unlimited(drive.force_rate):
        change = drive.force_rate * step
        force = casadi.fmax(last - change, casadi.fmin(last + change, force))
    low, high = -drive.force, drive.force
    if not unlimited(drive.power):
        powered = drive.power / casadi.fmax(casadi.fabs(slide_speed), TINY)
        low, high = casadi.fmax(low, -powered), casadi.fmin(high, powered)
    if not unlimited(drive.stall_force):
        share = slide_speed / drive.no_load_speed
        high = casadi.fmin(high, casadi.fmax(drive.stall_force * (1.0 - share), 0.0))
        low = casadi.fmax(low, casadi.fmin(-drive.stall_force * (1.0 + share), 0.0))
    return casadi.fmax(low, casadi.fmin(high, force))


def _braking(c: Constants, axis: str, now: Present, drive: Drive, goal: Any, outward: Any) -> Any:
    """Deceleration on the way to the goal that the law plans with [m/s2]."""
    lean = lean_of(c, axis, now.angle)

    def load(position: Any) -> Any:
        there = now.slides._replace(**{axis: position})
        return position * (now.momentum / total_inertia(c, there)) ** 2 + lean

    force = drive.force
    if not unlimited(drive.power):
        force = casadi.fmin(force, drive.power / drive.speed)
    strength = force / c.mass
    here, there = load(getattr(now.slides, axis)), load(goal)
    brake = BRAKE_SHARE * casadi.fmin(strength - outward * here, strength - outward * there)
    return casadi.fmax(brake, TINY)


def _eased(
    acceleration: Any,
    approach: Any,
    present: Any,
    brake: Any,
    room: Any,
    drive: Drive,
    mass: Any,
    step: Any,
) -> Any:
    """Acceleration towards the goal that leaves the force time to change [m/s2].

    The largest within one step's change of the force after which the mass can still stop in the
    room that is left, found by bisection; at the goal, what keeps it there.
    """
    jerk = RAMP_SHARE * drive.force_rate / mass
    change = drive.force_rate / mass * step

    def safe(chosen: Any) -> Any:
        speed = approach + step * chosen
        left = room - step * (approach + 0.5 * step * chosen)
        rising = casadi.fmax(chosen, 0.0)
        slow = speed + 0.5 * rising**2 / jerk <= drive.speed
        return casadi.logic_and(slow, _stopping_way(speed, chosen, brake, jerk) <= left)

    most = casadi.fmin(acceleration, present + change)
    moving = casadi.fmin(most, present - change)
    span = most - moving
    found = safe(most)
    for _ in range(HALVINGS):
        span = 0.5 * span
        moving = casadi.if_else(safe(moving + span), moving + span, moving)
    moving = casadi.if_else(found, most, moving)
    return casadi.if_else(room > 0.0, moving, acceleration)


def _stopping_way(speed: Any, present: Any, brake: Any, jerk: Any) -> Any:
    """Way to a stop with a limited rate of the acceleration [m].

    Notes
    -----
    From speed v and acceleration a the braking grows at the rate j to at most p: v t + a t²/2
    - j t³/6 with t = (a + p)/j. Then it stays at p, and its release takes p³/(6 j²). It peaks at
    √(j v + a²/2) where that is less than what is available. A mass that is braked so hard that it
    stops during the release, j v < a²/2, needs no more way than it is given.
    """
    speed = casadi.fmax(speed, 0.0)
    peak = casadi.fmin(brake, casadi.sqrt(jerk * speed + 0.5 * present**2))
    ramp = casadi.fmax((present + peak) / jerk, 0.0)
    after = speed + present * ramp - 0.5 * jerk * ramp**2
    way = (speed + 0.5 * present * ramp) * ramp - jerk * ramp**3 / 6.0
    steady = casadi.fmax(after**2 - (0.5 * peak**2 / jerk) ** 2, 0.0)
    way = way + 0.5 * steady / casadi.fmax(peak, TINY) + peak**3 / (6.0 * jerk**2)
    enough = casadi.logic_and(present < 0.0, jerk * speed <= 0.5 * present**2)
    return casadi.if_else(enough, 0.0, way)
