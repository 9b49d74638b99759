# SPDX-License-Identifier: BSD-3-Clause
"""What a motion reaches, in the unit of an objective."""

from __future__ import annotations

import math

from rotorpump.measures import COSTS, Measure
from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solution.usage import total_effort
from rotorpump.tasks import Pump, Rotate, Task


def reached_value(rig: Rig, task: Task, measure: Measure, trajectory: Trajectory) -> float:
    """Value of an objective that a motion reaches.

    Parameters
    ----------
    rig : Rig
        The rig that moves.
    task : Pump, SpinUp or Rotate
        What it does.
    measure : Measure
        The objective.
    trajectory : Trajectory
        The motion.
    """
    if measure in COSTS:
        return total_effort(rig, trajectory, measure.name)
    if isinstance(task, Pump):
        return abs(float(getattr(trajectory, measure.name)[-1]))
    if isinstance(task, Rotate):
        speed = 2.0 * math.pi / trajectory.duration
        return task.load_torque * speed if measure.name == "load power" else speed
    return trajectory.duration
