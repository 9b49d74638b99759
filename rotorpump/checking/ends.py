# SPDX-License-Identifier: BSD-3-Clause
"""Start and end: the motion is the one that the task asks for."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.checking.agreement import slide_pace
from rotorpump.checking.case import Case
from rotorpump.checking.first_principles import angular_momentum, mechanical_energy
from rotorpump.checking.margins import FORCE_TOLERANCE
from rotorpump.checking.replay import state_at
from rotorpump.physics.impulses import PLACES
from rotorpump.physics.phases import State
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Pump, Rotate, SpinUp, Start

TOLERANCE = 1e-6
"""Relative; a boundary condition is an equation of the program, not an approximation."""


def end_checks(case: Case, trajectory: Trajectory) -> tuple[Check, ...]:
    """Check start and end conditions of the task."""
    task = case.task
    if isinstance(task, Rotate):
        return tuple(_periodicity(case, task, trajectory))
    checks = _start(case, task, trajectory)
    if isinstance(task, Pump):
        checks.append(near("duration", trajectory.duration, task.duration, task.duration))
        return tuple(checks)
    checks.append(_goal(case, task, trajectory))
    if task.deadline is not None:
        late = float(np.maximum(0.0, trajectory.duration / task.deadline - 1.0))
        detail = f"{trajectory.duration:.8g} s, at most {task.deadline:.8g} s"
        checks.append(Check("deadline", late, TOLERANCE, "1", detail))
    return tuple(checks)


def near(
    name: str, value: float, wanted: float, scale: float, tolerance: float = TOLERANCE
) -> Check:
    """Check that a value is the wanted one, relative to ``scale``."""
    detail = f"{value:.8g}, wanted {wanted:.8g}"
    return Check(name, float(abs(value - wanted) / scale), tolerance, "1", detail)


def final_energy(case: Case, trajectory: Trajectory) -> float:
    """Energy above rest at the end [J]."""
    slides = Slides(*(column[-1:] for column in trajectory.slides))
    energy = mechanical_energy(case.rig, trajectory.angle[-1:], trajectory.speed[-1:], slides)
    return float(energy[0])


def _unpushed(case: Case, trajectory: Trajectory, node: int) -> State:
    """State at a node, with the slides at rest if their motion is told.

    Their speed may jump at any time, so that it means nothing at the ends; what such jumps do to
    the wheel is taken back.
    """
    state = state_at(case.rig, trajectory, node)
    for axis in case.told:
        state = case.simulator().set_speed(state, axis, 0.0)
    return state


def _start(case: Case, task: Start, trajectory: Trajectory) -> list[Check]:
    rig = case.rig
    spin = float(np.max(np.abs(trajectory.speed))) or 1.0
    state = _unpushed(case, trajectory, 0)
    checks = [
        near("start angle", state[0], task.start_angle, 1.0),
        near("start speed", state[1], task.start_speed, spin),
    ]
    for axis, place in zip(AXES, task.place_in(rig), strict=True):
        if axis not in rig.driven:
            continue
        here = PLACES[axis]
        checks.append(near(f"start {axis}", state[here], place, rig.slide(axis).length))
        if axis in case.forced:
            pace = slide_pace(rig, trajectory, axis)
            checks.append(near(f"start {axis} speed", state[here + 1], 0.0, pace))
    return checks


def _goal(case: Case, task: SpinUp, trajectory: Trajectory) -> Check:
    """Shortfall at the end of the motion, relative to the goal."""
    if task.energy is not None:
        reached, wanted = final_energy(case, trajectory), task.energy
    elif task.speed is not None:
        reached, wanted = float(abs(trajectory.speed[-1])), task.speed
    else:
        return _full_turn(trajectory)
    detail = f"{reached:.8g}, wanted {wanted:.8g}"
    shortfall = float(np.maximum(0.0, 1.0 - reached / wanted))
    return Check("goal", shortfall, TOLERANCE, "1", detail)


def _full_turn(trajectory: Trajectory) -> Check:
    """Check that the motion ends at the top, moves on over it, and was not there before."""
    angle, speed = float(trajectory.angle[-1]), float(trajectory.speed[-1])
    spin = float(np.max(np.abs(trajectory.speed))) or 1.0
    off = abs(abs(angle) - math.pi) / math.pi
    back = -speed * math.copysign(1.0, angle) / spin
    before = float(np.max(np.abs(trajectory.angle))) / math.pi - 1.0
    worst = float(np.max(np.array([off, back, before])))
    return Check("goal", worst, TOLERANCE, "1", f"ends at {angle:.8g} rad with {speed:.4g} rad/s")


def _periodicity(case: Case, task: Rotate, trajectory: Trajectory) -> list[Check]:
    """Check that the end is the start, one turn on."""
    rig, turn = case.rig, 2.0 * math.pi
    turned = float(trajectory.angle[-1] - trajectory.angle[0])
    momentum = angular_momentum(rig, trajectory.speed, trajectory.slides)
    most = float(np.max(np.abs(momentum))) or 1.0
    checks = [
        near("one turn", turned, task.direction * turn, turn),
        near("periodic momentum", float(momentum[-1]), float(momentum[0]), most),
    ]
    first, last = (_unpushed(case, trajectory, node) for node in (0, -1))
    for axis in rig.driven:
        slide, here = rig.slide(axis), PLACES[axis]
        if axis in case.forced or math.isfinite(slide.speed):
            # a mass without any limit may leap at the start of each turn as well
            checks.append(near(f"periodic {axis}", last[here], first[here], slide.length))
        if axis in case.forced:
            pace = slide_pace(rig, trajectory, axis)
            values = last[here + 1], first[here + 1]
            checks.append(near(f"periodic {axis} speed", *values, pace))
        if math.isfinite(slide.force_rate):
            checks.append(_periodic_force(trajectory, axis))
    if task.mean_speed is not None:
        mean = turn / trajectory.duration
        checks.append(near("mean speed", mean, task.mean_speed, task.mean_speed))
    return checks


def _periodic_force(trajectory: Trajectory, axis: str) -> Check:
    force = getattr(trajectory.at(trajectory.time[[0, -1]]), f"{axis}_force")
    most = float(np.max(np.abs(getattr(trajectory, f"{axis}_force")))) or 1.0
    # the force between the nodes is as accurate as its other checks demand
    off = float(abs(force[-1] - force[0])) / most
    return Check(f"periodic {axis} force", off, FORCE_TOLERANCE, "1")
