# SPDX-License-Identifier: BSD-3-Clause
"""Objectives: what each kind of task can be optimized for."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.errors import InputError
from rotorpump.quantities import choice
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Pump, Rotate, SpinUp, Task


@dataclass(frozen=True)
class Measure:
    """What an objective measures: its name, SI unit, and whether more of it is better."""

    name: str
    unit: str
    more_is_better: bool


COSTS = (Measure("work", "J", False), Measure("heat", "J", False), Measure("work+heat", "J", False))
"""What a motion costs: work of the drives ∫(Fv)⁺ dt, copper loss ∫(F/Km)² dt, and their sum."""

MEASURES: dict[type, tuple[Measure, ...]] = {
    Pump: (
        Measure("energy", "J", True),
        Measure("momentum", "kg m2/s", True),
        Measure("speed", "rad/s", True),
    ),
    SpinUp: (Measure("time", "s", False), *COSTS),
    Rotate: (Measure("speed", "rad/s", True), *COSTS, Measure("load power", "W", True)),
}
"""Objectives of each kind of task, the default first."""


def measure(task: Task, name: str | None = None) -> Measure:
    """Return the objective called ``name`` of this task, or its default one.

    A rotation at a given mean speed is by default done with the least work.

    Raises
    ------
    InputError
        If it is no task, or has no such objective.
    """
    if type(task) not in MEASURES:
        raise InputError("task", "must be a Pump, a SpinUp or a Rotate", task)
    offered = MEASURES[type(task)]
    if name is None:
        fixed = isinstance(task, Rotate) and task.mean_speed is not None
        return offered[1 if fixed else 0]
    choice("objective", name, [entry.name for entry in offered])
    if isinstance(task, Rotate):
        _check_rotation(task, name)
    return next(entry for entry in offered if entry.name == name)


def _check_rotation(task: Rotate, name: str) -> None:
    if name in {"speed", "load power"} and task.mean_speed is not None:
        raise InputError("objective", f"must not be {name!r} where mean_speed is given", name)
    if name in {cost.name for cost in COSTS} and task.mean_speed is None:
        raise InputError("objective", "needs a mean_speed: the slowest turn costs least", name)
    if name == "load power" and task.load_torque == 0.0:
        raise InputError("objective", "needs a load_torque that takes the power", name)


def check_measure(rig: Rig, wanted: Measure) -> None:
    """Raise InputError if the rig lacks what an objective needs."""
    if "heat" not in wanted.name:
        return
    for axis in rig.driven:
        if rig.slide(axis).motor_constant is None:
            rule = f"is required of the {axis} slide for the objective {wanted.name!r}"
            raise InputError("motor_constant", rule, None)
