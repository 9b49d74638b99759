# SPDX-License-Identifier: BSD-3-Clause
"""The audit closes on true motions and stays open on spoiled ones."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import Simulation, case_of, example_rig, nothing, pumping
from told_motion import told_speeds

from rotorpump.checking.audit import audit_check
from rotorpump.checking.consistency import consistency_checks, structure_checks
from rotorpump.checking.report import check_motion
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

MOVES = ((0.4, 0.0), (0.25, -0.8), (0.2, 0.0), (0.25, 0.8), (0.2, 0.0))


def speed_limited():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4), speed=0.8))
    return rig, told_speeds(rig, [1.0, -0.5, 0.4], MOVES)[2]


def test_energy_of_a_true_motion_balances():
    rig, _, trajectory, _ = pumping()
    check = audit_check(case_of(rig), trajectory, 1e-4)
    assert check.name == "energy audit"
    assert check.value < 1e-7


def test_energy_of_a_free_swing_balances():
    rig = example_rig(friction=AxleFriction(0.0))
    simulation = Simulation(rig, [1.0, -1.0, 0.4, 0.0])
    simulation.run(nothing, 1.0, rests=True)
    assert audit_check(case_of(rig), simulation.trajectory(), 1e-4).value < 1e-7


@pytest.mark.parametrize(
    "spoil",
    [
        lambda rig, motion: (replace(rig, friction=AxleFriction(0.06)), motion),
        lambda rig, motion: (replace(rig, friction=AxleFriction(0.05, 0.02)), motion),
        lambda rig, motion: (replace(rig, friction=AxleFriction(0.05, 0.0, 0.01)), motion),
        lambda rig, motion: (replace(rig, gravity=9.7), motion),
        lambda rig, motion: (rig, replace(motion, radial_force=1.01 * motion.radial_force)),
        lambda rig, motion: (rig, replace(motion, radial_speed=1.01 * motion.radial_speed)),
        lambda rig, motion: (rig, replace(motion, radial_force=np.nan * motion.radial_force)),
    ],
    ids=["viscous", "coulomb", "quadratic", "gravity", "force", "slide speed", "nan"],
)
def test_energy_of_a_spoiled_motion_does_not(spoil):
    rig, _, trajectory, _ = pumping()
    rig, trajectory = spoil(rig, trajectory)
    assert not audit_check(case_of(rig), trajectory, 1e-4).passed


def test_braking_on_a_stop_loses_energy_that_nothing_accounts_for():
    simulation = Simulation(example_rig(), [1.0, -1.0, 0.4, 0.0])
    simulation.run(lambda _: -40.0, 1.0, until=lambda s: s[2] - 0.2)
    simulation.state[2:4] = [0.2, 0.0]
    simulation.run(lambda _: -40.0, 0.1, rests=True)
    assert not audit_check(case_of(simulation.rig), simulation.trajectory(), 1e-4).passed


def test_momentum_balances_where_forces_hold_impulses():
    rig, trajectory = speed_limited()
    check = audit_check(case_of(rig), trajectory, 1e-4)
    assert check.name == "momentum audit"
    assert check.value < 1e-7


def test_momentum_balances_over_jumps():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4)))
    moves = ((0.4, 0.0), (0.0, 0.2), (0.3, 0.0), (0.0, 0.4), (0.3, 0.0))
    trajectory = told_speeds(rig, [1.0, -0.5, 0.4], moves)[2]
    assert audit_check(case_of(rig), trajectory, 1e-4).value < 1e-7


def test_momentum_of_a_stuck_wheel_balances():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4)), friction=AxleFriction(0.05, 2.0))
    simulation = Simulation(rig, [0.3, 0.0, 0.4, 0.0])
    simulation.stand(0.5, 0.0)
    assert audit_check(case_of(rig), simulation.trajectory(), 1e-4).value == 0.0
    looser = replace(rig, friction=AxleFriction(0.05, 1.0))
    assert not audit_check(case_of(looser), simulation.trajectory(), 1e-4).passed


@pytest.mark.parametrize(
    "spoil",
    [
        lambda rig, motion: (replace(rig, friction=AxleFriction(0.06)), motion),
        lambda rig, motion: (replace(rig, gravity=9.7), motion),
        lambda rig, motion: (rig, replace(motion, speed=1.01 * motion.speed)),
        lambda rig, motion: (rig, replace(motion, radial=motion.radial[::-1] - 0.01)),
        lambda rig, motion: (replace(rig, wheel=Wheel(0.26)), motion),
    ],
    ids=["viscous", "gravity", "speed", "radial", "inertia"],
)
def test_momentum_of_a_spoiled_motion_does_not(spoil):
    rig, trajectory = spoil(*speed_limited())
    assert not audit_check(case_of(rig), trajectory, 1e-4).passed


def test_columns_of_a_true_motion_agree():
    rig, _, trajectory, _ = pumping()
    assert all(check.passed for check in consistency_checks(rig, trajectory))


@pytest.mark.parametrize("name", ["momentum", "energy"])
@pytest.mark.parametrize("wrong", [1.00001, np.nan])
def test_a_column_against_its_formula_is_noticed(name, wrong):
    rig, _, trajectory, _ = pumping()
    column = getattr(trajectory, name).copy()
    column[-1] *= wrong
    spoiled = replace(trajectory, **{name: column})
    failed = {check.name for check in consistency_checks(rig, spoiled) if not check.passed}
    assert failed == {name}


def test_time_that_runs_back_is_noticed():
    rig, task, trajectory, claimed = pumping()
    time = trajectory.time.copy()
    time[[5, 6]] = time[[6, 5]]
    checks = check_motion(rig, task, replace(trajectory, time=time), claimed)
    assert {check.name for check in checks if not check.passed} == {"order of time"}
    time[5] = np.nan
    checks = structure_checks(replace(trajectory, time=time))
    assert {check.name for check in checks if not check.passed} == {"order of time"}


@pytest.mark.parametrize(
    "spoil",
    [
        lambda motion: {"breaks": motion.breaks[:-1]},
        lambda motion: {"breaks": motion.breaks[1:]},
        lambda motion: {"breaks": np.append(motion.breaks, motion.breaks[-1])},
        lambda motion: {"arcs": motion.arcs[:-1]},
        lambda motion: {"arcs": motion.arcs + np.array([0, 1, 0])},
    ],
    ids=["end", "start", "twice", "arc end", "arc between"],
)
def test_intervals_that_leave_something_out_are_noticed(spoil):
    rig, task, trajectory, claimed = pumping()
    spoiled = replace(trajectory, **spoil(trajectory))
    assert all(check.passed for check in structure_checks(trajectory))
    checks = check_motion(rig, task, spoiled, claimed)
    assert {check.name for check in checks if not check.passed} == {"intervals"}
