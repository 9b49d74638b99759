# SPDX-License-Identifier: BSD-3-Clause
"""Best motions that are spoiled a little must fail the check that is there for it."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from bench_rigs import BENCH, PUMP, ROTATE, failed_checks, with_friction, with_slide

from rotorpump.checking.report import check_motion


def failures(rig, best, **changes):
    """Failed checks of a motion, or of a spoiled copy of it."""
    trajectory = replace(best.trajectory, **changes)
    return failed_checks(check_motion(rig, best.task, trajectory, best.objective))


@pytest.fixture(params=["pump", "rotate"])
def best(request, pumped, rotated):
    """A verified motion."""
    return {"pump": pumped, "rotate": rotated}[request.param]


def test_the_motion_itself_passes(best):
    assert failures(BENCH, best) == set()


def test_another_force_is_replayed_to_another_motion(best):
    force = best.trajectory.radial_force
    failed = failures(BENCH, best, radial_force=force + 0.02 * BENCH.radial.force)
    assert {"replay speed", "replay radial"} <= failed


@pytest.mark.parametrize("factor", [0.98, 1.02])
def test_a_force_out_of_scale_breaks_the_energy_audit(best, factor):
    failed = failures(BENCH, best, radial_force=factor * best.trajectory.radial_force)
    assert {"energy audit", "replay radial"} <= failed


@pytest.mark.parametrize("name", ["speed", "force"])
def test_a_tighter_limit_is_exceeded(best, name):
    rig = with_slide(BENCH, **{name: 0.95 * getattr(BENCH.radial, name)})
    assert failures(rig, best) == {f"radial {name}"}


@pytest.mark.parametrize("end", ["low", "high"])
def test_a_shorter_stroke_is_left(pumped, end):
    low, high = BENCH.radial.stroke
    cut = 0.05 * (high - low)
    stroke = (low + cut, high) if end == "low" else (low, high - cut)
    assert "radial stroke" in failures(with_slide(BENCH, stroke=stroke), pumped)


@pytest.mark.parametrize("factor", [0.9, 1.1])
def test_other_friction_is_noticed(best, factor):
    rig = with_friction(BENCH, viscous=factor * BENCH.friction.viscous)
    assert {"energy audit", "replay speed"} <= failures(rig, best)


@pytest.mark.parametrize("factor", [0.9, 1.1])
def test_other_friction_is_noticed_where_the_speed_is_the_control(solve, factor):
    free = with_slide(BENCH, force=math.inf)
    best = solve(free, PUMP)
    assert failures(free, best) == set()
    rig = with_friction(free, viscous=factor * BENCH.friction.viscous)
    assert {"momentum audit", "replay speed"} <= failures(rig, best)


def test_a_value_that_is_claimed_too_high_is_noticed(best):
    claimed = replace(best.objective, value=1.001 * best.objective.value)
    checks = check_motion(BENCH, best.task, best.trajectory, claimed)
    assert failed_checks(checks) == {"claimed objective"}


def test_the_motion_of_another_task_is_noticed(pumped):
    late = replace(PUMP, duration=1.01 * PUMP.duration)
    aside = replace(PUMP, start_angle=1.01 * PUMP.start_angle)
    for task, name in ((late, "duration"), (aside, "start angle")):
        checks = check_motion(BENCH, task, pumped.trajectory, pumped.objective)
        assert failed_checks(checks) == {name}


def test_a_turn_that_slows_down_is_no_steady_rotation(rotated):
    motion = rotated.trajectory
    share = (motion.time - motion.time[0]) / motion.duration
    fading = 1.0 - 1e-4 * share
    failed = failures(
        BENCH, rotated, speed=fading * motion.speed, momentum=fading * motion.momentum
    )
    assert "periodic momentum" in failed
    assert rotated.task == ROTATE
