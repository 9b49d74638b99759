# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law on the three tasks."""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from ideal_rig import FAR, FRICTIONS, NEAR, PULL, pumped_and_lost, rig
from scipy.integrate import solve_ivp

from rotorpump.errors import InputError
from rotorpump.laws.instantaneous import run_ideal
from rotorpump.tasks import Pump, Rotate, SpinUp


@pytest.mark.parametrize("friction", FRICTIONS)
def test_energy_audit_of_pumping(friction):
    built = rig(*friction)
    run = run_ideal(built, Pump(duration=8.0, start_angle=0.3))
    pumped, lost = pumped_and_lost(run, built.friction)
    energy = run.trajectory.energy
    assert run.objective.value == energy[-1]
    assert energy[-1] - energy[0] == pytest.approx(pumped - lost, abs=2e-4 * pumped)
    assert run.trajectory.time[-1] == 8.0


@pytest.mark.parametrize("friction", FRICTIONS)
def test_no_other_move_angle_gives_more_momentum(friction):
    # The rule is best per half swing: an inward move at any other angle gives less.
    built = rig(*friction)
    c = built.friction

    def momentum_squared(early, start=1.0):
        """H² at the lowest point for an inward move at ``early``, falling from rest."""

        def slope(angle, half_square):
            outside = angle > early
            radial, inertia = (0.4, FAR) if outside else (0.2, NEAR)
            square = 2.0 * max(half_square[0], 0.0)
            weight = 1.2 * 9.80665 * radial * math.sin(angle)
            drag = c.viscous * math.sqrt(square) + c.quadratic * square / inertia
            return [-inertia * (weight - c.coulomb) + drag]

        ends = [start, max(early, 0.0), 0.0]
        value = [1e-12]
        for begin, end in pairwise(ends):
            if begin > end:
                value = solve_ivp(slope, (begin, end), value, rtol=1e-9, atol=1e-12).y[:, -1]
        return 2.0 * value[0]

    law = run_ideal(built, Pump(duration=1.0, start_angle=1.0)).trajectory
    bottom = np.flatnonzero(law.angle == 0.0)[0]
    best = law.momentum[bottom] ** 2
    tried = [momentum_squared(early) for early in (0.0, 0.02, 0.05, 0.1, 0.2, 0.4)]
    assert max(tried) <= best * (1.0 + 1e-6)
    assert max(tried) >= best * (1.0 - 2e-3)


@pytest.mark.parametrize("friction", FRICTIONS)
@pytest.mark.parametrize(
    "task",
    [
        lambda sign: Pump(duration=5.0, start_angle=sign * 0.4),
        lambda sign: Pump(duration=5.0, start_angle=sign * 0.4, start_speed=sign * 3.0),
        lambda sign: SpinUp(full_turn=True, start_angle=sign * 0.4, start_radial=0.3),
    ],
)
def test_mirror_symmetry(friction, task):
    one, other = (run_ideal(rig(*friction), task(sign)) for sign in (1.0, -1.0))
    assert other.objective.value == one.objective.value
    np.testing.assert_array_equal(other.trajectory.angle, -one.trajectory.angle)
    np.testing.assert_array_equal(other.trajectory.momentum, -one.trajectory.momentum)
    np.testing.assert_array_equal(other.trajectory.axle_load, one.trajectory.axle_load)


def test_energy_goal_is_met_within_a_jump():
    run = run_ideal(rig(), SpinUp(energy=12.0, start_angle=0.3))
    t = run.trajectory
    assert run.reached
    assert run.objective.value == t.time[-1] == t.time[-2]
    assert t.energy[-2] < 12.0 <= t.energy[-1]
    assert t.energy[:-1].max() < 12.0


def test_speed_goal_is_met_within_a_stretch_or_a_jump():
    jumped = run_ideal(rig(), SpinUp(speed=7.0, start_angle=0.3)).trajectory
    assert jumped.time[-1] == jumped.time[-2]
    assert np.abs(jumped.speed[:-1]).max() < 7.0 <= abs(jumped.speed[-1])
    # Falling from 1.5 rad the wheel passes 2 rad/s before the lowest point.
    early = run_ideal(rig(), SpinUp(speed=2.0, start_angle=1.5)).trajectory
    assert abs(early.speed[-1]) == pytest.approx(2.0, abs=1e-9)
    assert 0.0 < early.angle[-1] < 1.5


def test_full_turn_ends_on_the_top():
    run = run_ideal(rig(), SpinUp(full_turn=True, start_angle=0.3))
    assert abs(run.trajectory.angle[-1]) == math.pi
    assert np.abs(run.trajectory.angle[:-1]).max() < math.pi
    assert run.objective.name == "time"
    assert run.objective.unit == "s"


def test_a_faster_start_reaches_the_goal_sooner():
    slow = run_ideal(rig(), SpinUp(energy=30.0, start_angle=0.3)).objective.value
    fast = run_ideal(rig(), SpinUp(energy=30.0, start_angle=0.9)).objective.value
    assert fast < slow


@pytest.mark.parametrize(
    "task",
    [
        SpinUp(energy=1.0, start_angle=1.5),
        SpinUp(speed=2.0, start_angle=0.0, start_speed=-3.0),
        SpinUp(full_turn=True, start_angle=-math.pi, start_speed=-1.0),
    ],
)
def test_goal_already_met(task):
    with pytest.raises(InputError, match=r"at the start|past the top"):
        run_ideal(rig(), task)


@pytest.mark.parametrize("goal", [{"energy": 300.0}, {"speed": 40.0}], ids=["energy", "speed"])
@pytest.mark.parametrize("start_speed", [0.0, 15.0, 25.0])
def test_goal_beyond_the_steady_motion(goal, start_speed):
    # Also from a start that is faster than the steady rotation and only slows down.
    built = rig(viscous=0.1)
    run = run_ideal(built, SpinUp(start_angle=0.3, start_speed=start_speed, **goal))
    assert not run.reached
    assert math.isnan(run.objective.value)
    assert "saturates" in run.message
    assert "highest energy" in run.message
    steady = run_ideal(built, Rotate()).trajectory.energy.max()
    if start_speed == 0.0:
        assert run.trajectory.energy.max() <= steady * (1.0 + 1e-9)
        # A goal a little below the steady motion is still reached.
        assert run_ideal(built, SpinUp(start_angle=0.3, energy=0.99 * steady)).reached


def test_swings_that_die_out_never_turn_over():
    run = run_ideal(rig(viscous=0.5), SpinUp(full_turn=True, start_angle=1.0))
    assert not run.reached
    assert "saturates" in run.message


def test_coulomb_friction_holds_the_wheel():
    # It sticks where m g ρ_outer |sin φ| <= c.
    dry = 0.2 * PULL
    stuck = Pump(duration=3.0, start_angle=0.99 * math.asin(0.2))
    run = run_ideal(rig(0.0, dry), stuck)
    assert "holds" in run.message
    assert run.objective.value == run.trajectory.energy[0]
    assert set(run.trajectory.angle) == {stuck.start_angle}
    assert run.trajectory.time[-1] == 3.0
    # Static friction balances the weight: the axle carries it, nothing moves.
    weight = (1.2 + 3.0) * 9.80665
    assert run.trajectory.axle_load == pytest.approx(np.full(2, weight), rel=1e-12)
    loose = run_ideal(rig(0.0, dry), Pump(duration=3.0, start_angle=1.01 * math.asin(0.2)))
    # Little more than enough: it slips to about as far below the limit as it began above.
    assert loose.trajectory.angle[-1] == pytest.approx(0.99 * math.asin(0.2), abs=1e-5)
    spin = run_ideal(rig(0.0, dry), SpinUp(energy=20.0, start_angle=stuck.start_angle))
    assert not spin.reached
    assert "rest" in spin.message


def test_trajectory_interpolates_the_jump():
    run = run_ideal(rig(), Pump(duration=4.0, start_angle=0.5))
    t = run.trajectory
    jump = int(np.flatnonzero(np.diff(t.radial) < 0.0)[0])
    assert t.time[jump] == t.time[jump + 1]
    instant = float(t.time[jump])
    around = t.at([instant - 1e-9, instant, instant + 1e-9])
    assert list(around.radial) == pytest.approx([0.4, 0.2, 0.2], abs=1e-12)
    assert {jump, jump + 1} <= set(t.arcs)
    # Between nodes the pieces are as good as the integration of the same motion.
    fine = t.at(np.linspace(0.0, 4.0, 1001))
    held = 0.5 * fine.momentum**2 / (0.25 + 1.2 * fine.radial**2)
    energy = held + 1.2 * 9.80665 * (0.4 - fine.radial * np.cos(fine.angle))
    assert fine.energy == pytest.approx(energy, abs=1e-5)


def test_unknown_objective_and_impossible_start():
    with pytest.raises(InputError, match="objective"):
        run_ideal(rig(), Pump(duration=1.0, start_angle=0.3), objective="heat")
    with pytest.raises(InputError, match="start_radial"):
        run_ideal(rig(), Pump(duration=1.0, start_angle=0.3, start_radial=0.5))
