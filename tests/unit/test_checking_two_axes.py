# SPDX-License-Identifier: BSD-3-Clause
"""The checks on rigs with a tangential slide, alone, beside a radial one, and of another kind."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import (
    Simulation,
    case_of,
    example_rig,
    nothing,
    pump_motion,
    pump_task,
    two_axes,
    weaving,
)
from told_motion import told_speeds

from rotorpump.checking.agreement import replay_checks
from rotorpump.checking.margins import active_shares
from rotorpump.checking.replay import replay_motion
from rotorpump.checking.report import check_motion
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.solution.assembly import trajectory_of
from rotorpump.tasks import Pump


def failures(rig, task, trajectory, claimed):
    checks = check_motion(rig, task, trajectory, claimed)
    return {check.name for check in checks if not check.passed}


def replay_failures(rig, trajectory):
    case = case_of(rig)
    checks = replay_checks(case, trajectory, replay_motion(case, trajectory), 1e-4)
    return {check.name for check in checks if not check.passed}


def with_slide(rig, axis, **changes):
    return replace(rig, **{axis: replace(rig.slide(axis), **changes)})


def test_a_true_motion_of_both_slides_passes_every_check():
    checks = check_motion(*weaving())
    assert all(check.passed for check in checks), [str(c) for c in checks if not c.passed]
    found = {check.name: check.value for check in checks}
    assert len(found) == len(checks)
    assert max(value for name, value in found.items() if name.startswith("replay")) < 1e-6
    assert found["energy audit"] < 1e-7
    assert {"radial arrival", "tangential arrival", "tangential stroke"} <= set(found)


@pytest.mark.parametrize(
    "spoil",
    [
        lambda rig: replace(rig, friction=replace(rig.friction, coulomb=0.5)),
        lambda rig: replace(rig, friction=replace(rig.friction, load=0.2)),
        lambda rig: replace(rig, wheel=replace(rig.wheel, unbalance=0.08)),
        lambda rig: replace(rig, wheel=replace(rig.wheel, unbalance_angle=-0.8)),
        lambda rig: with_slide(rig, "radial", rubbing=3.0),
        lambda rig: with_slide(rig, "tangential", rubbing=4.0),
    ],
    ids=["coulomb", "load", "unbalance", "direction", "radial rubbing", "tangential rubbing"],
)
def test_another_rig_is_noticed_by_replay_and_audit(spoil):
    rig, _, trajectory, _ = weaving()
    failed = failures(spoil(rig), *pump_task(trajectory, rig))
    assert "energy audit" in failed
    assert failed & {"replay speed", "replay radial", "replay tangential"}


@pytest.mark.parametrize("axis", ["radial", "tangential"])
def test_a_shifted_force_is_noticed_along_its_axis(axis):
    rig, _, trajectory, _ = weaving()
    force = getattr(trajectory, f"{axis}_force") + 1.0
    spoiled = replace(trajectory, **{f"{axis}_force": force})
    assert f"replay {axis} speed" in replay_failures(rig, spoiled)


@pytest.mark.parametrize("axis", ["radial", "tangential"])
def test_a_tighter_limit_is_noticed_along_its_axis(axis):
    rig, task, trajectory, claimed = weaving()
    tight = with_slide(rig, axis, force=44.0)
    assert failures(tight, task, trajectory, claimed) == {f"{axis} force"}
    assert active_shares(rig, trajectory)["tangential", "high stop"] > 0.8


def test_swapped_axes_are_noticed():
    rig, task, trajectory, claimed = weaving()
    spoiled = replace(
        trajectory,
        radial_force=trajectory.tangential_force,
        tangential_force=trajectory.radial_force,
    )
    assert {"replay radial", "energy audit"} <= failures(rig, task, spoiled, claimed)


def test_a_mass_beside_its_held_place_is_noticed():
    rig = example_rig(tangential=0.05)
    simulation = Simulation(rig, [1.0, -1.0, 0.4, 0.0])
    simulation.run(lambda _: 20.0, 0.2, rests=True)
    motion = pump_motion(simulation)
    assert failures(*motion) == set()
    rig, task, trajectory, claimed = motion
    aside = replace(rig, tangential=0.06)
    assert "tangential place" in failures(aside, task, trajectory, claimed)


def test_a_tangential_slide_alone():
    rig = example_rig(radial=0.3, tangential=Slide((-0.2, 0.2), force=40.0))
    simulation = Simulation(rig, [0.5, 1.0, 0.3, 0.0, 0.0, 0.0])
    simulation.run(nothing, 0.1, across=lambda s: -25.0 * math.sin(s[0]))
    motion = pump_motion(simulation)
    assert failures(*motion) == set()
    rig, task, trajectory, claimed = motion
    spoiled = replace(trajectory, tangential_force=trajectory.tangential_force + 0.5)
    failed = failures(rig, task, spoiled, claimed)
    assert {"replay tangential", "replay tangential speed", "energy audit"} <= failed
    assert "replay radial" not in {c.name for c in check_motion(*motion)}


class TestRubbing:
    RIG = example_rig(radial=Slide((0.2, 0.4), force=40.0, rubbing=4.0))

    def stuck(self, force):
        """A mass at rest between the stops while the wheel swings."""
        simulation = Simulation(self.RIG, [0.4, 0.0, 0.3, 0.0])
        simulation.run(lambda _: force, 0.3, rests=True, direction=-1.0)
        return simulation.trajectory()

    def test_it_holds_a_mass_between_the_stops(self):
        assert replay_failures(self.RIG, self.stuck(-11.0)) == set()

    @pytest.mark.parametrize("force", [-15.0, -6.0])
    def test_it_holds_only_so_much(self, force):
        assert "replay radial" in replay_failures(self.RIG, self.stuck(force))

    def test_too_little_of_it_is_noticed(self):
        loose = with_slide(self.RIG, "radial", rubbing=0.1)
        assert "replay radial" in replay_failures(loose, self.stuck(-11.0))

    def test_on_a_stop_it_adds_to_the_stop(self):
        simulation = Simulation(self.RIG, [0.4, 0.0, 0.4, 0.0])
        # the load is about 11 N, so that 15 N inward would lift the mass off a smooth stop
        simulation.run(lambda _: -14.0, 0.1, rests=True, direction=-1.0)
        trajectory = simulation.trajectory()
        assert replay_failures(self.RIG, trajectory) == set()
        smooth = with_slide(self.RIG, "radial", rubbing=0.0)
        assert "replay radial" in replay_failures(smooth, trajectory)


class TestToldMotion:
    MOVES = ((0.2, 0.0, 0.0), (0.1, -0.8, 0.4), (0.1, 0.1, -0.5), (0.1, 0.7, 0.0), (0.1, 0.0, 0.0))

    def motion(self):
        rig = two_axes(
            radial=Slide((0.2, 0.4), speed=0.8), tangential=Slide((-0.15, 0.1), speed=0.9)
        )
        return told_speeds(rig, [1.0, 2.5, 0.4, 0.05], self.MOVES)

    def test_jumps_of_both_speeds_turn_the_wheel(self):
        rig, task, trajectory, claimed = self.motion()
        checks = check_motion(rig, task, trajectory, claimed)
        assert all(check.passed for check in checks), [str(c) for c in checks if not c.passed]
        found = {check.name: check.value for check in checks}
        assert found["replay speed"] < 1e-9
        assert found["momentum audit"] < 1e-9
        assert np.max(np.abs(np.diff(trajectory.speed)[np.diff(trajectory.time) == 0.0])) > 0.3

    def test_a_wheel_that_does_not_jump_is_noticed(self):
        rig, _, trajectory, _ = self.motion()
        node = trajectory.breaks[trajectory.breaks.size // 2]
        speed = trajectory.speed.copy()
        speed[node:] += 0.01
        assert "replay speed" in replay_failures(rig, replace(trajectory, speed=speed))

    @pytest.mark.parametrize(
        "friction", [AxleFriction(0.03, 0.05, 0.01, 0.2, 0.008), AxleFriction(0.03)]
    )
    def test_other_friction_is_noticed(self, friction):
        rig, task, trajectory, claimed = self.motion()
        failed = failures(replace(rig, friction=friction), task, trajectory, claimed)
        assert {"replay speed", "momentum audit"} <= failed

    def test_a_wheel_that_starts_otherwise_is_noticed(self):
        rig = example_rig(tangential=Slide((-0.2, 0.2), speed=1.0), radial=0.3)
        _, task, trajectory, claimed = told_speeds(rig, [1.0, 2.0, 0.3, 0.0], [(0.1, 0.0, 0.5)])
        assert failures(rig, task, trajectory, claimed) == set()
        other = replace(task, start_speed=float(trajectory.speed[-1]))
        assert "start speed" in failures(rig, other, trajectory, claimed)


def test_a_leap_along_the_tangential_axis_turns_the_wheel():
    # closed form at ρ = 0.3, J = 0.25, m = 1.2: Δφ = -ρ s [atan(s τ)], s² = m / (J + m ρ²)
    rig = example_rig(radial=0.3, tangential=Slide((-0.2, 0.2)), friction=AxleFriction(0.0))
    pace = math.sqrt(1.2 / (0.25 + 1.2 * 0.09))
    turned = -0.3 * pace * (math.atan(0.2 * pace) - math.atan(-0.2 * pace))
    momentum = 1.0 * rig.inertia(0.3, 0.2)
    time, angle = [0.0, 0.0, 1e-9], [0.5, 0.5 + turned, 0.5 + turned]
    slides = Slides(0.3, 0.0, [-0.2, 0.2, 0.2], 0.0)
    trajectory = trajectory_of(rig, time, angle, momentum, slides, (0.0, 0.0), [0, 1, 2], [0, 2])
    checks = replay_checks(case_of(rig), trajectory, replay_motion(case_of(rig), trajectory), 1e-8)
    assert all(check.passed for check in checks)
    wrong = replace(trajectory, angle=np.array([0.5, 0.5, 0.5]))
    assert "replay angle" in replay_failures(rig, wrong)


def test_a_start_aside_is_noticed():
    rig, task, trajectory, claimed = weaving()
    assert isinstance(task, Pump)
    aside = replace(task, start_tangential=0.05)
    assert failures(rig, aside, trajectory, claimed) == {"start tangential"}


def test_a_mirrored_motion_is_one_of_the_mirrored_rig():
    rig, task, trajectory, claimed = weaving()
    other = replace(
        task,
        start_angle=-task.start_angle,
        start_speed=-task.start_speed,
        start_tangential=-task.start_tangential,
    )
    assert failures(rig.mirrored(), other, trajectory.mirrored(), claimed) == set()
    assert failures(rig, other, trajectory.mirrored(), claimed) != set()
    again = trajectory.mirrored().mirrored()
    assert all(np.array_equal(getattr(again, n), c) for n, c in trajectory.columns().items())
