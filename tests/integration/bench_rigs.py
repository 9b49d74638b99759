# SPDX-License-Identifier: BSD-3-Clause
"""Rigs of our own invention and short tasks for them, shared by the tests with real solves."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

import rotorpump as rp
from rotorpump.measures import measure
from rotorpump.rig.rigfile import write_rig

BENCH = rp.Rig(
    wheel=rp.Wheel(inertia=0.18, mass=2.2),
    mass=0.95,
    radial=rp.Slide(stroke=(0.13, 0.32), speed=0.8, force=36.0),
    friction=rp.AxleFriction(viscous=0.04),
)
RUBBING = replace(BENCH, friction=rp.AxleFriction(viscous=0.02, coulomb=0.06, quadratic=0.003))
"""The same with Coulomb and quadratic friction."""

TURNING = rp.Rig(
    wheel=rp.Wheel(inertia=0.15, mass=0.8),
    mass=1.0,
    radial=rp.Slide(stroke=(0.12, 0.30), speed=0.5, force=40.0),
    friction=rp.AxleFriction(viscous=0.09),
)
SWINGING = rp.Rig(
    wheel=rp.Wheel(inertia=0.24, mass=3.8),
    mass=1.3,
    radial=rp.Slide(stroke=(0.17, 0.36), speed=0.45, force=28.0),
    friction=rp.AxleFriction(viscous=0.03),
)
"""Two more, for a steady rotation and for the first passage over the top."""

SIDEWAYS = replace(
    BENCH, radial=0.25, tangential=rp.Slide(stroke=(-0.1, 0.1), speed=0.6, force=20.0)
)
TWO_AXES = replace(BENCH, tangential=rp.Slide(stroke=(-0.08, 0.08), speed=0.6, force=20.0))
"""The bench rig with a tangential slide, alone and beside the radial one."""

LOPSIDED = replace(
    BENCH,
    wheel=replace(BENCH.wheel, unbalance=0.05, unbalance_angle=0.7),
    tangential=0.04,
)
"""The bench rig with its slide beside the axle, on a wheel out of balance."""

MOTORED = replace(BENCH, radial=replace(BENCH.radial, motor_constant=6.0))
"""The bench rig with a drive whose heat is known."""

DRIVE_LIMITS = {
    "power": {"power": 14.0},
    "force rate": {"force_rate": 900.0},
    "continuous force": {"continuous_force": 22.0},
    "motor line": {"stall_force": 40.0, "no_load_speed": 1.2},
    "rubbing": {"rubbing": 1.5},
}
"""Further limits of its drive, one at a time."""

PUMP = rp.Pump(duration=3.5, start_angle=0.6)
TO_ENERGY = rp.SpinUp(energy=6.0, start_angle=0.8)
TO_SPEED = rp.SpinUp(speed=5.0, start_angle=-0.8)
FULL_TURN = rp.SpinUp(full_turn=True, start_angle=0.8)
ROTATE = rp.Rotate()
SIDEWAYS_PUMP = rp.Pump(duration=1.5, start_angle=0.2)
SHORT_SPIN_UP = rp.SpinUp(energy=3.5, start_angle=0.9)

CASES = {
    "pump": (BENCH, PUMP),
    "spin-up to energy": (BENCH, TO_ENERGY),
    "spin-up to speed": (BENCH, TO_SPEED),
    "spin-up over the top": (SWINGING, FULL_TURN),
    "rotate": (BENCH, ROTATE),
    "pump with all friction": (RUBBING, PUMP),
    "rotate with all friction": (RUBBING, ROTATE),
}


def with_slide(rig: rp.Rig, **changes) -> rp.Rig:
    """The same rig with another slide."""
    return replace(rig, radial=replace(rig.radial, **changes))


def with_friction(rig: rp.Rig, **changes) -> rp.Rig:
    """The same rig with other axle friction."""
    return replace(rig, friction=replace(rig.friction, **changes))


def advantage(task, value: float, other: float) -> float:
    """Relative advantage of one value of the task's objective over another; positive if better."""
    share = value / other - 1.0
    return share if measure(task).more_is_better else -share


DENSE = 20_001


def dense(trajectory):
    """The motion at so many uniform times that sums over them are integrals."""
    return trajectory.at(np.linspace(trajectory.time[0], trajectory.time[-1], DENSE))


def failed_checks(checks) -> set[str]:
    """Names of the checks that have not passed."""
    return {check.name for check in checks if not check.passed}


def save_rig(folder, rig: rp.Rig, task) -> str:
    """Write a rig file; return its path."""
    path = folder / "rig.toml"
    path.write_text(write_rig(rig, task), encoding="utf-8")
    return str(path)


UNLIMITED = {"speed": math.inf, "force": math.inf}
