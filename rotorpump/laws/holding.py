# SPDX-License-Identifier: BSD-3-Clause
"""The wheel with the mass held, up to the next event, integrated in the momentum form.

Stretches end at standstills, lowest points, tops and switches of the rule, each located by root
finding on the integrator's dense output.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from rotorpump.errors import RotorpumpError
from rotorpump.laws.moves import Instant, full_pull, full_swing, moment_at
from rotorpump.laws.pointwise import Urge
from rotorpump.laws.stretch import End, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import momentum_rate, total_inertia
from rotorpump.physics.state import Slides

RELATIVE = 1e-11
ABSOLUTE = 1e-13
"""Error allowed in a step, in units of one radian and of the momentum of a large swing."""

SNAP = 1e-9
"""A switch this near to a lowest point or top [rad] is taken to lie on it; a wheel that stands
this near to hanging, or to where friction just holds it, stays there."""

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


Urges = Mapping[str, Mapping[float, Urge]]
"""The urges of each driven axis, see `Rule`."""


@dataclass
class _Event:
    """A zero crossing that ends the integration."""

    value: Callable[[float, float], float]
    direction: float
    end: End
    axis: str = ""
    terminal: bool = True

    def __call__(self, _time: float, change: Any) -> float:
        turned, gained = change.tolist()
        return self.value(turned, gained)


def hold(constants: Constants, urges: Urges, now: Instant, horizon: float, speed: float) -> Stretch:
    """Integrate with the mass held until something happens.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    urges : mapping of str to mapping of float to Urge
        What each driven axis watches; it switches to a position that comes to be better.
    now : Instant
        Where the stretch begins, with its direction.
    horizon, speed : float
        Time [s] and magnitude of the wheel speed [rad/s] at which to stop.

    Notes
    -----
    The changes of angle and momentum are integrated, not their values, so that the error stays
    small beside what a half turn adds even when the wheel is fast.
    """
    slides, sign = now.slides, now.direction
    inertia = total_inertia(constants, slides)
    swing = full_swing(constants)
    # Beyond a standstill, which ends the stretch, quadratic friction of a given sign runs away.
    most_back = 10.0 * swing / inertia

    def rates(_time: float, change: Any) -> tuple[float, float]:
        turned, gained = change.tolist()
        pace = (now.momentum + gained) / inertia
        rubbed = pace if pace * sign > -most_back else -most_back * sign
        return pace, momentum_rate(math, constants, now.angle + turned, rubbed, slides, sign)

    target = _next_landmark(now)
    events = _events(constants, urges, now, target, speed)
    patience = SETTLING * slowest_time(constants, slides)
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
        return _stretch(now, result, result.y[:, -1], _Event(_never, 0.0, end), target)
    return _stretch(now, result, result.y_events[hit][-1], events[hit], target)


def slowest_time(constants: Constants, slides: Slides) -> float:
    """Time scale of the slowest motion of the held mass [s]: a swing, or an overdamped creep."""
    moment = constants.gravity * moment_at(constants, slides)
    pull = max(moment, 1e-3 * full_pull(constants))
    return float((total_inertia(constants, slides) / pull) ** 0.5 + constants.viscous / pull)


def _decay_rate(constants: Constants, now: Instant) -> float:
    """Fastest rate at which friction slows the wheel in this stretch [1/s]."""
    inertia = total_inertia(constants, now.slides)
    falling = math.sqrt(4.0 * full_pull(constants) / inertia)
    pace = max(abs(now.momentum) / inertia, falling)
    if constants.quadratic > 0.0:
        terminal = math.sqrt(full_pull(constants) / constants.quadratic)
        pace = max(abs(now.momentum) / inertia, min(falling, terminal))
    return float((constants.viscous + 2.0 * constants.quadratic * pace) / inertia)


def _first_step(constants: Constants, now: Instant) -> float:
    """Guess the first step [s]; the integrator corrects it, its own guess is far too short."""
    inertia = total_inertia(constants, now.slides)
    pace = math.sqrt(full_pull(constants) / inertia) + abs(now.momentum) / inertia
    return float(STEP / (pace + _decay_rate(constants, now)))


def _next_landmark(now: Instant) -> float:
    """Next lowest point or top ahead of the wheel [rad]."""
    turns = now.direction * now.angle / math.pi
    count = math.floor(turns) + 1
    if (count - turns) * math.pi < SNAP:
        count += 1
    return now.direction * count * math.pi


def _landmark(target: float) -> End:
    return End.TOP if round(target / math.pi) % 2 else End.BOTTOM


def _never(_turned: float, _gained: float) -> float:
    return 1.0


def _events(
    constants: Constants, urges: Urges, now: Instant, target: float, speed: float
) -> list[_Event]:
    """Everything that can end a stretch that begins now."""
    sign = now.direction
    events = [
        _Event(lambda turned, gained: now.momentum + gained, -sign, End.TURN),
        _Event(lambda turned, gained: now.angle + turned - target, sign, _landmark(target)),
    ]
    for axis, options in urges.items():
        events += [_switch(now, urge, axis) for urge in options.values()]
    if math.isfinite(speed):
        wanted = speed * total_inertia(constants, now.slides)
        events.append(
            _Event(lambda turned, gained: sign * (now.momentum + gained) - wanted, 1, End.SPEED)
        )
    return events


def _switch(now: Instant, urge: Urge, axis: str) -> _Event:
    return _Event(
        lambda turned, gained: urge(now.angle + turned, now.momentum + gained, now.direction),
        1.0,
        End.SWITCH,
        axis,
    )


def _stretch(now: Instant, result: Any, last: Any, event: _Event, target: float) -> Stretch:
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
    end = event.end
    if end is End.TURN:
        momentum[-1] = 0.0
    if end is End.SWITCH and abs(angle[-1] - target) < SNAP:
        end = _landmark(target)
    if end in (End.TOP, End.BOTTOM):
        angle[-1] = target
    return Stretch(now.time + times, angle, momentum, now.slides, now.direction, end, event.axis)
