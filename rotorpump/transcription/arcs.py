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

JITTER, JITTER_SHARE = 0.01, 0.01
"""Turning, in radians and as a share of all that the motion spans, below which a reversal is none.
"""


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
    events = _events(guess)
    direction = _first_direction(guess, events[0][0] if events else float(guess.time[-1]))
    chain: list[Arc] = []
    ends: list[float] = []
    for time, angle in events:
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


def _first_direction(guess: Guess, first: float) -> int:
    """Direction in which the wheel turns up to the first event."""
    turned = float(guess.at("angle", np.array(first)) - guess.angle[0])
    return -1 if turned < 0.0 else 1


def _events(guess: Guess) -> list[tuple[float, float]]:
    """List times of standstills (angle not a number) and of passages through multiples of π."""
    events = [(moment, math.nan) for moment in _standstills(guess)]
    time, level = guess.time, guess.angle / math.pi
    # A start that lies on a multiple of π is left, not passed.
    for k in np.flatnonzero(np.floor(level[1:]) != np.floor(level[:-1])):
        for crossed in range(
            math.floor(min(level[k], level[k + 1])) + 1, math.floor(max(level[k], level[k + 1])) + 1
        ):
            share = (crossed - level[k]) / (level[k + 1] - level[k])
            moment = float(time[k] + share * (time[k + 1] - time[k]))
            if moment > time[0]:
                events.append((moment, crossed * math.pi))
    kept: list[tuple[float, float]] = []
    for event in sorted(events):
        if kept and kept[-1][1] == event[1]:
            # passed back and forth in a jitter
            kept.pop()
        else:
            kept.append(event)
    return kept


def _standstills(guess: Guess) -> list[float]:
    """List the times at which the wheel turns round [s].

    A wheel that friction nearly holds may jitter under the moves of the mass. Turning back and
    forth by less than a small share of the motion is no event.
    """
    time, speed = guess.time, guess.speed
    # a wheel that sticks for a while may go on either way: only what it does then tells
    moving = np.flatnonzero(speed)
    flips = moving[:-1][speed[moving[:-1]] * speed[moving[1:]] < 0.0]
    share = speed[flips] / (speed[flips] - speed[flips + 1])
    moments = time[flips] + share * (time[flips + 1] - time[flips])
    angles = np.concatenate((guess.angle[:1], guess.at("angle", moments), guess.angle[-1:]))
    least = min(JITTER, JITTER_SHARE * float(np.ptp(guess.angle)))
    while moments.size:
        # from the start to the first, between neighbours, from the last to the end
        turned = np.abs(np.diff(angles))
        k = int(np.argmin(turned))
        if turned[k] >= least:
            break
        gone = [i for i in (k - 1, k) if 0 <= i < moments.size]
        moments = np.delete(moments, gone)
        angles = np.delete(angles, [i + 1 for i in gone])
    return [float(moment) for moment in moments]
