# SPDX-License-Identifier: BSD-3-Clause
"""What the ideal law is worth under each objective, and what it says it leaves out."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from ideal_rig import PULL, SIDEWAYS, pumped_and_lost, rig

from rotorpump.errors import InputError
from rotorpump.laws.instantaneous import run_ideal
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.tasks import Pump, Rotate, SpinUp

TURN = SpinUp(full_turn=True, start_angle=0.4)


def work_in_jumps(trajectory) -> float:
    """Rises of energy at one instant, falls not counted."""
    rises = np.diff(trajectory.energy)[np.diff(trajectory.time) == 0.0]
    return float(np.maximum(rises, 0.0).sum())


@pytest.mark.parametrize("changes", [{}, {"tangential": SIDEWAYS}])
def test_pump_objectives_are_those_of_the_last_node(changes):
    machine, task = rig(**changes), Pump(duration=4.0, start_angle=0.5)
    for name, unit in (("energy", "J"), ("momentum", "kg m2/s"), ("speed", "rad/s")):
        run = run_ideal(machine, task, objective=name)
        last = abs(getattr(run.trajectory, name)[-1])
        assert run.objective.value == pytest.approx(last, rel=1e-12)
        assert run.objective.unit == unit


def test_a_last_jump_is_told():
    # Falling at the end, the mass is outside: inside, the wheel would be faster by I₁/I₂.
    task = Pump(duration=0.3, start_angle=1.0)
    run = run_ideal(rig(), task, objective="speed")
    assert run.trajectory.radial[-1] == 0.4
    more = run.objective.value * ((0.25 + 1.2 * 0.16) / (0.25 + 1.2 * 0.04) - 1.0)
    assert f"would add {more:.6g} rad/s" in run.message
    assert "jump" not in run_ideal(rig(), task, objective="momentum").message


def test_work_is_what_the_jumps_add():
    run = run_ideal(rig(), TURN, objective="work")
    assert run.reached
    assert run.objective.value == pytest.approx(work_in_jumps(run.trajectory), rel=1e-9)
    assert run.objective.value > 1.0


def test_rubbing_adds_its_work_to_every_jump():
    rubbed = rig(radial=Slide(stroke=(0.2, 0.4), rubbing=3.0))
    plain, dear = (run_ideal(machine, TURN, objective="work") for machine in (rig(), rubbed))
    rises = np.diff(plain.trajectory.energy)[np.diff(plain.trajectory.radial) != 0.0]
    assert np.array_equal(plain.trajectory.angle, dear.trajectory.angle)
    # 0.6 J each; where the drive brakes an outward jump, rubbing helps it
    assert rises.min() < 0.0 < rises.max()
    expected = np.maximum(rises + 3.0 * 0.2, 0.0).sum()
    assert dear.objective.value == pytest.approx(expected, rel=1e-9)
    assert plain.objective.value == pytest.approx(np.maximum(rises, 0.0).sum(), rel=1e-9)


@pytest.mark.parametrize("name", ["heat", "work+heat"])
def test_heat_has_no_bound(name):
    run = run_ideal(rig(), TURN, objective=name)
    assert run.reached
    assert run.objective.value == math.inf
    assert "its heat has no bound" in run.message


def test_deadline():
    time = run_ideal(rig(), TURN).objective.value
    kept = run_ideal(rig(), replace(TURN, deadline=1.01 * time))
    assert kept.reached
    assert kept.objective.value == time
    missed = run_ideal(rig(), replace(TURN, deadline=0.99 * time), objective="work")
    assert not missed.reached
    assert math.isnan(missed.objective.value)
    assert f"after {time:.6g} s, past the deadline of {0.99 * time:.6g} s" in missed.message


def test_friction_by_load_is_that_of_the_static_load():
    # μ a (M + m) g = 0.1 · 0.02 m · 4.2 kg · 9.80665 m/s2
    held = 0.1 * 0.02 * 4.2 * 9.80665
    by_load = rig(friction=AxleFriction(0.03, 0.05, 0.0, load=0.1, journal_radius=0.02))
    equal = rig(0.03, 0.05 + held)
    for task in (TURN, Rotate(), Pump(duration=2.0, start_angle=0.4)):
        one, other = run_ideal(by_load, task), run_ideal(equal, task)
        assert one.objective.value == pytest.approx(other.objective.value, rel=1e-12)
        assert f"static load alone is taken, {held:.6g} N m" in one.message
        assert "static load" not in other.message
    stuck = run_ideal(by_load, Pump(duration=1.0, start_angle=0.99 * (0.05 + held) / PULL))
    assert "holds the wheel" in stuck.message


def test_load_torque_takes_its_share():
    machine = rig(0.05)
    task = Rotate(load_torque=0.4)
    run = run_ideal(machine, task)
    pumped, lost = pumped_and_lost(run, machine.friction)
    assert pumped == pytest.approx(lost + 0.4 * 2.0 * math.pi, rel=1e-3)
    assert run.objective.value < run_ideal(machine, Rotate()).objective.value
    power = run_ideal(machine, task, objective="load power")
    assert power.objective.value == pytest.approx(0.4 * run.objective.value, rel=1e-12)
    assert power.objective.unit == "W"


def test_load_torque_that_cannot_be_sustained():
    run = run_ideal(rig(0.05), Rotate(load_torque=1.5))
    assert not run.reached
    assert math.isnan(run.objective.value)
    words = run.message.split()
    pumped, lost, loaded = (float(words[i - 1]) for i, word in enumerate(words) if word == "J")
    turned = run.trajectory.angle[-1] - run.trajectory.angle[0]
    assert loaded == pytest.approx(1.5 * turned, rel=1e-5)
    assert lost + loaded > pumped


@pytest.mark.parametrize("share", [0.8, 1.2])
def test_mean_speed_is_not_the_law_s_to_choose(share):
    own = run_ideal(rig(), Rotate()).objective.value
    run = run_ideal(rig(), Rotate(mean_speed=share * own))
    assert run.reached == (share < 1.0)
    assert run.objective.name == "work"
    assert run.objective.value == pytest.approx(work_in_jumps(run.trajectory), rel=1e-6)
    assert f"turns at {own:.6g} rad/s" in run.message
    assert f"{share * own:.6g} rad/s is asked for" in run.message


def test_objectives_that_lack_their_figure():
    with pytest.raises(InputError, match="load_torque"):
        run_ideal(rig(), Rotate(), objective="load power")
    with pytest.raises(InputError, match="mean_speed"):
        run_ideal(rig(), Rotate(), objective="work")
