# SPDX-License-Identifier: BSD-3-Clause
"""The practical law: move the mass a little ahead of the lowest and the turning point.

The rule of the ideal law with two leads. The inward move starts when the time to the lowest point
falls below ``bottom`` times the move time; the outward move when the time to the turning point or
the top falls below ``turn`` times the move time. A speed-tracking drive with the rig's limits
carries the moves out, sampled as a digital controller would be.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Any

import casadi
import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import momentum_rate, total_inertia, wheel_speed
from rotorpump.rig.rig import Rig

Array = NDArray[np.float64]

CHUNK = 256
"""Steps that one call of the compiled loop makes."""

MOVE_STEPS = 16
"""Steps that a move from end to end takes at least; a sampled controller needs some to brake."""

TINY = 1e-9
BRAKE_SHARE = 0.9
"""Share of the available braking that the law plans with; the rest is reserve."""


@dataclass(frozen=True)
class Leads:
    """The two numbers of the practical law, in units of the move time."""

    bottom: float
    turn: float


@dataclass(frozen=True, eq=False)
class LeadRun:
    """Samples of a motion under the practical law, one per controller step.

    Parameters
    ----------
    leads : Leads
        The leads it ran with.
    step : float
        Time between samples [s].
    states : ndarray, shape (4, n)
        Angle [rad], momentum [kg m2/s], position [m] and speed [m/s] of the mass.
    forces : ndarray, shape (n - 1,)
        Force of the drive during each step [N].
    """

    leads: Leads
    step: float
    states: Array
    forces: Array

    @property
    def time(self) -> Array:
        """Times of the samples [s], shape (n,)."""
        return np.asarray(np.arange(self.states.shape[1]) * self.step, dtype=float)

    def cut(self, steps: int) -> LeadRun:
        """Return the first steps only."""
        return LeadRun(self.leads, self.step, self.states[:, : steps + 1], self.forces[:steps])


def _move_time(load: Any, force: Any, speed: Any, mass: Any, distance: Any) -> Any:
    """Least time for a rest-to-rest move against a constant load [s]."""
    floor = 0.02 * force / mass
    start = casadi.fmax((force - load) / mass, floor)
    stop = casadi.fmax((force + load) / mass, floor)
    peak = casadi.sqrt(2.0 * distance * start * stop / (start + stop))
    ramps = 0.5 * (1.0 / start + 1.0 / stop)
    return casadi.if_else(peak < speed, 2.0 * distance / peak, distance / speed + speed * ramps)


def _target(c: Constants, drive: Any, leads: Any, state: Any) -> Any:
    """1 where the law wants the mass outside, 0 where it wants it inside."""
    angle, momentum, radial, _ = state
    speed = wheel_speed(c, momentum, radial)
    pace = casadi.fmax(casadi.fabs(speed), TINY)
    from_bottom = casadi.fabs(casadi.atan2(casadi.sin(angle), casadi.cos(angle)))
    middle = 0.5 * (c.inner + c.outer)
    load = c.mass * (middle * speed**2 + c.gravity * casadi.cos(angle))
    distance = c.outer - c.inner
    time_in = _move_time(load, drive[1], drive[0], c.mass, distance)
    time_out = _move_time(-load, drive[1], drive[0], c.mass, distance)
    slowing = c.mass * c.gravity * radial * casadi.fabs(casadi.sin(angle))
    to_turn = casadi.fmin(
        pace * total_inertia(c, radial) / casadi.fmax(slowing, TINY),
        (casadi.pi - from_bottom) / pace,
    )
    falling = speed * casadi.sin(angle) <= 0.0
    fall_out = from_bottom / pace > leads[0] * time_in
    rise_out = to_turn < leads[1] * time_out
    return casadi.if_else(falling, fall_out, rise_out)


def _drive_force(c: Constants, drive: Any, state: Any, goal: Any, step: Any) -> Any:
    """Force of a drive that tracks a braking curve towards ``goal`` within its limits [N]."""
    angle, momentum, radial, slide_speed = state
    lean = c.gravity * casadi.cos(angle)
    here = radial * wheel_speed(c, momentum, radial) ** 2 + lean
    there = goal * wheel_speed(c, momentum, goal) ** 2 + lean
    middle = radial + 0.5 * step * slide_speed
    halfway = angle + 0.5 * step * wheel_speed(c, momentum, radial)
    load = middle * wheel_speed(c, momentum, middle) ** 2 + c.gravity * casadi.cos(halfway)
    outward = casadi.if_else(goal > radial, 1.0, -1.0)
    room = casadi.fabs(goal - radial)
    approach = outward * slide_speed
    strength = drive[1] / c.mass
    brake = BRAKE_SHARE * casadi.fmin(strength - outward * here, strength - outward * there)
    brake = casadi.fmax(brake, TINY)
    # The speed after this step from which the room then left is just enough to brake.
    gain = 0.5 * brake * step
    spare = casadi.fmax(gain**2 + 2.0 * brake * room - brake * approach * step, 0.0)
    pace = casadi.fmax(casadi.sqrt(spare) - gain, 0.0)
    landing = casadi.fmax(2.0 * room / step - approach, 0.0)
    wanted = outward * casadi.fmin(casadi.fmin(drive[0], pace), landing)
    force = c.mass * ((wanted - slide_speed) / step - load)
    return casadi.fmax(-drive[1], casadi.fmin(drive[1], force))


def _rates(c: Constants, state: Any, force: Any, direction: Any) -> Any:
    """State rates under a held drive force, the end stops bearing what presses on them."""
    angle, momentum, radial, slide_speed = state
    speed = wheel_speed(c, momentum, radial)
    push = force / c.mass + radial * speed**2 + c.gravity * casadi.cos(angle)
    outside = casadi.logic_and(radial >= c.outer, push > 0.0)
    inside = casadi.logic_and(radial <= c.inner, push < 0.0)
    acceleration = casadi.if_else(casadi.logic_or(outside, inside), 0.0, push)
    turning = momentum_rate(casadi, c, angle, speed, radial, direction)
    return [speed, turning, slide_speed, acceleration]


def _friction_direction(c: Constants, state: Any) -> tuple[Any, Any]:
    """Sign with which friction acts, and whether the standing wheel sticks."""
    speed = wheel_speed(c, state[1], state[2])
    pull = momentum_rate(casadi, c, state[0], 0.0, state[2], 0.0)
    standing = casadi.fabs(speed) < TINY
    stuck = casadi.logic_and(standing, casadi.fabs(pull) <= c.coulomb)
    moving = casadi.if_else(standing, casadi.sign(pull), casadi.sign(speed))
    return casadi.if_else(stuck, 0.0, moving), stuck


@cache
def _loop() -> Any:
    """Compiled loop of CHUNK Runge-Kutta steps: (state, rig, drive, leads, step) to a history."""
    symbols = casadi.SX.sym("x", 4)
    rig = casadi.SX.sym("c", len(Constants._fields))
    drive = casadi.SX.sym("drive", 2)
    leads = casadi.SX.sym("leads", 2)
    step = casadi.SX.sym("h")
    c = Constants(*casadi.vertsplit(rig))
    state = casadi.vertsplit(symbols)
    goal = casadi.if_else(_target(c, drive, leads, state), c.outer, c.inner)
    force = _drive_force(c, drive, state, goal, step)
    direction, stuck = _friction_direction(c, state)

    def advance(share: float, rates: Any) -> list[Any]:
        return [x + share * step * r for x, r in zip(state, rates, strict=True)]

    first = _rates(c, state, force, direction)
    second = _rates(c, advance(0.5, first), force, direction)
    third = _rates(c, advance(0.5, second), force, direction)
    fourth = _rates(c, advance(1.0, third), force, direction)
    after = [
        x + step / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4)
        for x, k1, k2, k3, k4 in zip(state, first, second, third, fourth, strict=True)
    ]
    # Coulomb friction stops the wheel, it never turns it back.
    reversed_by_friction = casadi.logic_and(after[1] * direction < 0.0, c.coulomb > 0.0)
    after[1] = casadi.if_else(casadi.logic_or(reversed_by_friction, stuck), 0.0, after[1])
    after[0] = casadi.if_else(stuck, state[0], after[0])
    beyond = casadi.logic_or(after[2] > c.outer, after[2] < c.inner)
    after[3] = casadi.if_else(beyond, 0.0, after[3])
    after[2] = casadi.fmax(c.inner, casadi.fmin(c.outer, after[2]))
    one = casadi.Function(
        "step", [symbols, rig, drive, leads, step], [casadi.vertcat(*after), force], {"cse": True}
    )
    return one.mapaccum(CHUNK)


def controller_step(rig: Rig) -> float:
    """Step of the sampled controller: short against a move and against a swing [s]."""
    swing = rig.pendulum_period
    force, speed = rig.radial.force / rig.mass, rig.radial.speed
    length = rig.radial.length
    move = max(2.0 * (length / force) ** 0.5, length / speed)
    return float(min(max(move / 60.0, swing / 1500.0), swing / 400.0))


def usable_drive(rig: Rig, step: float) -> tuple[float, float]:
    """Speed [m/s] and force [N] that a controller with this step can make use of."""
    slide, move = rig.radial, MOVE_STEPS * step
    speed = min(slide.speed, 2.0 * slide.length / move)
    return speed, min(slide.force, 4.0 * rig.mass * slide.length / move**2)


def run_leads(
    rig: Rig,
    start: tuple[float, float, float, float],
    leads: Leads,
    step: float,
    steps: int,
    *,
    done: Callable[[Array], bool] = lambda states: False,
) -> LeadRun:
    """Simulate the practical law.

    Parameters
    ----------
    rig : Rig
        The rig; of a drive that is faster, only as much is used as the sampling can follow.
    start : tuple of float
        Angle [rad], momentum [kg m2/s], position [m] and speed [m/s] of the mass.
    leads : Leads
        The law's two numbers.
    step : float
        Step of the controller and of the integration (classical Runge-Kutta) [s].
    steps : int
        Number of steps at most.
    done : callable, optional
        Called with all states so far, shape (4, n), now and then; true ends the run early.
    """
    drive = usable_drive(rig, step)
    constant = [
        np.repeat(np.array(values, dtype=float)[:, None], CHUNK, axis=1)
        for values in (Constants.of(rig), drive, (leads.bottom, leads.turn), (step,))
    ]
    states = [np.array(start, dtype=float)[:, None]]
    forces: list[Array] = []
    for _ in range(-(-steps // CHUNK)):
        history, force = _loop()(states[-1][:, -1], *constant)
        states.append(np.array(history))
        forces.append(np.array(force).ravel())
        if done(np.hstack(states)):
            break
    return LeadRun(leads, step, np.hstack(states), np.concatenate(forces)).cut(steps)
