# SPDX-License-Identifier: BSD-3-Clause
"""From a task and a starting motion to the problem that the solver is given."""

from __future__ import annotations

from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Measure, Pump, Rotate, SpinUp, Task
from rotorpump.transcription.interval import ANGLE, TIME, Form
from rotorpump.transcription.path import FORCE_LIMITED, rung_of
from rotorpump.transcription.problem import Goal, Problem, Start, Term
from rotorpump.transcription.scaling import Scales


def can_rest(rig: Rig) -> bool:
    """Whether end stops bear load where the drive cannot."""
    return rung_of(rig.radial) == FORCE_LIMITED and rig.radial.bearing


def assign(rig: Rig, task: Task, seed: Seed, *, relaxed: bool = False) -> Problem:
    """Pose the task on the seed's chain of arcs."""
    form = Form(ANGLE if isinstance(task, Rotate) else TIME, rung_of(rig.radial), relaxed=relaxed)
    if isinstance(task, Rotate):
        return Problem(rig, form, seed.chain, (Term("time", 1.0),), None)
    start = start_of(rig, task)
    if isinstance(task, Pump):
        terms = (Term("energy", -1.0),)
        return Problem(rig, form, seed.chain, terms, start, horizon=task.duration)
    return Problem(rig, form, seed.chain, (Term("time", 1.0),), start, goal=goal_of(rig, task))


def start_of(rig: Rig, task: Pump | SpinUp) -> Start:
    """State in which the task begins."""
    radial = task.radial_in(rig)
    return Start(task.start_angle, rig.inertia(radial) * task.start_speed, radial)


def goal_of(rig: Rig, task: SpinUp) -> Goal | None:
    """Goal of a spin-up in scaled units; a full turn is in the last arc's end angle instead."""
    scales = Scales.of(rig)
    if task.energy is not None:
        return Goal("energy", task.energy / scales.energy)
    if task.speed is not None:
        return Goal("speed", (task.speed * scales.time) ** 2)
    return None


def reached_value(task: Task, trajectory: Trajectory) -> float:
    """Value of the task's default objective that a motion reaches."""
    if isinstance(task, Pump):
        return float(trajectory.energy[-1])
    if isinstance(task, SpinUp):
        return trajectory.duration
    turned = trajectory.angle[-1] - trajectory.angle[0]
    return float(turned / trajectory.duration)


def gain(measure: Measure, value: float, other: float) -> float:
    """Relative advantage of ``value`` over ``other``: positive if it is better."""
    difference = value - other if measure.more_is_better else other - value
    return difference / max(abs(other), 1e-300)
