# SPDX-License-Identifier: BSD-3-Clause
"""What a rig cannot do is said, with figures, and never called a solution."""

from __future__ import annotations

import math
import re

import pytest
from bench_rigs import BENCH, PUMP, ROTATE, with_friction

import rotorpump as rp

HELD = with_friction(BENCH, coulomb=3.0)
"""The weight of the mass has a torque of 3.0 N m at most, of 1.7 N m where the pump starts."""

DRAGGED = with_friction(BENCH, viscous=0.4)
"""Swings die down whatever the mass does."""

BEYOND = rp.SpinUp(energy=8.0, start_angle=0.8)


def figures(message, unit):
    """Numbers that stand before a unit, in the order in which they stand."""
    return [float(number) for number in re.findall(rf"([\d.]+(?:e[+-]?\d+)?) {unit}\b", message)]


def refuse(rig, task):
    solution = rp.optimize(rig, task, on_failure="return")
    assert solution.status is rp.Status.INFEASIBLE
    assert not solution.success
    assert not solution.verified
    assert solution.checks == ()
    assert math.isnan(solution.objective.value)
    assert "NO SOLUTION" in solution.summary() or "INFEASIBLE" in solution.summary()
    return solution


def test_a_wheel_that_friction_holds_is_told():
    assert "friction" in refuse(HELD, PUMP).message


def test_a_rotation_that_friction_ends_is_told_in_joules():
    message = refuse(with_friction(BENCH, viscous=0.5), ROTATE).message
    taken, added = figures(message, "J")
    assert message.index("friction takes") < message.index("drive adds")
    assert taken > added > 0.0


def test_an_energy_out_of_reach_is_told_with_the_highest_reached():
    solution = refuse(DRAGGED, BEYOND)
    wanted, highest = figures(solution.message, "J")
    assert wanted == BEYOND.energy
    # carrying the mass to the inner end in the first swing gives 1.7 J above the outer end
    inner, outer = BENCH.radial.stroke
    weight = BENCH.mass * BENCH.gravity
    assert weight * (outer - inner) < highest < BEYOND.energy
    assert highest == pytest.approx(solution.trajectory.energy.max(), rel=1e-2)
    # the same rig pumped for about as long does not get higher either
    pump = rp.Pump(duration=0.5, start_angle=BEYOND.start_angle)
    assert rp.optimize(DRAGGED, pump).objective.value < highest * (1.0 + 1e-3)


def test_the_error_carries_the_solution():
    with pytest.raises(rp.SolveError, match="friction") as caught:
        rp.optimize(HELD, PUMP, on_failure="raise")
    solution = caught.value.solution
    assert isinstance(solution, rp.Solution)
    assert solution.status is rp.Status.INFEASIBLE
    assert str(caught.value) == solution.message
    assert (solution.rig, solution.task) == (HELD, PUMP)
