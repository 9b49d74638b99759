# SPDX-License-Identifier: BSD-3-Clause
"""Consistency of a trajectory: its nodes and intervals, and its columns with each other."""

from __future__ import annotations

import numpy as np

from rotorpump.checking.audit import mechanical_energy
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

TOLERANCE = 1e-6


def structure_checks(trajectory: Trajectory) -> tuple[Check, ...]:
    """Check that time never runs back, and that intervals and arcs cover every node.

    Intervals must reach from the first to the last node and arcs must meet where intervals do,
    or a part of the motion would escape the other checks.
    """
    backward = float(np.maximum(0.0, -np.min(np.diff(trajectory.time))))
    breaks, arcs = trajectory.breaks, trajectory.arcs
    ends = (0, trajectory.time.size - 1)
    gaps = sum((pair[0], pair[-1]) != ends for pair in (breaks, arcs))
    gaps += sum(int(np.sum(np.diff(pair) < 1)) for pair in (breaks, arcs))
    gaps += int(np.sum(~np.isin(arcs, breaks)))
    return (
        Check("order of time", backward, 0.0, "s"),
        Check("intervals", float(gaps), 0.0, "1", "gaps in what they cover"),
    )


def consistency_checks(rig: Rig, trajectory: Trajectory) -> tuple[Check, ...]:
    """Check H = I ω and the energy at every node."""
    momentum = (rig.wheel.inertia + rig.mass * trajectory.radial**2) * trajectory.speed
    energy = mechanical_energy(
        rig, trajectory.angle, trajectory.speed, trajectory.radial, trajectory.radial_speed
    )
    checks = []
    for name, formula in (("momentum", momentum), ("energy", energy)):
        scale = float(np.max(np.abs(formula))) or 1.0
        off = float(np.max(np.abs(getattr(trajectory, name) - formula))) / scale
        checks.append(Check(name, off, TOLERANCE, "1", "against its formula, at every node"))
    return tuple(checks)
