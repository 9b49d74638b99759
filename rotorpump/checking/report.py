# SPDX-License-Identifier: BSD-3-Clause
"""Every check of a motion, in one report."""

from __future__ import annotations

from rotorpump.checking.agreement import replay_checks
from rotorpump.checking.audit import audit_check
from rotorpump.checking.case import Case
from rotorpump.checking.claim import claim_check
from rotorpump.checking.consistency import consistency_checks, structure_checks
from rotorpump.checking.ends import end_checks
from rotorpump.checking.margins import margin_checks
from rotorpump.checking.replay import replay_motion
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Task


def check_motion(
    rig: Rig, task: Task, trajectory: Trajectory, claimed: Objective, accuracy: float = 1e-4
) -> tuple[Check, ...]:
    """Check a motion independently of how it was found.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    trajectory : Trajectory
        The motion.
    claimed : Objective
        What the motion is said to reach.
    accuracy : float, optional
        Relative accuracy of the motion; replay and audit tolerate ten times as much.

    Returns
    -------
    tuple of Check
        Structure, replay under the found force or slide speed, audit, limits between the nodes,
        start and end conditions with the claimed objective, consistency. The motion is verified
        if all have passed. Where the structure fails, nothing else can be read from the
        trajectory, and its checks are all there is.

    Raises
    ------
    InputError
        If the task has no objective of the claimed name, or the rig lacks what it needs.
    """
    structure = structure_checks(trajectory)
    if not all(check.passed for check in structure):
        return structure
    case = Case(rig, task, claimed.name)
    claim = claim_check(case, trajectory, claimed)
    replay = replay_motion(case, trajectory)
    return (
        *structure,
        *replay_checks(case, trajectory, replay, accuracy),
        audit_check(case, trajectory, accuracy),
        *margin_checks(rig, trajectory),
        *end_checks(case, trajectory),
        claim,
        *consistency_checks(rig, trajectory),
    )


def all_passed(checks: tuple[Check, ...]) -> bool:
    """Whether a motion is verified: checks have run, and each of them has passed."""
    return bool(checks) and all(check.passed for check in checks)
