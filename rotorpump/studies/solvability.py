# SPDX-License-Identifier: BSD-3-Clause
"""Whether a task has a best motion on a rig at all."""

from __future__ import annotations

import math
from dataclasses import replace

from rotorpump.errors import InputError
from rotorpump.measures import COSTS, Measure
from rotorpump.physics.control import force_driven
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Rotate, Task


def check_solvable(rig: Rig, task: Task, wanted: Measure) -> None:
    """Raise InputError where the best motion is unbounded, or has no finite forces.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    wanted : Measure
        What the motion is to be best at.
    """
    friction = rig.friction
    free = isinstance(task, Rotate) and task.mean_speed is None and task.load_torque == 0.0
    if free and friction == replace(friction, viscous=0.0, coulomb=0.0, quadratic=0.0, load=0.0):
        rule = "must not be zero for a Rotate without load_torque: any speed keeps itself up"
        raise InputError("friction", rule, friction)
    forced = force_driven(rig, wanted.name)
    if not forced and friction.load_arm > 0.0:
        rule = "must be limited where friction depends on the axle's load"
        raise InputError("force", rule, rig.slides[0].force)
    if forced:
        # what the drives do is limited, or counted
        known, why = wanted in COSTS, "a drive without any limit reaches any speed"
    else:
        known = rig.driven == ("radial",) and rig.tangential == 0.0
        why = "the best instantaneous motion is known for a radial slide through the axle alone"
    for axis in rig.driven:
        slide = rig.slide(axis)
        if not (known or slide.forceful or math.isfinite(slide.speed)):
            rule = f"must be limited on the {axis} slide, or its force: {why}"
            raise InputError("speed", rule, slide.speed)
