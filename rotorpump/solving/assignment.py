# SPDX-License-Identifier: BSD-3-Clause
"""From a task and a starting motion to the problem that the solver is given."""

from __future__ import annotations

import math

from rotorpump.measures import COSTS, Measure
from rotorpump.rig.rig import Rig
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Pump, Rotate, SpinUp, Task
from rotorpump.transcription.form import ANGLE, TIME, Form
from rotorpump.transcription.problem import Goal, Problem, Start, Term
from rotorpump.transcription.scaling import Scales


def can_rest(rig: Rig, problem: Problem) -> bool:
    """Whether a mass may rest on an end stop, which then bears a load."""
    return any(axis.forceful and rig.slide(axis.name).bearing for axis in problem.form.axes)


def can_scout(rig: Rig, measure: Measure) -> bool:
    """Whether a relaxed solve tells the pattern in which the mass rests on its stops.

    It does where stops bear what the drive cannot; not where the drive's force is what counts.
    """
    bearing = any(axis.bears for axis in Form.of(rig, TIME, measure.name).axes)
    return bearing and measure not in COSTS


def assign(rig: Rig, task: Task, measure: Measure, seed: Seed, *, relaxed: bool = False) -> Problem:
    """Pose the task on the seed's chain of arcs."""
    independent = ANGLE if isinstance(task, Rotate) else TIME
    form = Form.of(rig, independent, measure.name, relaxed=relaxed)
    terms = terms_of(task, measure)
    if isinstance(task, Rotate):
        period = None if task.mean_speed is None else 2.0 * math.pi / task.mean_speed
        return Problem(
            rig, form, seed.chain, terms, None, horizon=period, load_torque=task.load_torque
        )
    start = start_of(rig, task)
    if isinstance(task, Pump):
        return Problem(rig, form, seed.chain, terms, start, horizon=task.duration)
    goal = goal_of(rig, task)
    return Problem(rig, form, seed.chain, terms, start, goal=goal, deadline=task.deadline)


def terms_of(task: Task, measure: Measure) -> tuple[Term, ...]:
    """Return the objective, which is minimised.

    The most mean speed, and the most power into a given torque, take the least time for a turn.
    """
    if measure in COSTS:
        return tuple(Term(name, 1.0) for name in measure.name.split("+"))
    if isinstance(task, Pump):
        return (Term(measure.name, -1.0),)
    return (Term("time", 1.0),)


def start_of(rig: Rig, task: Pump | SpinUp) -> Start:
    """State in which the task begins."""
    place = task.place_in(rig)
    return Start(task.start_angle, rig.inertia(*place) * task.start_speed, *place)


def goal_of(rig: Rig, task: SpinUp) -> Goal | None:
    """Goal of a spin-up in scaled units; a full turn is in the last arc's end angle instead."""
    scales = Scales.of(rig)
    if task.energy is not None:
        return Goal("energy", task.energy / scales.energy)
    if task.speed is not None:
        return Goal("speed", (task.speed * scales.time) ** 2)
    return None


def gain(measure: Measure, value: float, other: float) -> float:
    """Relative advantage of ``value`` over ``other``: positive if it is better."""
    difference = value - other if measure.more_is_better else other - value
    return difference / max(abs(other), 1e-300)
