# SPDX-License-Identifier: BSD-3-Clause
"""Mirroring the start and changing the units change nothing but signs and units."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from bench_rigs import BENCH, PUMP, ROTATE, RUBBING, TO_SPEED

import rotorpump as rp


def mirrored(task):
    return replace(task, start_angle=-task.start_angle, start_speed=-task.start_speed)


def rescaled(rig, mass=1.0, length=1.0, time=1.0):
    """The same rig in units that make masses, lengths and times larger by these factors."""
    torque = mass * length**2 / time**2
    slide, friction = rig.radial, rig.friction
    low, high = slide.stroke
    return rp.Rig(
        wheel=rp.Wheel(
            inertia=mass * length**2 * rig.wheel.inertia,
            mass=mass * rig.wheel.mass,
        ),
        mass=mass * rig.mass,
        radial=replace(
            slide,
            stroke=(length * low, length * high),
            speed=length / time * slide.speed,
            force=torque / length * slide.force,
        ),
        friction=rp.AxleFriction(
            viscous=torque * time * friction.viscous,
            coulomb=torque * friction.coulomb,
            quadratic=torque * time**2 * friction.quadratic,
        ),
        gravity=length / time**2 * rig.gravity,
    )


def test_a_mirrored_start_gives_the_mirrored_motion(solve):
    best, other = solve(BENCH, TO_SPEED), solve(BENCH, mirrored(TO_SPEED))
    assert other.verified
    assert other.objective.value == pytest.approx(best.objective.value, rel=1e-6)
    places = np.linspace(0.0, 1.0, 501)
    here, there = (one.trajectory.at(places * one.trajectory.duration) for one in (best, other))
    np.testing.assert_allclose(there.angle, -here.angle, atol=1e-4)
    np.testing.assert_allclose(there.radial, here.radial, atol=1e-4)


def test_a_heavier_rig_has_more_energy_in_proportion(solve, pumped):
    best = solve(rescaled(BENCH, mass=47.0), PUMP)
    assert best.verified
    assert best.objective.value == pytest.approx(47.0 * pumped.objective.value, rel=1e-6)


def test_all_units_may_change_at_once(solve):
    best = solve(rescaled(RUBBING, mass=0.31, length=1.7, time=0.6), ROTATE)
    assert best.verified
    value = solve(RUBBING, ROTATE).objective.value
    assert best.objective.value == pytest.approx(value / 0.6, rel=1e-6)
