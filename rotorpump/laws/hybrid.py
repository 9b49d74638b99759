# SPDX-License-Identifier: BSD-3-Clause
"""Event-exact simulation of a mass that jumps between the ends of its stroke, for any rule.

Between jumps the mass is held and the wheel obeys the momentum form of the equations; a jump
leaves the angle and the angular momentum as they are. Stretches end at standstills, lowest
points, tops and switches of the rule, each located by root finding on the integrator's dense
output.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from rotorpump.errors import RotorpumpError
from rotorpump.laws.pointwise import Preference
from rotorpump.laws.stretch import End, Instant, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import momentum_rate, total_inertia, wheel_speed

RELATIVE = 1e-11
ABSOLUTE = 1e-13
"""Error allowed in a step, in units of one radian and of the momentum of a large swing."""

SNAP = 1e-9
"""A switch this near to a lowest point or top [rad] is taken to lie on it; a wheel that stands
this near to hanging, or to where friction just holds it, stays there."""

TIE = 1e-10
AHEAD = 1e-6
"""Where the rule is undecided within TIE, it is asked again this much further on [rad]."""

PIECE = 0.015
FEWEST_PIECES = 8
MOST_PIECES = 5000
"""Length of the cubic pieces between nodes [s], and the fewest and most of them in a stretch."""

STIFF = 1000.0
"""A stretch over so many decay times of the wheel speed is left to an implicit method."""

TINY_TIME = 1e-10
"""A stretch shorter than this [s] needs no nodes between its ends."""

STEP = 0.3
"""First step of the integrator, in radians of the swing or turn."""

SETTLING = 60.0
"""A stretch may last this many decay times of an overdamped wheel, then it counts as stuck."""


@dataclass
class _Event:
    """A zero crossing that ends the integration."""

    value: Callable[[float, float], float]
    direction: float
    end: End
    terminal: bool = True

    def __call__(self, _time: float, change: Any) -> float:
        turned, gained = change.tolist()
        return self.value(turned, gained)


def march(
    constants: Constants,
    preference: Preference,
    start: Instant,
    horizon: float = math.inf,
    speed: float = math.inf,
) -> Iterator[Stretch]:
    """Follow the motion stretch by stretch.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    preference : callable
        The rule, see `Preference`; it is obeyed at once from the start on.
    start : Instant
        Where the motion begins; its ``direction`` is not read.
    horizon : float, optional
        Time at which to stop [s].
    speed : float, optional
        Magnitude of the wheel speed at which to stop [rad/s], if it is passed within a stretch.

    Yields
    ------
    Stretch
        The last one ends with ``TIME``, ``SPEED`` or ``STUCK``; without a horizon there may be no
        last one.

    Notes
    -----
    On a switch the rate of the pointwise preference with the angle is the same at both ends of the
    stroke, because the gain of H² is; so a switch never reverses at once, and the mass never
    chatters between the ends.
    """
    now, end = start, End.TIME
    while horizon - now.time > TINY_TIME:
        now = _obey(constants, preference, now, end)
        if now.direction == 0:
            yield _standing(constants, now, horizon)
            return
        stretch = _hold(constants, preference, now, horizon, speed)
        yield stretch
        if stretch.end in (End.TIME, End.SPEED, End.STUCK):
            return
        now, end = stretch.last, stretch.end


def _obey(constants: Constants, preference: Preference, now: Instant, end: End) -> Instant:
    """Make the move that the rule asks for; direction 0 if the wheel stays at rest.

    From a standstill the wheel starts with the mass at the outer end, or not at all: the arm is
    the longest there.
    """
    if now.momentum == 0.0:
        pull = -_full_pull(constants) * math.sin(now.angle)
        slack = SNAP if constants.coulomb > 0.0 or math.cos(now.angle) > 0.0 else 0.0
        if abs(pull) <= constants.coulomb + slack * _full_pull(constants):
            return replace(now, direction=0)
        return replace(now, radial=constants.outer, direction=1 if pull > 0.0 else -1)
    direction = 1 if now.momentum > 0.0 else -1
    if end is End.SWITCH:
        outside = now.radial != constants.outer
    else:
        urge = preference(now.angle, now.momentum, direction)
        outside = (_urge_ahead(constants, preference, now) if abs(urge) < TIE else urge) > 0.0
    radial = constants.outer if outside else constants.inner
    return replace(now, radial=radial, direction=direction)


def _urge_ahead(constants: Constants, preference: Preference, now: Instant) -> float:
    """Preference a little further along the motion."""
    direction = 1 if now.momentum > 0.0 else -1
    speed = wheel_speed(constants, now.momentum, now.radial)
    rate = momentum_rate(math, constants, now.angle, speed, now.radial, direction)
    momentum = now.momentum + rate * AHEAD / abs(speed)
    return preference(now.angle + direction * AHEAD, momentum, direction)


def _hold(
    constants: Constants, preference: Preference, now: Instant, horizon: float, speed: float
) -> Stretch:
    """Integrate with the mass held until something happens.

    The changes of angle and momentum are integrated, not their values, so that the error stays
    small beside what a half turn adds even when the wheel is fast.
    """
    inertia = total_inertia(constants, now.radial)
    swing = math.sqrt(_full_pull(constants) * total_inertia(constants, constants.outer))
    # Beyond a standstill, which ends the stretch, quadratic friction of a given sign runs away.
    most_back = 10.0 * swing / inertia

    def rates(_time: float, change: Any) -> tuple[float, float]:
        turned, gained = change.tolist()
        pace = (now.momentum + gained) / inertia
        rubbed = pace if pace * now.direction > -most_back else -most_back * now.direction
        return pace, momentum_rate(
            math, constants, now.angle + turned, rubbed, now.radial, now.direction
        )

    target = _next_landmark(now)
    events = _events(constants, preference, now, target, speed)
    patience = SETTLING * _decay_time(constants, now.radial)
    length = min(horizon - now.time, patience)
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.integrate import solve_ivp  # noqa: PLC0415

    result = solve_ivp(
        rates,
        (0.0, length),
        np.zeros(2),
        method="LSODA" if length * _decay_rate(constants, now) > STIFF else "DOP853",
        rtol=RELATIVE,
        atol=(ABSOLUTE, ABSOLUTE * swing),
        first_step=min(length, _first_step(constants, now)),
        events=events,
        dense_output=True,
    )
    if result.status < 0:
        raise RotorpumpError(f"the motion could not be integrated: {result.message}")
    hit = next((i for i, times in enumerate(result.t_events) if times.size), None)
    if hit is None:
        end = End.TIME if horizon - now.time <= patience else End.STUCK
        last = result.y[:, -1]
    else:
        end = events[hit].end
        last = result.y_events[hit][-1]
    return _stretch(now, result, last, end, target)


def _decay_time(constants: Constants, radial: float) -> float:
    """Time scale of the slowest motion of the held mass [s]: a swing, or an overdamped creep."""
    pull = constants.mass * constants.gravity * max(radial, 1e-3 * constants.outer)
    return float((total_inertia(constants, radial) / pull) ** 0.5 + constants.viscous / pull)


def _full_pull(constants: Constants) -> float:
    """Largest torque of the weight [N m]."""
    return float(constants.mass * constants.gravity * constants.outer)


def _decay_rate(constants: Constants, now: Instant) -> float:
    """Fastest rate at which friction slows the wheel in this stretch [1/s]."""
    inertia = total_inertia(constants, now.radial)
    falling = math.sqrt(4.0 * _full_pull(constants) / inertia)
    pace = max(abs(now.momentum) / inertia, falling)
    if constants.quadratic > 0.0:
        terminal = math.sqrt(_full_pull(constants) / constants.quadratic)
        pace = max(abs(now.momentum) / inertia, min(falling, terminal))
    return float((constants.viscous + 2.0 * constants.quadratic * pace) / inertia)


def _first_step(constants: Constants, now: Instant) -> float:
    """Guess the first step [s]; the integrator corrects it, its own guess is far too short."""
    inertia = total_inertia(constants, now.radial)
    pace = math.sqrt(_full_pull(constants) / inertia) + abs(now.momentum) / inertia
    return float(STEP / (pace + _decay_rate(constants, now)))


def _next_landmark(now: Instant) -> float:
    """Next lowest point or top ahead of the wheel [rad]."""
    turns = now.direction * now.angle / math.pi
    count = math.floor(turns) + 1
    if (count - turns) * math.pi < SNAP:
        count += 1
    return now.direction * count * math.pi


def _events(
    constants: Constants, preference: Preference, now: Instant, target: float, speed: float
) -> list[_Event]:
    """Everything that can end a stretch that begins now."""
    sign = now.direction
    outside = now.radial == constants.outer
    at_target = End.TOP if round(target / math.pi) % 2 else End.BOTTOM
    events = [
        _Event(lambda turned, gained: now.momentum + gained, -sign, End.TURN),
        _Event(lambda turned, gained: now.angle + turned - target, sign, at_target),
        _Event(
            lambda turned, gained: preference(now.angle + turned, now.momentum + gained, sign),
            -1 if outside else 1,
            End.SWITCH,
        ),
    ]
    if math.isfinite(speed):
        wanted = speed * total_inertia(constants, now.radial)
        events.append(
            _Event(lambda turned, gained: sign * (now.momentum + gained) - wanted, 1, End.SPEED)
        )
    return events


def _stretch(now: Instant, result: Any, last: Any, end: End, target: float) -> Stretch:
    """Sample the integration at even times, and put its end exactly where it belongs."""
    length = float(result.t[-1])
    count = 1
    if length > TINY_TIME:
        count = 3 * min(MOST_PIECES, max(FEWEST_PIECES, math.ceil(length / PIECE)))
    times = np.linspace(0.0, length, count + 1)
    turned, gained = result.sol(times)
    angle = now.angle + turned
    momentum = now.momentum + gained
    angle[0], momentum[0] = now.angle, now.momentum
    angle[-1], momentum[-1] = now.angle + last[0], now.momentum + last[1]
    if end is End.TURN:
        momentum[-1] = 0.0
    if end is End.SWITCH and abs(angle[-1] - target) < SNAP:
        end = End.TOP if round(target / math.pi) % 2 else End.BOTTOM
    if end in (End.TOP, End.BOTTOM):
        angle[-1] = target
    return Stretch(now.time + times, angle, momentum, now.radial, now.direction, end)


def _standing(constants: Constants, now: Instant, horizon: float) -> Stretch:
    """Stand until the horizon, or for the time of a small swing if there is none."""
    length = horizon - now.time
    if not math.isfinite(length):
        length = 2.0 * math.pi * _decay_time(constants, constants.outer)
    return Stretch(
        np.array([now.time, now.time + length]),
        np.full(2, now.angle),
        np.full(2, now.momentum),
        now.radial,
        0,
        End.STUCK,
    )
