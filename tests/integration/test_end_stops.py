# SPDX-License-Identifier: BSD-3-Clause
"""End stops that the drive has to avoid leave fewer motions to choose from."""

from __future__ import annotations

import numpy as np
import pytest
from bench_rigs import BENCH, PUMP, ROTATE, TO_SPEED, advantage, with_slide

import rotorpump as rp

SAME = 1e-3
"""Relative distance of two local optima on different meshes that count as the same."""

OVERLOADED = with_slide(BENCH, force=20.0)
FAST = rp.Pump(duration=0.8, start_angle=0.3, start_speed=8.0)
"""The mass starts outside, where its centrifugal load alone is about the drive's force."""


def drive_balance(rig, motion):
    """m (ρ̈ - ρ ω² - g cos φ) - F at the middle of each interval, with ρ̈ by differences [N]."""
    edges = motion.time[motion.breaks]
    middle = 0.5 * (edges[:-1] + edges[1:])
    reach = 0.25 * np.diff(edges)
    before, here, after = (motion.at(middle + side * reach) for side in (-1.0, 0.0, 1.0))
    acceleration = (after.radial_speed - before.radial_speed) / (2.0 * reach)
    load = here.radial * here.speed**2 + rig.gravity * np.cos(here.angle)
    return rig.mass * (acceleration - load) - here.radial_force


@pytest.mark.parametrize("task", [PUMP, TO_SPEED, ROTATE], ids=lambda task: type(task).__name__)
def test_avoiding_the_stops_is_verified_and_not_better(task, solve):
    rig = with_slide(BENCH, end_stops="avoid")
    best = solve(rig, task)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    bearing = solve(BENCH, task).objective.value
    assert advantage(task, best.objective.value, bearing) < SAME
    # whatever the drive alone can do needs no stop
    assert advantage(task, best.objective.value, bearing) > -0.1


def test_the_drive_carries_everything_where_stops_are_avoided(solve):
    rig = with_slide(BENCH, end_stops="avoid")
    balance = drive_balance(rig, solve(rig, PUMP).trajectory)
    assert np.abs(balance).max() < 5e-3 * rig.radial.force


def test_a_stop_bears_what_the_drive_cannot(solve):
    best = solve(OVERLOADED, FAST)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    assert np.abs(drive_balance(OVERLOADED, best.trajectory)).max() > 0.5 * 20.0
    refused = rp.optimize(with_slide(OVERLOADED, end_stops="avoid"), FAST, on_failure="return")
    assert not refused.success
    assert not refused.verified
    assert refused.message
