# SPDX-License-Identifier: BSD-3-Clause
"""What a nonlinear program is asked: chain of arcs, ends of the motion, objective, goal."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.rig.rig import Rig
from rotorpump.transcription.arcs import Chain
from rotorpump.transcription.interval import Form
from rotorpump.transcription.path import FORCE_LIMITED


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
    """State at the beginning of a motion: angle, momentum, position and speed of the mass (SI)."""

    angle: float
    momentum: float
    radial: float
    radial_speed: float = 0.0


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
    goal: Goal | None = None
    closed_momentum: bool = True

    @property
    def keeps_margin(self) -> bool:
        """Whether the mass has to keep clear of its stops at the end, if it still moves."""
        return self.start is not None and self.form.rung == FORCE_LIMITED

    @property
    def own_last(self) -> int | None:
        """Leading variables that the last node does not share with the first."""
        if self.start is not None:
            return None
        return 2 if self.closed_momentum else 3
