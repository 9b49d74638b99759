# SPDX-License-Identifier: BSD-3-Clause
"""The claimed objective, against the one recomputed from the motion."""

from __future__ import annotations

import math

from rotorpump.checking.case import Case
from rotorpump.checking.costs import drive_heat, drive_work
from rotorpump.checking.ends import TOLERANCE, final_energy, near
from rotorpump.checking.first_principles import angular_momentum
from rotorpump.measures import check_measure, measure
from rotorpump.physics.control import EFFORTS
from rotorpump.solution.check import Check
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Rotate

COST_TOLERANCE = 1e-5
"""Relative; a cost is an integral over the motion."""


def claim_check(case: Case, trajectory: Trajectory, claimed: Objective) -> Check:
    """Compare the claimed objective with the one recomputed from the trajectory.

    Raises
    ------
    InputError
        If the task has no objective of the claimed name, or the rig lacks what it needs.
    """
    wanted = measure(case.task, claimed.name)
    check_measure(case.rig, wanted)
    if wanted.name in EFFORTS:
        given, tolerance = _cost(case, trajectory, wanted.name), COST_TOLERANCE
    else:
        given, tolerance = _outcome(case, trajectory, wanted.name), TOLERANCE
    return near("claimed objective", claimed.value, given, abs(given) or 1.0, tolerance)


def _cost(case: Case, trajectory: Trajectory, name: str) -> float:
    costs = {"work": drive_work, "heat": drive_heat}
    return sum(costs[part](case.rig, trajectory) for part in name.split("+"))


def _outcome(case: Case, trajectory: Trajectory, name: str) -> float:
    mean = 2.0 * math.pi / trajectory.duration
    if name == "time":
        return trajectory.duration
    if name == "load power":
        return case.load_torque * mean
    if name == "speed":
        return mean if isinstance(case.task, Rotate) else float(abs(trajectory.speed[-1]))
    if name == "momentum":
        momentum = angular_momentum(case.rig, trajectory.speed, trajectory.slides)
        return float(abs(momentum[-1]))
    return final_energy(case, trajectory)
