# SPDX-License-Identifier: BSD-3-Clause
"""Steady rotation either way, against a load, with heavier friction, and at a given speed."""

from __future__ import annotations

import math
import re

import numpy as np
import pytest
from bench_rigs import BENCH, LOPSIDED, ROTATE, dense, with_friction

import rotorpump as rp

LOAD = rp.Rotate(load_torque=0.3)
BACKWARDS = rp.Rotate(direction=-1)
LEISURELY = rp.Rotate(mean_speed=8.0)


def test_the_other_direction_is_that_of_the_mirrored_rig(solve):
    best, other = solve(LOPSIDED, BACKWARDS), solve(LOPSIDED.mirrored(), ROTATE)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    assert other.verified
    assert best.objective.value == pytest.approx(other.objective.value, rel=1e-9)
    there, here = best.trajectory, other.trajectory
    assert there.angle[-1] - there.angle[0] == pytest.approx(-2.0 * math.pi, rel=1e-9)
    assert there.speed.max() < 0.0
    for name, sign in (("angle", -1), ("momentum", -1), ("radial", 1), ("radial_force", 1)):
        column = sign * getattr(here, name)
        atol = 1e-9 * np.abs(column).max()
        np.testing.assert_allclose(getattr(there, name), column, rtol=0.0, atol=atol)
    assert np.all(there.tangential == LOPSIDED.tangential)
    assert np.all(here.tangential == -LOPSIDED.tangential)


def test_a_load_slows_the_rotation(solve, rotated):
    best = solve(BENCH, LOAD)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    # in each turn the load takes 2π times its torque, about what friction takes of the free one
    assert 0.5 < best.objective.value / rotated.objective.value < 0.9
    motion = dense(best.trajectory)
    taken = np.trapezoid(LOAD.load_torque * motion.speed, motion.time)
    assert taken == pytest.approx(2.0 * math.pi * LOAD.load_torque, rel=1e-4)
    lost = np.trapezoid(BENCH.friction.viscous * motion.speed**2, motion.time)
    given = np.trapezoid(motion.radial_force * motion.radial_speed, motion.time)
    # stops carry the resting mass and do no work
    assert given == pytest.approx(taken + lost, rel=2e-3)


def test_the_load_gets_torque_times_speed(solve):
    speed, power = solve(BENCH, LOAD), solve(BENCH, LOAD, "load power")
    assert power.verified
    assert (power.objective.name, power.objective.unit) == ("load power", "W")
    expected = LOAD.load_torque * speed.objective.value
    assert power.objective.value == pytest.approx(expected, rel=1e-3)


def test_a_load_that_is_too_heavy_is_told_in_joules():
    heavy = rp.Rotate(load_torque=1.0)
    solution = rp.optimize(BENCH, heavy, on_failure="return")
    assert solution.status is rp.Status.INFEASIBLE
    assert not solution.verified
    pattern = r"friction takes ([\d.]+) J, the load ([\d.]+) J and the drive adds (-?[\d.]+) J"
    found = re.search(pattern, solution.message)
    assert found is not None, solution.message
    friction, load, drive = map(float, found.groups())
    assert load == pytest.approx(2.0 * math.pi * heavy.load_torque, rel=0.02)
    assert friction + load > drive


def test_friction_by_load_slows_the_rotation(solve, rotated):
    rig = with_friction(BENCH, load=0.05, journal_radius=0.01)
    best = solve(rig, ROTATE)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    motion = dense(best.trajectory)
    arm = rig.friction.load * rig.friction.journal_radius
    drag = arm * motion.axle_load + rig.friction.viscous * motion.speed
    lost = np.trapezoid(drag * motion.speed, motion.time)
    given = np.trapezoid(motion.radial_force * motion.radial_speed, motion.time)
    assert given == pytest.approx(lost, rel=2e-3)
    assert best.objective.value < rotated.objective.value * (1.0 - 1e-3)


def test_a_given_mean_speed_is_met_with_the_least_work(solve, rotated):
    best = solve(BENCH, LEISURELY)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    assert (best.objective.name, best.objective.unit) == ("work", "J")
    mean = 2.0 * math.pi / best.trajectory.duration
    assert mean == pytest.approx(LEISURELY.mean_speed, rel=1e-6)
    motion = dense(best.trajectory)
    power = motion.radial_force * motion.radial_speed
    work = np.trapezoid(np.maximum(power, 0.0), motion.time)
    assert best.objective.value == pytest.approx(work, rel=1e-3)
    # what friction takes has to be put in
    lost = np.trapezoid(BENCH.friction.viscous * motion.speed**2, motion.time)
    assert lost * (1.0 - 1e-3) < best.objective.value < rotated.drives[0].work
