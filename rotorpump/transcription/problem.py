# SPDX-License-Identifier: BSD-3-Clause
"""What a nonlinear program is asked: chain of arcs, ends of the motion, objective, goal."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.rig.rig import Rig
from rotorpump.transcription.arcs import Chain
from rotorpump.transcription.form import Form


@dataclass(frozen=True)
class Term:
    """A weighted quantity at one end of the motion, summed into the objective (minimised).

    Parameters
    ----------
    name : str
        See `rotorpump.transcription.terminal.end_value`.
    weight : float
        Its weight in scaled units.
    at_start : bool
        Whether the start of the motion is meant rather than its end.
    """

    name: str
    weight: float
    at_start: bool = False


@dataclass(frozen=True)
class Goal:
    """A scaled quantity at the end of the motion that has to reach a least value."""

    name: str
    least: float


@dataclass(frozen=True)
class Start:
    """State at the beginning of a motion: angle, momentum, place of the resting mass (SI)."""

    angle: float
    momentum: float
    radial: float
    tangential: float = 0.0


@dataclass(frozen=True)
class Problem:
    """One task for the solver.

    Parameters
    ----------
    rig : Rig
        The rig.
    form : Form
        Structure of the intervals.
    chain : tuple of Arc
        The arcs.
    terms : tuple of Term
        The objective.
    start : Start, optional
        Start of the motion; None for a periodic one, which begins at angle zero.
    horizon : float, optional
        Duration [s]; free by default.
    deadline : float, optional
        Longest duration [s].
    load_torque : float, optional
        Torque that a load takes from the wheel [N m].
    goal : Goal, optional
        What has to be reached at the end.
    closed_momentum : bool
        Whether a periodic motion has to return to its momentum; its slide always returns.
    """

    rig: Rig
    form: Form
    chain: Chain
    terms: tuple[Term, ...]
    start: Start | None
    horizon: float | None = None
    deadline: float | None = None
    load_torque: float = 0.0
    goal: Goal | None = None
    closed_momentum: bool = True

    @property
    def margins(self) -> tuple[int, ...]:
        """Axes along which the mass keeps clear of its stops at the end, if it still moves."""
        if self.start is None:
            return ()
        return tuple(k for k, axis in enumerate(self.form.axes) if axis.forceful)

    @property
    def own_last(self) -> int | None:
        """Leading variables that the last node does not share with the first."""
        if self.start is not None:
            return None
        return self.form.index("momentum") + (0 if self.closed_momentum else 1)
