# SPDX-License-Identifier: BSD-3-Clause
"""Arcs of a motion, cut at standstills, lowest points and tops."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from rotorpump.transcription.guess import Guess


@dataclass(frozen=True)
class Arc:
    """A piece of the motion in which the wheel turns one way.

    Parameters
    ----------
    direction : int
        1 or -1, the sign of the wheel speed.
    end : {"standstill", "angle", "free"}
        What cuts the arc off: the wheel stands, reaches a given angle, or the motion ends.
    angle : float
        The angle reached [rad], where ``end`` is "angle".
    """

    direction: int
    end: str
    angle: float = math.nan

    @property
    def letter(self) -> str:
        """One letter for the arc's end: s(tandstill), b(ottom), t(op) or e(nd)."""
        if self.end == "angle":
            return "t" if round(self.angle / math.pi) % 2 else "b"
        return self.end[0] if self.end == "standstill" else "e"


Chain = tuple[Arc, ...]


def signature(chain: Chain) -> str:
    """Return the arcs' ends in a word; it tells one sequence of events from another."""
    return "".join(arc.letter for arc in chain)


def cut_into_arcs(guess: Guess, *, final_angle: float | None = None) -> tuple[Chain, list[float]]:
    """Cut a motion into arcs.

    Parameters
    ----------
    guess : Guess
        The motion.
    final_angle : float, optional
        Angle at which the last arc has to end; it ends freely by default.

    Returns
    -------
    chain : tuple of Arc
        The arcs.
    ends : list of float
        Time at which each arc ends [s].
    """
    direction = _first_direction(guess)
    chain: list[Arc] = []
    ends: list[float] = []
    for time, angle in _events(guess):
        if math.isnan(angle):
            chain.append(Arc(direction, "standstill"))
            direction = -direction
        else:
            chain.append(Arc(direction, "angle", angle))
        ends.append(time)
    duration = float(guess.time[-1])
    shortest = 1e-3 * duration / max(len(chain), 1)
    if chain and duration - ends[-1] < shortest:
        direction = chain[-1].direction
        chain.pop()
        ends.pop()
    while final_angle is not None and chain and abs(chain[-1].angle - final_angle) < 1e-9:
        # Samples that end a little past the final angle have passed it as an event already.
        chain.pop()
        ends.pop()
    last = Arc(direction, "free") if final_angle is None else Arc(direction, "angle", final_angle)
    return (*chain, last), [*ends, duration]


def _first_direction(guess: Guess) -> int:
    moving = np.flatnonzero(guess.speed)
    return int(np.sign(guess.speed[moving[0]])) if moving.size else 1


def _events(guess: Guess) -> list[tuple[float, float]]:
    """List times of standstills (angle not a number) and of passages through multiples of π."""
    events: list[tuple[float, float]] = []
    time, angle, speed = guess.time, guess.angle, guess.speed
    flips = np.flatnonzero(
        (speed[:-1] * speed[1:] < 0.0) | ((speed[1:] == 0.0) & (speed[:-1] != 0.0))
    )
    for k in flips:
        share = speed[k] / (speed[k] - speed[k + 1])
        events.append((float(time[k] + share * (time[k + 1] - time[k])), math.nan))
    level = angle / math.pi
    # A start that lies on a multiple of π is left, not passed.
    for k in np.flatnonzero(np.floor(level[1:]) != np.floor(level[:-1])):
        for crossed in range(
            math.floor(min(level[k], level[k + 1])) + 1, math.floor(max(level[k], level[k + 1])) + 1
        ):
            share = (crossed - level[k]) / (level[k + 1] - level[k])
            moment = float(time[k] + share * (time[k + 1] - time[k]))
            if moment > time[0]:
                events.append((moment, crossed * math.pi))
    return sorted(events)
