# SPDX-License-Identifier: BSD-3-Clause
"""Motions with a tangential slide, looked at without the checking stage."""

from __future__ import annotations

import math

import numpy as np
import pytest
from bench_rigs import (
    ROTATE,
    SIDEWAYS,
    SIDEWAYS_PUMP,
    TWO_AXES,
    advantage,
    dense,
)

import rotorpump as rp

CASES = {"sideways pump": (SIDEWAYS, SIDEWAYS_PUMP), "two-axis rotation": (TWO_AXES, ROTATE)}

CLOSE = 1e-3
"""Relative distance of a motion of relative accuracy 1e-4 from its own integral."""


@pytest.fixture(params=list(CASES))
def case(request, solve):
    """A rig, its task, and the best motion."""
    rig, task = CASES[request.param]
    return rig, task, solve(rig, task)


def integral(time, rates):
    """Running integral by the trapezoid rule."""
    steps = np.diff(time) * 0.5 * (rates[1:] + rates[:-1])
    return np.concatenate(([0.0], np.cumsum(steps)))


def test_it_is_solved_verified_and_better_than_the_law(case):
    rig, task, best = case
    assert best.status is rp.Status.SOLVED
    assert best.verified
    law = rp.run_practical(rig, task)
    assert law.reached
    assert advantage(task, best.objective.value, law.objective.value) > 0.05


def test_the_wheel_obeys_its_weight_and_its_friction(case):
    """φ̇ = (H - m (ρ vτ - τ vρ)) / I and Ḣ = -m g (ρ sin φ + τ cos φ) - b ω."""
    rig, _, best = case
    m = dense(best.trajectory)
    inertia = rig.wheel.inertia + rig.mass * (m.radial**2 + m.tangential**2)
    sliding = rig.mass * (m.radial * m.tangential_speed - m.tangential * m.radial_speed)
    speed = (m.momentum - sliding) / inertia
    arm = m.radial * np.sin(m.angle) + m.tangential * np.cos(m.angle)
    rate = -rig.mass * rig.gravity * arm - rig.friction.viscous * speed
    gone = m.angle[0] + integral(m.time, speed) - m.angle
    gained = m.momentum[0] + integral(m.time, rate) - m.momentum
    assert np.abs(gone).max() < CLOSE * max(1.0, float(np.ptp(m.angle)))
    assert np.abs(gained).max() < CLOSE * np.abs(m.momentum).max()


def test_the_forces_give_the_mass_its_motion_away_from_the_stops(case):
    """F = m (ẍ - what gravity and the turning wheel do to it), integrated between the stops."""
    rig, _, best = case
    m = dense(best.trajectory)
    turn = np.gradient(m.speed, m.time)
    turning = {
        "radial": rig.gravity * np.cos(m.angle)
        + m.tangential * turn
        + 2.0 * m.tangential_speed * m.speed
        + m.radial * m.speed**2,
        "tangential": -rig.gravity * np.sin(m.angle)
        - m.radial * turn
        - 2.0 * m.radial_speed * m.speed
        + m.tangential * m.speed**2,
    }
    for axis in rig.driven:
        slide, place = rig.slide(axis), getattr(m, axis)
        pace, force = getattr(m, f"{axis}_speed"), getattr(m, f"{axis}_force")
        free = (place > slide.stroke[0] + 1e-4) & (place < slide.stroke[1] - 1e-4)
        push = np.where(free, force / rig.mass + turning[axis], np.gradient(pace, m.time))
        assert free.mean() > 0.3
        assert np.abs(integral(m.time, push) + pace[0] - pace).max() < 0.01 * slide.speed


def test_the_mass_stays_within_the_limits_of_both_slides(case):
    rig, _, best = case
    motion = dense(best.trajectory)
    for axis in rig.driven:
        slide = rig.slide(axis)
        low, high = slide.stroke
        place = getattr(motion, axis)
        assert low - 1e-6 * slide.length < place.min() < place.max() < high + 1e-6 * slide.length
        assert np.abs(getattr(motion, f"{axis}_speed")).max() < slide.speed * (1.0 + 1e-6)
        assert np.abs(getattr(motion, f"{axis}_force")).max() < slide.force * (1.0 + 5e-3)


def test_a_held_axis_stays_where_it_is_held(solve):
    motion = solve(SIDEWAYS, SIDEWAYS_PUMP).trajectory
    assert np.all(motion.radial == SIDEWAYS.radial)
    assert np.all(motion.radial_speed == 0.0)


def test_the_second_slide_is_of_use(solve, rotated):
    both = solve(TWO_AXES, ROTATE)
    assert advantage(ROTATE, both.objective.value, rotated.objective.value) > 0.1
    assert float(np.ptp(both.trajectory.tangential)) > 0.05
    names = {use.name for use in both.limits if use.active_share > 0.1}
    assert {"radial force", "tangential speed"} <= names


def test_a_two_axis_rotation_closes(solve):
    motion = solve(TWO_AXES, ROTATE).trajectory
    assert motion.angle[-1] - motion.angle[0] == pytest.approx(2.0 * math.pi, rel=1e-9)
    for name in ("momentum", "radial", "radial_speed", "tangential", "tangential_speed"):
        column = getattr(motion, name)
        assert column[-1] == pytest.approx(column[0], abs=1e-6 * np.abs(column).max())
