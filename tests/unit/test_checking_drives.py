# SPDX-License-Identifier: BSD-3-Clause
"""Limits and costs of the drives, on made-up forces and speeds whose values are known."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import PLACES, example_rig

from rotorpump.checking.case import Case
from rotorpump.checking.claim import claim_check
from rotorpump.checking.costs import drive_heat, drive_work
from rotorpump.checking.margins import active_shares, margin_checks
from rotorpump.errors import InputError
from rotorpump.physics.control import force_driven
from rotorpump.physics.state import Slides
from rotorpump.rig.slide import Slide
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.objective import Objective
from rotorpump.tasks import SpinUp

EDGES = np.array([0.0, 0.1, 0.2, 0.4, 0.5])
FREE = Slide(stroke=(0.2, 0.4))


def made(force, pace, axis="radial"):
    """A trajectory of these functions of time; forces jump where one is a list by interval."""
    time = np.append(0.0, (EDGES[:-1, None] + np.diff(EDGES)[:, None] * PLACES).ravel())
    if not callable(force):
        pieces = np.repeat(np.arange(4), 3)
        steps = np.array(force, dtype=float)[np.append(0, pieces)]
    else:
        steps = force(time)
    paces = pace(time) + 0.0 * time
    rig, slides, forces = example_rig(radial=FREE), Slides(0.3, paces), (steps, 0.0)
    if axis == "tangential":
        rig = example_rig(radial=0.3, tangential=FREE)
        slides, forces = Slides(0.3, 0.0, 0.3, paces), (0.0, steps)
    return trajectory_of(rig, time, 0.2, 1.0, slides, forces, np.arange(0, 13, 3), [0, 12])


def failures(trajectory, axis="radial", **limits):
    slide = replace(FREE, **limits)
    rig = example_rig(radial=slide)
    if axis == "tangential":
        rig = example_rig(radial=0.3, tangential=slide)
    checks = {check.name: check for check in margin_checks(rig, trajectory)}
    return {name: check.value for name, check in checks.items() if not check.passed}


def shares(trajectory, **limits):
    rig = example_rig(radial=replace(FREE, **limits))
    return {name: share for (_, name), share in active_shares(rig, trajectory).items()}


def linear(slope, offset=0.0):
    return lambda time: offset + slope * time


def steady(value):
    return lambda _: value


@pytest.mark.parametrize("sign", [1.0, -1.0])
@pytest.mark.parametrize("axis", ["radial", "tangential"])
def test_power_drives_and_brakes(sign, axis):
    # 40 N at 0.5 m/s are 20 W
    motion = made(linear(0.0, 40.0 * sign), steady(0.5), axis)
    assert failures(motion, axis, power=20.0) == {}
    assert failures(motion, axis, power=19.0) == {f"{axis} power": pytest.approx(20.0 / 19.0 - 1.0)}


def test_power_between_nodes():
    # t (0.5 - t) · 160 W has its largest value, 10 W, at 0.25 s, where no node is
    motion = made(linear(160.0), linear(-1.0, 0.5))
    assert failures(motion, power=10.0) == {}
    assert failures(motion, power=9.9)["radial power"] == pytest.approx(0.01, abs=1e-3)


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_force_rate(sign):
    motion = made(linear(200.0 * sign), steady(0.0))
    assert failures(motion, force_rate=200.0) == {}
    assert failures(motion, force_rate=190.0) == {"radial force rate": pytest.approx(1.0 / 19.0)}
    assert shares(motion, force_rate=200.0)["force_rate"] == pytest.approx(1.0)
    assert shares(motion, force_rate=210.0)["force_rate"] == 0.0


def test_a_jump_of_the_force_breaks_its_rate():
    motion = made([0.0, 0.0, 1.0, 1.0], steady(0.0))
    # 1 N where 0.1 s allow 10 N
    assert failures(motion, force_rate=100.0) == {"radial force continuity": pytest.approx(1.0)}
    assert failures(motion, force=10.0) == {}


@pytest.mark.parametrize(("force", "pace"), [(20.0, 0.5), (-20.0, -0.5), (60.0, -0.5)])
def test_motor_line(force, pace):
    # stall 40 N, no load 1 m/s: 20 N at 0.5 m/s, and 60 N where it brakes
    motion = made(linear(0.0, force), steady(pace))
    line = {"stall_force": 40.0, "no_load_speed": 1.0}
    assert failures(motion, **line) == {}
    assert shares(motion, **line)["motor_line"] == pytest.approx(1.0)
    stronger = made(linear(0.0, 1.05 * force), steady(pace))
    assert set(failures(stronger, **line)) == {"radial motor line"}
    faster = made(linear(0.0, force), steady(pace + math.copysign(0.05, force)))
    assert set(failures(faster, **line)) == {"radial motor line"}


def test_continuous_force_is_a_root_mean_square():
    # 50, 0, -50, 0 N over 0.1, 0.1, 0.2, 0.1 s: 50 √0.6 N
    motion = made([50.0, 0.0, -50.0, 0.0], steady(0.0))
    effective = 50.0 * math.sqrt(0.6)
    assert failures(motion, continuous_force=effective) == {}
    assert failures(motion, continuous_force=0.98 * effective) == {
        "radial continuous force": pytest.approx(1.0 / 0.98 - 1.0)
    }
    assert shares(motion, continuous_force=effective)["continuous_force"] == 1.0
    assert shares(motion, continuous_force=1.02 * effective)["continuous_force"] == 0.0


def test_root_mean_square_of_a_duty_cycle():
    # 50, 0, -50, 0 N over 0.1, 0.2, 0.1, 0.05 s: 33.3333333 N (formula: common practice)
    force, length = np.array([50.0, 0.0, -50.0, 0.0]), np.array([0.1, 0.2, 0.1, 0.05])
    edges = np.append(0.0, np.cumsum(length))
    time = np.append(0.0, (edges[:-1, None] + length[:, None] * PLACES).ravel())
    forces = np.append(force[0], np.repeat(force, 3)), 0.0
    breaks, rig = np.arange(0, 13, 3), example_rig(radial=replace(FREE, continuous_force=33.3))
    motion = trajectory_of(rig, time, 0.2, 1.0, Slides(0.3), forces, breaks, [0, 12])
    found = {check.name: check.value for check in margin_checks(rig, motion)}
    effective = 33.3 * (1.0 + found["radial continuous force"])
    assert effective == pytest.approx(33.3333333, rel=1e-8)


def test_a_rate_or_square_that_is_not_a_number_never_passes():
    motion = made([0.0, math.nan, 0.0, 0.0], steady(0.0))
    failed = failures(motion, force_rate=1e9, continuous_force=1e9, power=1e9)
    assert {"radial force rate", "radial force continuity", "radial power"} <= set(failed)
    assert "radial continuous force" in failed


class TestCosts:
    RIG = example_rig(radial=replace(FREE, motor_constant=5.0))
    TASK = SpinUp(start_angle=0.2, energy=1e-3)

    def motion(self):
        """10 N at a speed from 0.3 to -0.2 m/s: it drives for 0.3 s, 0.45 J."""
        return made(linear(0.0, 10.0), linear(-1.0, 0.3))

    def test_work_leaves_out_the_power_that_flows_back(self):
        assert drive_work(self.RIG, self.motion()) == pytest.approx(0.45, rel=1e-12)
        both = made(linear(100.0, -25.0), linear(-1.0, 0.3))
        # 100 (t - 0.25)(0.3 - t) W is above zero from 0.25 to 0.3 s: 100 · 0.05³ / 6 J
        assert drive_work(self.RIG, both) == pytest.approx(100.0 * 0.05**3 / 6.0, rel=1e-9)

    def test_work_and_heat_of_both_axes_add_up(self):
        slide = replace(FREE, motor_constant=4.0)
        rig = example_rig(radial=slide, tangential=slide)
        motion = made(linear(100.0), steady(0.5))
        doubled = replace(
            motion, tangential_force=-motion.radial_force, tangential_speed=motion.radial_speed
        )
        # ∫ 100 t dt · 0.5 = 6.25 J; (100 t / 4)² over 0.5 s
        assert drive_work(rig, doubled) == pytest.approx(6.25)
        heat = 2.0 * 25.0**2 * 0.5**3 / 3.0
        assert drive_heat(rig, doubled) == pytest.approx(heat)

    @pytest.mark.parametrize(
        ("name", "value"), [("work", 0.45), ("heat", 2.0), ("work+heat", 2.45)]
    )
    def test_claims(self, name, value):
        case, motion = Case(self.RIG, self.TASK, name), self.motion()
        assert claim_check(case, motion, Objective(name, value, "J")).passed
        assert not claim_check(case, motion, Objective(name, 1.0001 * value, "J")).passed
        assert not claim_check(case, motion, Objective(name, 0.9999 * value, "J")).passed

    def test_heat_without_a_motor_constant_is_refused(self):
        case = Case(example_rig(radial=FREE), self.TASK, "heat")
        with pytest.raises(InputError, match="motor_constant"):
            claim_check(case, self.motion(), Objective("heat", 1.0, "J"))


@pytest.mark.parametrize(
    "limit",
    [
        {"force": 1.0},
        {"power": 1.0},
        {"force_rate": 1.0},
        {"continuous_force": 1.0},
        {"stall_force": 1.0, "no_load_speed": 1.0},
        {"rubbing": 1.0},
    ],
)
def test_a_force_that_matters_drives_the_mass(limit):
    rig = example_rig(radial=replace(FREE, **limit), tangential=FREE)
    assert force_driven(rig, "energy")
    case = Case(rig, None, "energy")
    assert (case.forced, case.told) == (("radial", "tangential"), ())


def test_a_free_force_drives_the_mass_only_where_it_counts():
    slide = replace(FREE, speed=1.0, motor_constant=1.0)
    rig = example_rig(radial=slide, tangential=slide)
    assert not force_driven(rig, "time")
    assert all(force_driven(rig, name) for name in ("work", "heat", "work+heat"))
    case = Case(rig, None, "time")
    assert (case.forced, case.told) == ((), ("radial", "tangential"))
