# SPDX-License-Identifier: BSD-3-Clause
"""Consistency of a trajectory: its nodes and intervals, and its columns with each other."""

from __future__ import annotations

import numpy as np

from rotorpump.checking.first_principles import angular_momentum, mechanical_energy
from rotorpump.rig.rig import AXES, Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

TOLERANCE = 1e-6
HELD_TOLERANCE = 1e-9


def structure_checks(trajectory: Trajectory) -> tuple[Check, ...]:
    """Check that time never runs back, and that intervals and arcs cover every node.

    Intervals must reach from the first to the last node and arcs must meet where intervals do,
    or a part of the motion would escape the other checks.
    """
    backward = float(np.max(-np.diff(trajectory.time), initial=0.0))
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
    """Check momentum and energy at every node, and that what has no slide stays in place."""
    momentum = angular_momentum(rig, trajectory.speed, trajectory.slides)
    energy = mechanical_energy(rig, trajectory.angle, trajectory.speed, trajectory.slides)
    checks = []
    for name, formula in (("momentum", momentum), ("energy", energy)):
        scale = float(np.max(np.abs(formula))) or 1.0
        off = float(np.max(np.abs(getattr(trajectory, name) - formula))) / scale
        checks.append(Check(name, off, TOLERANCE, "1", "against its formula, at every node"))
    for axis in AXES:
        if axis not in rig.driven:
            off = np.abs(getattr(trajectory, axis) - rig.stroke(axis)[0])
            drift = np.abs(getattr(trajectory, f"{axis}_speed")) * trajectory.duration
            value = float(np.max(off + drift))
            checks.append(Check(f"{axis} place", value, HELD_TOLERANCE, "m", "held, no slide"))
    return tuple(checks)
