# SPDX-License-Identifier: BSD-3-Clause
"""Whether a task can begin on a rig, and has anything left to do."""

from __future__ import annotations

import math

from rotorpump.errors import InputError
from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Rotate, SpinUp, Task


def check_beginning(rig: Rig, task: Task) -> None:
    """Raise InputError if the task cannot begin on this rig, or is done as it begins."""
    if isinstance(task, Rotate):
        return
    task.check(rig)
    if not isinstance(task, SpinUp):
        return
    if task.energy is not None:
        radial, tangential = task.place_in(rig)
        momentum = rig.inertia(radial, tangential) * task.start_speed
        place = Slides(radial, 0.0, tangential)
        energy = energy_above_rest(math, Constants.of(rig), task.start_angle, momentum, place)
        _exceed("energy", task.energy, energy, "J")
    if task.speed is not None:
        _exceed("speed", task.speed, abs(task.start_speed), "rad/s")
    over = abs(task.start_angle) == math.pi and task.start_angle * task.start_speed > 0.0
    if task.full_turn and over:
        raise InputError("full_turn", "must not begin past the top", task.start_angle)


def _exceed(field: str, goal: float, present: float, unit: str) -> None:
    if goal <= present:
        raise InputError(field, f"must exceed its value at the start, {present:.6g} {unit}", goal)
