# SPDX-License-Identifier: BSD-3-Clause
"""Optima that must not be missed or refused: each was, on rigs only a little different."""

from __future__ import annotations

import math

from bench_rigs import BENCH, PUMP, TO_SPEED, UNLIMITED, with_friction, with_slide

import rotorpump as rp

LOOSE = rp.Rig(
    wheel=rp.Wheel(inertia=0.21, mass=3.4),
    mass=0.9,
    radial=rp.Slide(stroke=(0.15, 0.33), speed=7.2, force=480.0),
    friction=rp.AxleFriction(viscous=0.05),
)
"""Under these limits the practical law, kept up for long, comes close to the optimum."""


def test_a_little_more_friction_costs_a_little_time(solve):
    assert BENCH.friction.viscous == 0.040
    before = solve(BENCH, TO_SPEED).objective.value
    after = rp.optimize(with_friction(BENCH, viscous=0.050), TO_SPEED).objective.value
    # followed in small steps of friction, each optimum the guess for the next, it is 4 % more
    assert before < after < 1.1 * before


def test_an_optimum_is_not_refused_for_a_law_that_still_slows_down():
    assert rp.optimize(LOOSE, rp.Rotate()).verified


def test_a_pump_without_limits_is_worse_by_the_sliding_mass_at_most(solve):
    # A mass that jumps has no speed to count; under a force limit, its speed counts at the end.
    limited = solve(with_slide(BENCH, speed=math.inf), PUMP)
    unlimited = solve(with_slide(BENCH, **UNLIMITED), PUMP)
    sliding = 0.5 * BENCH.mass * limited.trajectory.radial_speed[-1] ** 2
    assert unlimited.objective.value > (limited.objective.value - sliding) * (1.0 - 1e-3)
