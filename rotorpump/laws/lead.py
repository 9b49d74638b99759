# SPDX-License-Identifier: BSD-3-Clause
"""The practical law: move the mass a little ahead of the lowest and the turning point.

The rule of the ideal law with two leads. The inward move starts when the time to the lowest point
falls below ``bottom`` times the move time; the outward move when the time to the turning point or
the top falls below ``turn`` times the move time. Sideways, the mass changes sides when the time to
where the radial axis is level falls below ``bottom`` times the move time, or that to the turning
point below ``turn`` times. A speed-tracking drive with the rig's limits carries the moves out,
sampled as a digital controller would be.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import casadi
import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.drive import usable_drive
from rotorpump.laws.lead_loop import CHUNK, Numbers, compiled_loop, structure_of
from rotorpump.laws.pointwise import advantage
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES, Rig

Array = NDArray[np.float64]

ROUNDING = 1e-12
"""Angle by which a rule is displaced by rounding alone [rad]."""

ROWS = {"radial": (2, 3), "tangential": (4, 5)}
"""Rows of the states in which position and speed along an axis stand."""


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
    states : ndarray, shape (6, n)
        Angle [rad], momentum [kg m2/s], radial position [m] and speed [m/s] of the mass,
        tangential position [m] and speed [m/s].
    forces : ndarray, shape (2, n - 1)
        Forces of the radial and the tangential drive during each step [N].
    """

    leads: Leads
    step: float
    states: Array
    forces: Array

    @property
    def time(self) -> Array:
        """Times of the samples [s], shape (n,)."""
        return np.asarray(np.arange(self.states.shape[1]) * self.step, dtype=float)

    @property
    def slides(self) -> Slides:
        """Place and speed of the mass at the samples."""
        return Slides(*self.states[2:])

    def cut(self, steps: int) -> LeadRun:
        """Return the first steps only."""
        return replace(self, states=self.states[:, : steps + 1], forces=self.forces[:, :steps])

    def mirrored(self) -> LeadRun:
        """Return the motion as seen from the other side, that of the mirrored rig."""
        flip = np.array([-1.0, -1.0, 1.0, 1.0, -1.0, -1.0])[:, None]
        sides = np.array([1.0, -1.0])[:, None]
        return replace(self, states=self.states * flip, forces=self.forces * sides)


@dataclass(frozen=True)
class Plan:
    """How the law is run.

    Parameters
    ----------
    leads : Leads
        The law's two numbers.
    step : float
        Step of the controller and of the integration [s].
    share : float, optional
        Share of the limit on the drives' forces that is used.
    load_torque : float, optional
        Torque that a load takes from the wheel [N m].
    """

    leads: Leads
    step: float
    share: float = 1.0
    load_torque: float = 0.0


def run_leads(
    rig: Rig,
    start: tuple[float, ...],
    plan: Plan,
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
        The six numbers of a state, see `LeadRun`.
    plan : Plan
        How the law is run; the integration is classical Runge-Kutta.
    steps : int
        Number of steps at most.
    done : callable, optional
        Called with all states so far, shape (6, n), now and then; true ends the run early.
    """
    constants = Constants.of(rig, plan.load_torque)
    drives = tuple(usable_drive(rig, axis, plan.step, plan.share) for axis in rig.driven)
    offsets = tuple(_offset(rig, constants, axis) for axis in rig.driven)
    structure = structure_of(rig, constants, drives, offsets)
    loop = compiled_loop(structure)
    leads = (plan.leads.bottom, plan.leads.turn)
    numbers = Numbers(constants, drives, offsets, leads, plan.step).present(structure)
    repeated = casadi.DM(np.repeat(np.array(numbers, dtype=float)[:, None], CHUNK, axis=1))
    rows = [0, 1, *(row for axis in rig.driven for row in ROWS[axis])]
    lines = [AXES.index(axis) for axis in rig.driven]
    begin = np.array(start, dtype=float)
    inner = np.concatenate((begin[rows], np.zeros(len(structure.ramped))))
    states, forces = [begin[:, None]], [np.zeros((2, 0))]
    for _ in range(math.ceil(steps / CHUNK)):
        history, force = (np.array(part) for part in loop(inner, repeated))
        inner = history[:, -1]
        states.append(np.repeat(begin[:, None], CHUNK, axis=1))
        states[-1][rows] = history[: len(rows)]
        forces.append(np.zeros((2, CHUNK)))
        forces[-1][lines] = force
        if done(np.hstack(states)):
            break
    return LeadRun(plan.leads, plan.step, np.hstack(states), np.hstack(forces)).cut(steps)


def _offset(rig: Rig, constants: Constants, axis: str) -> float:
    """Angle by which the rig's weight displaces the ideal rule of an axis [rad]."""
    middle = Slides(*(value for a in AXES for value in (sum(rig.stroke(a)) / 2.0, 0.0)))
    low, high = rig.stroke(axis)
    urge = advantage(constants, axis, middle, high, low)
    if axis == "radial":
        angle = math.atan2(urge.cosine, urge.sine)
    else:
        angle = -math.atan2(urge.sine, urge.cosine)
    return angle if abs(angle) > ROUNDING else 0.0
