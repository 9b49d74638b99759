# SPDX-License-Identifier: BSD-3-Clause
"""Looser limits are never worse, and in the end nothing is left of them.

The ideal law is best for each half swing and each turn, not by the clock: with no limits at all a
rotation can be a little faster, and a spin-up that has energy to spare spends it on speed. So the
ladder is held against two things: strictly against the optimum without limits, and within
`ABOVE_IDEAL` against the law.
"""

from __future__ import annotations

import math
from itertools import pairwise

import pytest
from bench_rigs import (
    BENCH,
    FULL_TURN,
    PUMP,
    ROTATE,
    SWINGING,
    TURNING,
    UNLIMITED,
    advantage,
    with_slide,
)

import rotorpump as rp

FACTORS = (1, 2, 4, 16, 64)

NOISE = 5e-4
"""Optima are found on meshes of relative accuracy 1e-4, whose errors add up over a motion."""

ABOVE_IDEAL = 0.015
"""Share by which the optimum may be better than the law; 0.007 and 0.010 without any limits."""

LADDERS = {
    "rotate": (TURNING, ROTATE),
    # from here, the law just passes over the top in three half swings: there is little to spare
    "spin-up": (SWINGING, FULL_TURN),
}


@pytest.fixture(params=list(LADDERS))
def ladder(request, solve):
    """The task, the optimum on each rung, the one without limits, and the ideal law's value."""
    rig, task = LADDERS[request.param]
    slide = rig.radial
    rungs = [
        solve(with_slide(rig, speed=factor * slide.speed, force=factor * slide.force), task)
        for factor in FACTORS
    ]
    unlimited = solve(with_slide(rig, **UNLIMITED), task)
    return task, rungs, unlimited, rp.run_ideal(rig, task).objective.value


def test_every_rung_is_solved_and_verified(ladder):
    _, rungs, unlimited, _ = ladder
    for best in (*rungs, unlimited):
        assert best.status is rp.Status.SOLVED
        assert best.verified


def test_looser_limits_are_never_worse(ladder):
    task, rungs, unlimited, _ = ladder
    for tight, loose in pairwise((*rungs, unlimited)):
        assert advantage(task, loose.objective.value, tight.objective.value) > -NOISE


def test_the_gap_to_no_limits_closes(ladder):
    task, rungs, unlimited, _ = ladder
    gaps = [advantage(task, unlimited.objective.value, best.objective.value) for best in rungs]
    # f times the speed and the force make a move at least √f times as quick, and what a finite
    # move costs falls with its time
    for (factor, gap), (next_factor, next_gap) in pairwise(zip(FACTORS, gaps, strict=True)):
        assert next_gap < gap * math.sqrt(factor / next_factor) + NOISE
    assert gaps[-1] < 3e-3


def test_the_ladder_tends_to_the_ideal_law(ladder):
    task, rungs, unlimited, ideal = ladder
    far, near = (abs(advantage(task, rungs[k].objective.value, ideal)) for k in (0, -1))
    assert near < ABOVE_IDEAL
    assert near < 0.1 * far
    assert -NOISE < advantage(task, unlimited.objective.value, ideal) < ABOVE_IDEAL


@pytest.mark.parametrize(
    ("which", "free"), [("rotate", "speed"), ("rotate", "force"), ("spin-up", "force")]
)
def test_one_limit_alone_lies_between_both_and_none(which, free, solve):
    rig, task = LADDERS[which]
    best = solve(with_slide(rig, **{free: math.inf}), task)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    kept = {"radial speed", "radial force"} - {f"radial {free}"}
    assert {use.name for use in best.limits} == kept | {"radial high stop", "radial low stop"}
    value = best.objective.value
    assert advantage(task, value, solve(rig, task).objective.value) > -NOISE
    loosest = solve(with_slide(rig, **UNLIMITED), task)
    assert advantage(task, loosest.objective.value, value) > -NOISE


@pytest.mark.parametrize("free", [("speed",), ("force",), ("speed", "force")])
def test_a_pump_without_a_limit_is_verified_too(free, solve, pumped):
    best = solve(with_slide(BENCH, **dict.fromkeys(free, math.inf)), PUMP)
    assert best.status is rp.Status.SOLVED
    assert best.verified
    assert advantage(PUMP, best.objective.value, pumped.objective.value) > -NOISE
