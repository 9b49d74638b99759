# SPDX-License-Identifier: BSD-3-Clause
"""Each further limit of a drive: kept, of some effect, never a gain, and reported as it is."""

from __future__ import annotations

import math

import numpy as np
import pytest
from bench_rigs import DRIVE_LIMITS, MOTORED, ROTATE, advantage, dense, with_slide

import rotorpump as rp

NEAR = 0.01
"""Relative distance within which a limit counts as reached."""

SLACK = 5e-3
"""Share by which a limit may be exceeded between the nodes."""


@pytest.fixture(params=list(DRIVE_LIMITS))
def limited(request, solve):
    """Name of a limit, and the best rotation under it."""
    return request.param, solve(with_slide(MOTORED, **DRIVE_LIMITS[request.param]), ROTATE)


def uses(slide, motion):
    """Use of each limit at every instant, 1 where it is reached, by the words of the report."""
    force, pace = motion.radial_force, motion.radial_speed
    found = {
        "speed": np.abs(pace) / slide.speed,
        "force": np.abs(force) / slide.force,
        "power": np.abs(force * pace) / slide.power,
        "force rate": np.abs(np.gradient(force, motion.time)) / slide.force_rate,
    }
    if slide.stall_force is not None:
        found["motor line"] = np.abs(force / slide.stall_force + pace / slide.no_load_speed)
    return found


def effective(motion):
    """Root mean square of the force [N]."""
    duration = motion.time[-1] - motion.time[0]
    return math.sqrt(np.trapezoid(motion.radial_force**2, motion.time) / duration)


def test_it_is_verified_and_costs_something(limited, rotated):
    _, best = limited
    assert best.status is rp.Status.SOLVED
    assert best.verified
    share = advantage(ROTATE, best.objective.value, rotated.objective.value)
    assert -0.3 < share < -1e-3


def test_it_is_kept_and_reached(limited):
    name, best = limited
    slide, motion = best.rig.radial, dense(best.trajectory)
    for use in uses(slide, motion).values():
        assert use.max() < 1.0 + SLACK
    assert effective(motion) < slide.continuous_force * (1.0 + 1e-3)
    if name != "rubbing":
        use = next(use for use in best.limits if use.name == f"radial {name}")
        assert use.active_share > 0.1
        # a motor line has two numbers and no price
        assert math.isnan(use.price) if name == "motor line" else use.price > 0.0


def test_the_report_on_limits_is_that_of_the_motion(limited):
    _, best = limited
    slide, motion = best.rig.radial, dense(best.trajectory)
    shares = {name: np.mean(use > 1.0 - NEAR) for name, use in uses(slide, motion).items()}
    shares["continuous force"] = float(effective(motion) > slide.continuous_force * (1.0 - NEAR))
    low, high = slide.stroke
    shares["low stop"] = np.mean(motion.radial < low + NEAR * slide.length)
    shares["high stop"] = np.mean(motion.radial > high - NEAR * slide.length)
    for use in best.limits:
        assert use.active_share == pytest.approx(
            shares[use.name.removeprefix("radial ")], abs=0.02
        ), use.name


def test_the_report_on_the_drive_is_that_of_the_motion(limited):
    _, best = limited
    motion = dense(best.trajectory)
    power = motion.radial_force * motion.radial_speed
    loss = (motion.radial_force / MOTORED.radial.motor_constant) ** 2
    (use,) = best.drives
    assert use.axis == "radial"
    assert use.peak_force == pytest.approx(np.abs(motion.radial_force).max(), rel=1e-3)
    assert use.rms_force == pytest.approx(effective(motion), rel=1e-3)
    assert use.peak_power == pytest.approx(np.abs(power).max(), rel=1e-3)
    assert use.work == pytest.approx(np.trapezoid(np.maximum(power, 0.0), motion.time), rel=1e-3)
    assert use.heat == pytest.approx(np.trapezoid(loss, motion.time), rel=1e-3)


def test_rubbing_takes_its_share_of_the_force(solve):
    """F - r sign(v) = m (ρ̈ - g cos φ - ρ ω²) wherever the mass moves."""
    rig = with_slide(MOTORED, **DRIVE_LIMITS["rubbing"])
    motion = dense(solve(rig, ROTATE).trajectory)
    pace = motion.radial_speed
    load = rig.mass * (rig.gravity * np.cos(motion.angle) + motion.radial * motion.speed**2)
    taken = motion.radial_force + load - rig.mass * np.gradient(pace, motion.time)
    moving = np.abs(pace) > 0.1 * rig.radial.speed
    rubbing = rig.radial.rubbing * np.sign(pace)
    # at its switches the force jumps, and differences there are none
    off = np.abs(taken - rubbing)[moving]
    assert np.median(off) < 0.02 * rig.radial.rubbing
    assert np.mean(off < 0.1 * rig.radial.rubbing) > 0.95
