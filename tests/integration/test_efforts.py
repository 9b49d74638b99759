# SPDX-License-Identifier: BSD-3-Clause
"""Least heat and least work within a deadline, beside the least time."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from bench_rigs import MOTORED, SHORT_SPIN_UP, dense

import rotorpump as rp


@pytest.fixture
def fastest(solve):
    """Least-time motion."""
    return solve(MOTORED, SHORT_SPIN_UP)


@pytest.fixture
def coolest(solve, fastest):
    """Motion of the least heat in a little more time."""
    deadline = round(1.2 * fastest.objective.value, 2)
    return solve(MOTORED, replace(SHORT_SPIN_UP, deadline=deadline), "heat")


def test_least_heat_costs_less_than_least_time(fastest, coolest):
    assert fastest.verified
    assert coolest.status is rp.Status.SOLVED
    assert coolest.verified
    assert (coolest.objective.name, coolest.objective.unit) == ("heat", "J")
    assert coolest.objective.value < 0.8 * fastest.drives[0].heat
    assert coolest.drives[0].work < fastest.drives[0].work
    took = coolest.trajectory.duration
    assert fastest.objective.value < took < coolest.task.deadline * (1.0 + 1e-6)


def test_heat_is_the_copper_loss_of_the_motion(coolest):
    motion = dense(coolest.trajectory)
    loss = (motion.radial_force / MOTORED.radial.motor_constant) ** 2
    heat = np.trapezoid(loss, motion.time)
    assert coolest.objective.value == pytest.approx(heat, rel=1e-3)
    assert coolest.objective.value == pytest.approx(coolest.drives[0].heat, rel=1e-6)


def test_the_goal_is_reached_all_the_same(fastest, coolest):
    for best in (fastest, coolest):
        energy = best.trajectory.energy
        assert energy[-1] == pytest.approx(SHORT_SPIN_UP.energy, rel=1e-4)
