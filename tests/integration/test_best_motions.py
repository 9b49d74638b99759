# SPDX-License-Identifier: BSD-3-Clause
"""Best motions of every kind of task: found, verified, and looked at without the checking stage."""

from __future__ import annotations

import math

import numpy as np
import pytest
from bench_rigs import BENCH, CASES, PUMP, ROTATE, advantage, dense
from scipy.integrate import solve_ivp
from scipy.interpolate import CubicHermiteSpline

import rotorpump as rp

ROUNDING = 1e-6
"""Stroke and speed limit hold between the nodes by construction, so only rounding is allowed."""

FORCE_SLACK = 5e-3
"""The force is held at points of each interval and interpolated between them."""


@pytest.fixture(params=list(CASES))
def case(request, solve):
    """A rig, its task, and the best motion."""
    rig, task = CASES[request.param]
    return rig, task, solve(rig, task)


def test_it_is_solved_and_verified(case):
    rig, task, best = case
    assert best.status is rp.Status.SOLVED
    assert best.success
    assert best.verified
    assert best.checks
    assert all(check.passed for check in best.checks)
    assert (best.rig, best.task) == (rig, task)
    assert best.statistics.intervals == sum(best.mesh.intervals)


def test_it_beats_the_practical_law(case):
    rig, task, best = case
    law = rp.run_practical(rig, task)
    assert law.reached
    # the law wins or loses some parts in a thousand by its sampling alone
    assert advantage(task, best.objective.value, law.objective.value) > 2e-3


def test_limits_hold_between_the_nodes(case):
    rig, _, best = case
    slide, motion = rig.radial, dense(best.trajectory)
    low, high = slide.stroke
    assert motion.radial.min() > low - ROUNDING * slide.length
    assert motion.radial.max() < high + ROUNDING * slide.length
    assert np.abs(motion.radial_speed).max() < slide.speed * (1.0 + ROUNDING)
    assert np.abs(motion.radial_force).max() < slide.force * (1.0 + FORCE_SLACK)


def test_the_mass_goes_where_its_speed_takes_it(case):
    rig, _, best = case
    motion = dense(best.trajectory)
    step = motion.time[1] - motion.time[0]
    gone = step * (np.cumsum(motion.radial_speed) - motion.radial_speed / 2.0)
    path = motion.radial[0] + gone - gone[0]
    # the trapezoid rule misses up to half a step of each jump of the speed
    assert np.abs(path - motion.radial).max() < 1e-3 * rig.radial.length


def test_the_wheel_follows_the_path_of_the_mass(case):
    """φ̇ = H / I and Ḣ = -m g ρ sin φ - c sign ω - b ω - k |ω| ω, integrated along ρ(t)."""
    rig, _, best = case
    motion, friction = dense(best.trajectory), rig.friction
    path = CubicHermiteSpline(motion.time, motion.radial, motion.radial_speed)

    def rates(time, state):
        angle, momentum = state
        radial = float(path(time))
        speed = momentum / (rig.wheel.inertia + rig.mass * radial**2)
        drag = friction.viscous * speed + friction.quadratic * abs(speed) * speed
        drag += math.copysign(friction.coulomb, speed)
        return [speed, -rig.mass * rig.gravity * radial * math.sin(angle) - drag]

    start = [motion.angle[0], motion.momentum[0]]
    run = solve_ivp(rates, (motion.time[0], motion.time[-1]), start, rtol=1e-7, max_step=0.02)
    turned = max(1.0, float(np.ptp(motion.angle)))
    assert run.y[0, -1] == pytest.approx(motion.angle[-1], abs=1e-3 * turned)
    most = np.abs(motion.momentum).max()
    assert run.y[1, -1] == pytest.approx(motion.momentum[-1], abs=1e-3 * most)


def test_samples_are_uniform_and_lie_on_the_motion(case):
    rig, _, best = case
    motion = best.trajectory
    samples = motion.sample(250.0)
    assert samples.time.size == math.floor(motion.duration * 250.0) + 1
    np.testing.assert_allclose(np.diff(samples.time), 0.004, rtol=1e-9)
    inertia = rig.wheel.inertia + rig.mass * samples.radial**2
    most = np.abs(motion.momentum).max()
    np.testing.assert_allclose(inertia * samples.speed, samples.momentum, atol=2e-3 * most)
    for name, column in samples.columns().items():
        assert column.shape == samples.time.shape
        assert np.isfinite(column).all(), name


def test_a_pump_ends_on_time_with_the_energy_it_claims(solve):
    best = solve(BENCH, PUMP)
    motion = best.trajectory
    assert motion.duration == pytest.approx(PUMP.duration, rel=1e-9)
    assert (motion.angle[0], motion.speed[0]) == pytest.approx((PUMP.start_angle, 0.0), abs=1e-9)
    speed, radial, pace = (
        float(column[-1]) for column in (motion.speed, motion.radial, motion.radial_speed)
    )
    turning = 0.5 * (BENCH.wheel.inertia + BENCH.mass * radial**2) * speed**2
    height = BENCH.radial.stroke[1] - radial * math.cos(motion.angle[-1])
    energy = turning + 0.5 * BENCH.mass * pace**2 + BENCH.mass * BENCH.gravity * height
    assert (best.objective.name, best.objective.unit) == ("energy", "J")
    assert best.objective.value == pytest.approx(energy, rel=1e-9)


def test_spin_ups_stop_at_their_goals_and_not_before(solve):
    to_energy, to_speed, over = (
        solve(*CASES[f"spin-up {goal}"]) for goal in ("to energy", "to speed", "over the top")
    )
    for best in (to_energy, to_speed, over):
        assert best.objective.value == pytest.approx(best.trajectory.duration, rel=1e-9)
        assert (best.objective.name, best.objective.unit) == ("time", "s")
    reached = {
        to_energy.task.energy: dense(to_energy.trajectory).energy,
        to_speed.task.speed: np.abs(dense(to_speed.trajectory).speed),
        math.pi: np.abs(dense(over.trajectory).angle),
    }
    for goal, column in reached.items():
        # a goal is a lower bound, which the solver keeps a hair's breadth away from
        assert goal * (1.0 - 1e-6) < column[-1] < goal * (1.0 + 1e-4)
        # what is sampled between the nodes may differ by the accuracy of the motion
        assert column[:-1].max() < goal * (1.0 + 1e-3)


def test_a_rotation_closes(solve):
    best = solve(BENCH, ROTATE)
    motion = best.trajectory
    assert motion.angle[-1] - motion.angle[0] == pytest.approx(2.0 * math.pi, rel=1e-9)
    for name in ("momentum", "radial", "radial_speed"):
        column = getattr(motion, name)
        assert column[-1] == pytest.approx(column[0], abs=1e-6 * np.abs(column).max())
    assert best.objective.value == pytest.approx(2.0 * math.pi / motion.duration, rel=1e-9)
