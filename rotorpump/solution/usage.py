# SPDX-License-Identifier: BSD-3-Clause
"""What a motion asks of its drives: work, heat, peaks and root mean squares."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

PIECES = 24
"""Pieces of an interval, so fine that a power's change of sign within one hardly matters."""

POINTS = 3
"""Gauss points of a piece."""


@dataclass(frozen=True)
class DriveUse:
    """What a motion asks of one drive.

    Parameters
    ----------
    axis : {"radial", "tangential"}
        The drive's axis.
    peak_force, rms_force : float
        Largest and root mean square force [N].
    peak_power : float
        Largest magnitude of the mechanical power [W].
    work : float
        Positive work, ∫(F v)⁺ dt [J].
    heat : float
        Copper loss, ∫(F/Km)² dt [J]; not a number without a motor constant.
    """

    axis: str
    peak_force: float
    rms_force: float
    peak_power: float
    work: float
    heat: float


def drive_uses(rig: Rig, trajectory: Trajectory) -> tuple[DriveUse, ...]:
    """Measure what a motion asks of each drive, from the polynomials of the trajectory."""
    edges = trajectory.time[trajectory.breaks]
    kept = np.flatnonzero(np.diff(edges) > 0.0)
    if kept.size == 0:
        return tuple(_use(rig, axis, *np.zeros((3, 1))) for axis in rig.driven)
    lengths = np.diff(edges)[kept, None]
    places, shares = np.polynomial.legendre.leggauss(POINTS)
    inside = ((np.arange(PIECES)[:, None] + 0.5 * (places + 1.0)) / PIECES).ravel()
    weights = np.tile(0.5 * shares / PIECES, PIECES)
    # the ends of an interval matter to the peaks alone; at a break, the node holds what is before
    begins, ends = trajectory.at(edges[kept]), trajectory.breaks[kept + 1]
    steps = np.append((lengths * weights).ravel(), np.zeros(2 * kept.size))
    dense = trajectory.at((edges[kept, None] + lengths * inside).ravel())

    def column(name: str) -> Array:
        parts = (getattr(dense, name), getattr(begins, name), getattr(trajectory, name)[ends])
        return np.concatenate(parts)

    return tuple(
        _use(rig, axis, steps, column(f"{axis}_force"), column(f"{axis}_speed"))
        for axis in rig.driven
    )


def _use(rig: Rig, axis: str, steps: Array, force: Array, pace: Array) -> DriveUse:
    """Sum up a drive's force and speed [N, m/s] over steps of time [s], each of shape (n,)."""
    power, duration = force * pace, float(np.sum(steps))
    square = float(np.sum(steps * force**2))
    constant = rig.slide(axis).motor_constant
    return DriveUse(
        axis,
        peak_force=float(np.max(np.abs(force))),
        rms_force=math.sqrt(square / duration) if duration > 0.0 else 0.0,
        peak_power=float(np.max(np.abs(power))),
        work=float(np.sum(steps * np.maximum(power, 0.0))),
        heat=math.nan if constant is None else square / constant**2,
    )


def total_effort(rig: Rig, trajectory: Trajectory, objective: str) -> float:
    """Work, heat, or both, of all drives over a motion [J]."""
    names = objective.split("+")
    uses = drive_uses(rig, trajectory)
    return math.fsum(getattr(use, name) for use in uses for name in names)
