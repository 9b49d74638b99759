# SPDX-License-Identifier: BSD-3-Clause
"""The practical law: limits, mirror symmetry, energy, and what its trials report."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from law_rigs import HALF, RIG, audit, rig_on, run_for

from rotorpump.errors import InputError
from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.lead import LeadRun, Leads
from rotorpump.laws.practical import run_practical, sampled_trajectory
from rotorpump.laws.rotation_trials import try_rotation
from rotorpump.laws.trials import energy_of, slams, try_pump, try_spin_up
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.tasks import Pump, Rotate, SpinUp

START = Pump(duration=4.0, start_angle=0.5)


def rig_with(speed: float, force: float, **changes) -> Rig:
    return rig_on(radial=Slide(stroke=(0.2, 0.4), speed=speed, force=force), **changes)


RIGS = st.builds(
    rig_with,
    st.floats(0.3, 2.0),
    st.floats(18.0, 120.0),
    friction=st.builds(AxleFriction, st.floats(0.0, 0.1), st.sampled_from([0.0, 0.05])),
)


@settings(deadline=None, max_examples=25)
@given(RIGS, st.floats(0.2, 2.5), st.floats(0.2, 1.0), st.floats(0.2, 1.0))
def test_limits_hold_at_every_step(rig, angle, bottom, turn):
    task = Pump(duration=4.0, start_angle=angle)
    run = run_for(rig, task, leads=Leads(bottom, turn))
    radial, speed = run.states[2:4]
    inner, outer = rig.radial.stroke
    assert np.abs(run.forces).max() <= rig.radial.force
    assert radial.min() >= inner
    assert radial.max() <= outer
    # The drive holds its force through a step while the load changes, so the speed may overshoot
    # by a term of second order in the step; a load beyond the drive's force may do more.
    if not _overloaded(rig, run):
        assert np.abs(speed).max() <= rig.radial.speed * 1.005


def _overloaded(rig: Rig, run: LeadRun) -> bool:
    momentum, radial = run.states[1:3]
    spin = momentum / (rig.wheel.inertia + rig.mass * radial**2)
    load = rig.mass * (rig.radial.stroke[1] * spin**2 + rig.gravity)
    return bool(load.max() > rig.radial.force)


def test_overshoot_of_the_speed_limit_is_of_second_order():
    rig = rig_with(0.4, 60.0)
    excess = [
        np.abs(run_for(rig, START, finer=finer).states[3]).max() / rig.radial.speed - 1.0
        for finer in (1, 2, 4)
    ]
    assert 0.0 < excess[0] < 3e-3
    assert excess[1] < 0.35 * excess[0]
    assert excess[2] < 0.35 * excess[1]


@settings(deadline=None, max_examples=20)
@given(RIGS, st.floats(0.2, 2.5), st.floats(-2.0, 2.0))
def test_mirrored_start_gives_the_mirrored_motion(rig, angle, speed):
    task = Pump(duration=2.0, start_angle=angle, start_speed=speed)
    image = Pump(duration=2.0, start_angle=-angle, start_speed=-speed)
    one, other = run_for(rig, task), run_for(rig, image)
    assert np.array_equal(one.states[:2], -other.states[:2])
    assert np.array_equal(one.states[2:], other.states[2:])
    assert np.array_equal(one.forces, other.forces)


@pytest.mark.parametrize("angle", [0.5, 1.0, 1.5])
def test_energy_audit(angle):
    task = Pump(duration=4.0, start_angle=angle)
    misses = []
    for finer in (1, 8):
        run = run_for(RIG, task, finer=finer)
        assert not slams(RIG, run)
        miss, work = audit(RIG, run)
        assert work > 1.0
        misses.append(abs(miss) / work)
    assert misses[0] < 1e-3
    assert misses[1] < 0.2 * misses[0]


def test_audit_misses_a_wrong_friction():
    # The audit can fail: with the friction of another rig the balance is off.
    other = rig_on(friction=AxleFriction(viscous=0.06))
    miss, work = audit(other, run_for(RIG, START, finer=4))
    assert abs(miss) > 5e-3 * work


def test_strong_drive_grows_like_the_ideal_law():
    rig = rig_with(80.0, 4e5, friction=AxleFriction(viscous=0.01))
    task = Pump(duration=5.5, start_angle=0.4)
    ideal = run_ideal(rig, task).trajectory
    turns = ideal.arcs[np.abs(ideal.momentum[ideal.arcs]) < 1e-9]
    expected = np.unique(np.abs(ideal.angle[turns]).round(9))[1:]
    states = run_for(rig, task).states
    momentum = states[1]
    flips = np.flatnonzero(momentum[:-1] * momentum[1:] < 0.0)
    amplitudes = np.abs(states[0][flips])
    assert expected.size >= 3
    # A sampled controller takes some steps for a move, which costs it a little.
    assert amplitudes[: expected.size] == pytest.approx(expected, rel=3e-3)


def test_weak_drive_lets_the_mass_slam():
    # At 12 rad/s the mass presses outward with about 60 N.
    task = Pump(duration=1.0, start_angle=0.3, start_speed=12.0, start_radial=0.25)
    weak, strong = rig_with(0.8, 15.0), rig_with(0.8, 150.0)
    assert try_pump(weak, task, HALF).slams
    assert not try_pump(strong, task, HALF).slams
    run = run_practical(weak, task)
    assert run.reached
    assert "end stop" in run.message
    assert run_practical(strong, task).message == ""


def test_pump_reports_the_energy_at_the_end():
    trial = try_pump(RIG, START, HALF)
    run = run_practical(RIG, START)
    assert trial.reached
    assert trial.run.time[-1] == pytest.approx(START.duration)
    assert trial.value == pytest.approx(float(energy_of(RIG, trial.run.states)[-1]))
    assert run.objective.value >= trial.value
    assert run.objective.value == pytest.approx(run.trajectory.energy[-1])
    assert (run.law, run.objective.name, run.objective.unit) == ("practical", "energy", "J")
    assert run.trajectory.duration == pytest.approx(START.duration)
    again = try_pump(RIG, START, Leads(*run.leads))
    assert again.value == pytest.approx(run.objective.value, rel=1e-12)


def test_trajectory_is_the_sampled_motion():
    run = run_for(RIG, START)
    trajectory = sampled_trajectory(RIG, run)
    assert trajectory.time == pytest.approx(run.time)
    columns = (trajectory.angle, trajectory.momentum, *trajectory.slides)
    for column, state in zip(columns, run.states, strict=True):
        assert np.array_equal(column, state)
    assert np.array_equal(trajectory.radial_force[1:], run.forces[0])
    assert not trajectory.tangential_force.any()
    assert np.array_equal(trajectory.energy, energy_of(RIG, run.states))


@pytest.mark.parametrize(
    ("goal", "measured"),
    [
        ({"energy": 3.0}, lambda t: t.energy[-1] / 3.0),
        ({"speed": 4.0}, lambda t: abs(t.speed[-1]) / 4.0),
        ({"full_turn": True}, lambda t: abs(t.angle[-1]) / math.pi),
    ],
)
def test_spin_up_ends_where_the_goal_is_met(goal, measured):
    task = SpinUp(start_angle=0.8, **goal)
    trial = try_spin_up(RIG, task, HALF)
    assert trial.reached
    trajectory = sampled_trajectory(RIG, trial.run)
    # the goal lies within the last step
    assert measured(trajectory) >= 1.0
    assert measured(sampled_trajectory(RIG, trial.run.cut(trial.run.forces.shape[1] - 1))) < 1.0
    end = float(trial.run.time[-1])
    assert end - trial.run.step < trial.value <= end
    assert trial.merit == -trial.value


def test_spin_up_that_has_nothing_left_to_do():
    task = SpinUp(start_angle=0.5, start_speed=9.0, speed=4.0)
    with pytest.raises(InputError, match=r"speed: must exceed its value at the start, 9 rad/s"):
        run_practical(RIG, task)


@pytest.mark.parametrize("side", [1.0, -1.0])
def test_wheel_that_comes_down_from_the_top_has_not_passed_it(side):
    # At the top and turning back inward: a full turn is still to be made, as for the ideal law.
    task = SpinUp(start_angle=side * math.pi, start_speed=-side * 1.0, full_turn=True)
    assert run_ideal(RIG, task).objective.value > 0.5
    trial = try_spin_up(RIG, task, HALF)
    assert math.isnan(trial.value) or trial.value > 0.5


def test_unreachable_energy_is_said():
    task = SpinUp(start_angle=0.3, energy=1e4)
    trial = try_spin_up(RIG, task, HALF)
    assert not trial.reached
    assert math.isnan(trial.value)
    heavy = rig_on(friction=AxleFriction(viscous=0.8))
    run = run_practical(heavy, SpinUp(start_angle=0.3, energy=20.0))
    assert not run.reached
    assert math.isnan(run.objective.value)
    assert "goal is not met" in run.message


def test_rotation_turns_at_the_speed_it_reports():
    trial = try_rotation(RIG, 14.0, HALF)
    assert trial.reached
    states, time = trial.run.states, trial.run.time
    bottoms = 2.0 * math.pi * np.ceil(states[0, 0] / (2.0 * math.pi) + np.array([0.0, 1.0]))
    passed = np.interp(bottoms, states[0], time)
    assert 2.0 * math.pi / np.diff(passed)[0] == pytest.approx(trial.value, rel=5e-3)
    # steady: the energy comes back after a turn
    energy = np.interp(passed, time, energy_of(RIG, states))
    assert energy[1] == pytest.approx(energy[0], rel=2e-2)
    assert np.all(states[1] > 0.0)


def test_rotation_that_dies_down_is_lost():
    slow = rig_on(friction=AxleFriction(viscous=2.0))
    trial = try_rotation(slow, 8.0, HALF)
    assert not trial.reached
    run = run_practical(slow, Rotate())
    assert not run.reached
    assert math.isnan(run.objective.value)
    assert "dies down" in run.message


def test_unknown_objective_is_refused():
    with pytest.raises(InputError, match="objective"):
        run_practical(RIG, START, objective="noise")
