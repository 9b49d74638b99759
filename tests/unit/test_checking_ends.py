# SPDX-License-Identifier: BSD-3-Clause
"""Start, end and objective, and the report as a whole."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import Simulation, example_rig, nothing, pumping
from told_motion import told_speeds

from rotorpump.checking.case import Case
from rotorpump.checking.claim import claim_check
from rotorpump.checking.ends import end_checks
from rotorpump.checking.report import check_motion
from rotorpump.errors import InputError
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.solution.check import Check
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Rotate, SpinUp

START = {"start_angle": 1.0}


def checks_of(rig, task, trajectory, claimed):
    case = Case(rig, task, claimed.name)
    return (*end_checks(case, trajectory), claim_check(case, trajectory, claimed))


def failures(rig, task, trajectory, claimed):
    return {check.name for check in checks_of(rig, task, trajectory, claimed) if not check.passed}


def in_time(trajectory):
    return Objective("time", trajectory.duration, "s")


def rotating(friction=0.0, way=1, rig=None, load_torque=0.0):
    rig = rig or example_rig(friction=AxleFriction(friction))
    simulation = Simulation(rig, [-way * math.pi, way * 8.0, 0.4, 0.0], load_torque)
    simulation.run(nothing, 3.0, until=lambda s: s[0] - way * math.pi, rests=True)
    trajectory = simulation.trajectory()
    return rig, trajectory, Objective("speed", 2.0 * math.pi / trajectory.duration, "rad/s")


def turning_over():
    rig = example_rig()
    simulation = Simulation(rig, [0.3, 9.0, 0.4, 0.0])
    simulation.run(lambda _: 20.0, 3.0, until=lambda s: s[0] - math.pi, rests=True)
    return rig, simulation.trajectory()


def test_a_true_motion_passes_every_check():
    checks = check_motion(*pumping())
    assert all(check.passed for check in checks), [str(c) for c in checks if not c.passed]
    names = [check.name for check in checks]
    assert len(set(names)) == len(names)


def test_a_true_turn_passes_every_check():
    rig, trajectory, claimed = rotating()
    assert all(check.passed for check in check_motion(rig, Rotate(), trajectory, claimed))


def test_accuracy_sets_the_tolerance_of_replay_and_audit():
    loose = {check.name: check.tolerance for check in check_motion(*pumping(), accuracy=1e-3)}
    assert loose["replay angle"] == pytest.approx(1e-2)
    assert loose["energy audit"] == pytest.approx(1e-2)


@pytest.mark.parametrize(
    ("change", "name"),
    [
        ({"start_angle": 1.001}, "start angle"),
        ({"start_speed": 0.01}, "start speed"),
        ({"start_radial": 0.39}, "start radial"),
        ({"duration": 1.6}, "duration"),
    ],
)
def test_each_wrong_condition_of_pumping_is_noticed(change, name):
    rig, task, trajectory, claimed = pumping()
    assert failures(rig, replace(task, **change), trajectory, claimed) == {name}


def test_a_start_in_motion_is_noticed():
    rig, task, trajectory, claimed = pumping()
    slide_speed = trajectory.radial_speed.copy()
    slide_speed[0] = 0.01
    spoiled = replace(trajectory, radial_speed=slide_speed)
    assert failures(rig, task, spoiled, claimed) == {"start radial speed"}


def test_without_a_force_limit_the_slide_need_not_start_at_rest():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4), speed=0.8))
    _, task, trajectory, claimed = told_speeds(rig, [1.0, -0.5, 0.4], [(0.2, -0.8)])
    checks = checks_of(rig, task, trajectory, claimed)
    assert "start radial speed" not in {check.name for check in checks}
    assert all(check.passed for check in checks)


@pytest.mark.parametrize("wrong", [1.0001, 0.9999, math.nan])
def test_a_wrong_claim_is_noticed(wrong):
    rig, task, trajectory, claimed = pumping()
    boast = replace(claimed, value=wrong * claimed.value)
    assert failures(rig, task, trajectory, boast) == {"claimed objective"}


def test_a_claim_of_another_kind_is_refused():
    rig, task, trajectory, claimed = pumping()
    with pytest.raises(InputError, match="objective"):
        checks_of(rig, task, trajectory, replace(claimed, name="time"))


@pytest.mark.parametrize(("name", "unit"), [("momentum", "kg m2/s"), ("speed", "rad/s")])
def test_other_objectives_of_pumping(name, unit):
    rig, task, trajectory, _ = pumping()
    value = abs(float(getattr(trajectory, name)[-1]))
    assert failures(rig, task, trajectory, Objective(name, value, unit)) == set()
    boast = Objective(name, 1.00001 * value, unit)
    assert failures(rig, task, trajectory, boast) == {"claimed objective"}


class TestSpinUp:
    def test_goals_that_are_reached(self):
        rig, _, trajectory, energy = pumping()
        for goal in ({"energy": energy.value}, {"speed": abs(float(trajectory.speed[-1]))}):
            task = SpinUp(**START, **goal)
            assert failures(rig, task, trajectory, in_time(trajectory)) == set()

    def test_goals_that_are_missed(self):
        rig, _, trajectory, energy = pumping()
        speed = abs(float(trajectory.speed[-1]))
        for goal in ({"energy": 1.001 * energy.value}, {"speed": 1.001 * speed}):
            task = SpinUp(**START, **goal)
            assert failures(rig, task, trajectory, in_time(trajectory)) == {"goal"}

    def test_wrong_time_is_noticed(self):
        rig, _, trajectory, energy = pumping()
        task = SpinUp(**START, energy=energy.value)
        claimed = Objective("time", 0.999 * trajectory.duration, "s")
        assert failures(rig, task, trajectory, claimed) == {"claimed objective"}

    def test_a_deadline_that_is_missed_is_noticed(self):
        rig, _, trajectory, energy = pumping()
        task = SpinUp(**START, energy=energy.value, deadline=trajectory.duration)
        assert failures(rig, task, trajectory, in_time(trajectory)) == set()
        early = replace(task, deadline=0.999 * trajectory.duration)
        assert failures(rig, early, trajectory, in_time(trajectory)) == {"deadline"}

    def test_wrong_start_is_noticed(self):
        rig, _, trajectory, energy = pumping()
        task = SpinUp(start_angle=1.1, energy=energy.value)
        assert failures(rig, task, trajectory, in_time(trajectory)) == {"start angle"}

    def test_full_turn(self):
        rig, trajectory = turning_over()
        task = SpinUp(start_angle=0.3, start_speed=9.0, full_turn=True)
        checks = check_motion(rig, task, trajectory, in_time(trajectory))
        assert all(check.passed for check in checks), [str(c) for c in checks if not c.passed]

    def test_full_turn_that_stops_short_moves_back_or_is_not_the_first(self):
        rig, trajectory = turning_over()
        task = SpinUp(start_angle=0.3, start_speed=9.0, full_turn=True)
        short = replace(trajectory, angle=trajectory.angle * 0.999)
        back = replace(trajectory, speed=np.append(trajectory.speed[:-1], -trajectory.speed[-1]))
        early = trajectory.angle.copy()
        early[10] = 3.2
        second = replace(trajectory, angle=early)
        for spoiled in (short, back, second):
            assert "goal" in failures(rig, task, spoiled, in_time(spoiled))


class TestRotate:
    def test_friction_makes_it_lose_momentum(self):
        rig, trajectory, claimed = rotating(friction=0.05)
        assert failures(rig, Rotate(), trajectory, claimed) == {"periodic momentum"}

    @pytest.mark.parametrize(
        ("column", "name"),
        [("angle", "one turn"), ("radial", "periodic radial")],
    )
    def test_an_end_beside_the_start_is_noticed(self, column, name):
        rig, trajectory, claimed = rotating()
        values = getattr(trajectory, column).copy()
        values[-1] -= 0.001
        spoiled = replace(trajectory, **{column: values})
        assert name in failures(rig, Rotate(), spoiled, claimed)

    def test_an_end_in_motion_is_noticed(self):
        rig, trajectory, claimed = rotating()
        slide_speed = trajectory.radial_speed.copy()
        slide_speed[-1] = 0.1
        spoiled = replace(trajectory, radial_speed=slide_speed)
        assert failures(rig, Rotate(), spoiled, claimed) == {"periodic radial speed"}

    def test_a_turn_the_other_way_is_noticed(self):
        rig, trajectory, claimed = rotating()
        spoiled = replace(
            trajectory,
            angle=-trajectory.angle,
            speed=-trajectory.speed,
            momentum=-trajectory.momentum,
        )
        assert failures(rig, Rotate(), spoiled, claimed) == {"one turn"}

    def test_a_turn_in_the_direction_that_is_asked_for(self):
        rig, trajectory, claimed = rotating(way=-1)
        task = Rotate(direction=-1)
        assert all(check.passed for check in check_motion(rig, task, trajectory, claimed))
        assert failures(rig, Rotate(), trajectory, claimed) == {"one turn"}

    def test_a_mean_speed_that_is_asked_for(self):
        rig, trajectory, speed = rotating()
        cost = Objective("work", 0.0, "J")
        task = Rotate(mean_speed=speed.value)
        assert failures(rig, task, trajectory, cost) == set()
        faster = Rotate(mean_speed=1.00001 * speed.value)
        assert failures(rig, faster, trajectory, cost) == {"mean speed"}

    def test_a_load_takes_power_and_slows_the_wheel(self):
        rig, trajectory, speed = rotating(load_torque=0.2)
        power = Objective("load power", 0.2 * speed.value, "W")
        loaded = check_motion(rig, Rotate(load_torque=0.2), trajectory, power)
        # nothing drives it, so it is no steady rotation; all else is right
        assert {c.name for c in loaded if not c.passed} == {"periodic momentum"}
        lighter = check_motion(rig, Rotate(load_torque=0.19), trajectory, power)
        failed = {check.name for check in lighter if not check.passed}
        assert {"energy audit", "replay speed", "claimed objective"} <= failed

    def test_a_force_whose_rate_is_limited_is_periodic(self):
        rig, trajectory, claimed = rotating()
        limited = replace(rig, radial=replace(rig.radial, force_rate=1e3))
        assert failures(limited, Rotate(), trajectory, claimed) == set()
        ramp = 5.0 * trajectory.time
        spoiled = replace(trajectory, radial_force=trajectory.radial_force + ramp)
        assert failures(limited, Rotate(), spoiled, claimed) == {"periodic radial force"}

    def test_a_wrong_mean_speed_is_noticed(self):
        rig, trajectory, claimed = rotating()
        boast = replace(claimed, value=1.01 * claimed.value)
        assert failures(rig, Rotate(), trajectory, boast) == {"claimed objective"}


def test_a_check_says_what_it_found():
    good = Check("stroke", 0.5, 1.0, "1", "at 3 s")
    assert good.passed
    assert str(good) == "stroke: passed, 5.00e-01 of 1e+00 (at 3 s)"
    bad = Check("order of time", 2.0, 0.0, "s")
    assert not bad.passed
    assert str(bad) == "order of time: FAILED, 2.00e+00 of 0e+00 s"
    assert not Check("stroke", math.nan, 1.0, "1").passed
    assert not Check("stroke", math.inf, 1.0, "1").passed
