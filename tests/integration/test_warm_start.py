# SPDX-License-Identifier: BSD-3-Clause
"""A motion to start from: taken in whatever form it comes, and never worse for it."""

from __future__ import annotations

from bench_rigs import BENCH, ROTATE, TO_SPEED, advantage

import rotorpump as rp

NOISE = 5e-4


def test_an_optimum_as_guess_is_kept(solve):
    known = solve(BENCH, TO_SPEED)
    best = rp.optimize(BENCH, TO_SPEED, guess=known.trajectory)
    assert best.verified
    assert advantage(TO_SPEED, best.objective.value, known.objective.value) > -NOISE


def test_the_jumps_of_the_ideal_law_serve_as_a_guess(rotated):
    best = rp.optimize(BENCH, ROTATE, guess=rp.run_ideal(BENCH, ROTATE))
    assert best.verified
    assert advantage(ROTATE, best.objective.value, rotated.objective.value) > -NOISE
