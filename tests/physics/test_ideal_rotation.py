# SPDX-License-Identifier: BSD-3-Clause
"""Steady rotation under the ideal law."""

from __future__ import annotations

import math

import numpy as np
import pytest
from ideal_rig import FAR, FRICTIONS, NEAR, PULL, pumped_and_lost, rig
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from rotorpump.laws.instantaneous import run_ideal
from rotorpump.tasks import Rotate


@pytest.mark.parametrize("friction", FRICTIONS[:1] + FRICTIONS[2:])
def test_steady_rotation(friction):
    built = rig(*friction)
    run = run_ideal(built, Rotate())
    t = run.trajectory
    assert run.reached
    assert (t.time[0], t.angle[0]) == (0.0, 0.0)
    assert t.angle[-1] == pytest.approx(2.0 * math.pi, abs=1e-14)
    assert t.momentum[-1] == pytest.approx(t.momentum[0], rel=1e-9)
    assert t.radial[-1] == t.radial[0]
    assert run.objective.value == pytest.approx(2.0 * math.pi / t.time[-1], rel=1e-14)
    pumped, lost = pumped_and_lost(run, built.friction)
    assert pumped == pytest.approx(lost, rel=1e-3)


def test_steady_rotation_against_the_angle_as_variable():
    # d(H²/2)/dφ = -I m g ρ sin φ - b H and dt/dφ = I/H, inside while rising, then outside.
    def turn(momentum):
        state = np.array([0.5 * momentum**2, 0.0])
        for begin, radial, inertia in ((0.0, 0.2, NEAR), (math.pi, 0.4, FAR)):

            def slope(angle, state, radial=radial, inertia=inertia):
                now = math.sqrt(2.0 * state[0])
                weight = inertia * 1.2 * 9.80665 * radial * math.sin(angle)
                return [-weight - 0.05 * now, inertia / now]

            span = (begin, begin + math.pi)
            state = solve_ivp(slope, span, state, "DOP853", rtol=1e-11, atol=1e-12).y[:, -1]
        return state

    root = brentq(lambda h: turn(h)[0] - 0.5 * h**2, 2.5, 50.0, xtol=1e-12)
    speed = 2.0 * math.pi / turn(root)[1]
    assert run_ideal(rig(), Rotate()).objective.value == pytest.approx(speed, rel=1e-9)


@pytest.mark.parametrize("coulomb", [0.0, 0.1])
def test_speed_without_a_bound(coulomb):
    # Coulomb friction takes the same at every speed: what it leaves adds up without end.
    run = run_ideal(rig(0.0, coulomb), Rotate())
    assert run.objective.value == math.inf
    assert not run.reached
    assert "unbounded" in run.message


@pytest.mark.parametrize("friction", [(0.6, 0.0, 0.0), (0.0, 1.5, 0.0), (0.0, 0.0, 0.5)])
def test_rotation_that_friction_forbids(friction):
    run = run_ideal(rig(*friction), Rotate())
    assert not run.reached
    assert math.isnan(run.objective.value)
    assert "no steady rotation" in run.message
    words = run.message.split()
    pumped, lost = (float(words[i - 1]) for i, word in enumerate(words) if word == "J")
    assert lost > pumped > 0.0
    # Let go at rest, stopped at rest: what is missing is the height to the top.
    end = run.trajectory.angle[-1]
    assert run.trajectory.momentum[-1] == 0.0
    assert abs(end) < math.pi
    height = math.cos(run.trajectory.angle[0]) - math.cos(end)
    assert pumped - lost == pytest.approx(PULL * height, abs=1e-4)
    if friction[1]:
        assert lost == pytest.approx(friction[1] * (end - run.trajectory.angle[0]), rel=1e-5)


def test_rotation_begins_where_friction_allows_it():
    # The border between no steady rotation and one lies where the slowest turn just comes over.
    feasible, forbidden = 0.05, 0.6
    while forbidden - feasible > 1e-5:
        middle = 0.5 * (feasible + forbidden)
        if run_ideal(rig(middle), Rotate()).reached:
            feasible = middle
        else:
            forbidden = middle
    border = run_ideal(rig(feasible), Rotate()).trajectory
    assert np.abs(border.speed).min() < 0.3


def test_rotation_under_hopeless_friction():
    run = run_ideal(rig(0.0, 1.01 * PULL), Rotate())
    assert math.isnan(run.objective.value)
    assert "wherever it stands" in run.message
    creeping = run_ideal(rig(50.0, 0.0, 5.0), Rotate())
    assert math.isnan(creeping.objective.value)
    assert "short of the top" in creeping.message
