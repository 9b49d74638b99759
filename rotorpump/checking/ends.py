# SPDX-License-Identifier: BSD-3-Clause
"""Start, end and objective: the motion is the one that the task asks for."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.checking.audit import mechanical_energy
from rotorpump.checking.replay import slide_pace
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Pump, SpinUp, Start, Task, measure

TOLERANCE = 1e-6
"""Relative; a boundary condition is an equation of the program, not an approximation."""


def end_checks(
    rig: Rig, task: Task, trajectory: Trajectory, claimed: Objective
) -> tuple[Check, ...]:
    """Check start and end conditions of the task, and the claimed objective.

    Raises
    ------
    InputError
        If the task has no objective of the claimed name.
    """
    if isinstance(task, Start):
        checks = _start(rig, task, trajectory)
        if isinstance(task, Pump):
            checks.append(_near("duration", trajectory.duration, task.duration, task.duration))
        else:
            checks.append(_goal(rig, task, trajectory))
    else:
        checks = _periodicity(rig, trajectory)
    return (*checks, _objective(rig, task, trajectory, claimed))


def _near(name: str, value: float, wanted: float, scale: float) -> Check:
    detail = f"{value:.8g}, wanted {wanted:.8g}"
    return Check(name, float(abs(value - wanted) / scale), TOLERANCE, "1", detail)


def _start(rig: Rig, task: Start, trajectory: Trajectory) -> list[Check]:
    spin = float(np.max(np.abs(trajectory.speed))) or 1.0
    radial = task.radial_in(rig)
    checks = [
        _near("start angle", float(trajectory.angle[0]), task.start_angle, 1.0),
        _near("start speed", float(trajectory.speed[0]), task.start_speed, spin),
        _near("start radial", float(trajectory.radial[0]), radial, rig.radial.length),
    ]
    # without a force limit the slide speed may jump at once, so its start means nothing
    if not math.isinf(rig.radial.force):
        pace = slide_pace(rig, trajectory)
        checks.append(_near("start at rest", float(trajectory.radial_speed[0]), 0.0, pace))
    return checks


def _goal(rig: Rig, task: SpinUp, trajectory: Trajectory) -> Check:
    """Shortfall at the end of the motion, relative to the goal."""
    if task.energy is not None:
        reached, wanted = _final_energy(rig, trajectory), task.energy
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


def _periodicity(rig: Rig, trajectory: Trajectory) -> list[Check]:
    angle, radial = trajectory.angle, trajectory.radial
    momentum = (rig.wheel.inertia + rig.mass * radial**2) * trajectory.speed
    most = float(np.max(np.abs(momentum))) or 1.0
    turn = 2.0 * math.pi
    checks = [
        _near("one turn", float(angle[-1] - angle[0]), turn, turn),
        _near("periodic momentum", float(momentum[-1]), float(momentum[0]), most),
    ]
    if math.isfinite(rig.radial.force) or math.isfinite(rig.radial.speed):
        # a mass without any limit may jump at the start of each turn as well
        first, last = float(radial[0]), float(radial[-1])
        checks.append(_near("periodic radial", last, first, rig.radial.length))
    if not math.isinf(rig.radial.force):
        first, last = (float(trajectory.radial_speed[k]) for k in (0, -1))
        pace = slide_pace(rig, trajectory)
        checks.append(_near("periodic radial speed", last, first, pace))
    return checks


def _objective(rig: Rig, task: Task, trajectory: Trajectory, claimed: Objective) -> Check:
    """Compare the claimed objective with the one recomputed from the states."""
    name = measure(task, claimed.name).name
    if name == "energy":
        given = _final_energy(rig, trajectory)
    elif name == "time":
        given = trajectory.duration
    else:
        given = 2.0 * math.pi / trajectory.duration
    return _near("claimed objective", claimed.value, given, abs(given) or 1.0)


def _final_energy(rig: Rig, trajectory: Trajectory) -> float:
    last = (getattr(trajectory, name)[-1:] for name in ("angle", "speed", "radial", "radial_speed"))
    return float(mechanical_energy(rig, *last)[0])
