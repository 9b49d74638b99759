# SPDX-License-Identifier: BSD-3-Clause
"""The replay accepts true motions to many digits and refuses spoiled ones."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import Simulation, case_of, example_rig, nothing, pump_motion, pumping
from told_motion import told_speeds

from rotorpump.checking.agreement import replay_checks
from rotorpump.checking.replay import replay_motion
from rotorpump.physics.contacts import Action
from rotorpump.physics.simulation import Simulator
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide

FREE_FORCE = Slide(stroke=(0.2, 0.4), speed=0.8)
FREE_POSITION = Slide(stroke=(0.2, 0.4))


def replayed(rig, trajectory):
    case = case_of(rig)
    checks = replay_checks(case, trajectory, replay_motion(case, trajectory), 1e-4)
    return {check.name: check for check in checks}


def failures(rig, trajectory):
    return {name for name, check in replayed(rig, trajectory).items() if not check.passed}


def test_true_motion_is_reproduced():
    rig, _, trajectory, _ = pumping()
    checks = replayed(rig, trajectory)
    assert list(checks) == [
        "replay angle",
        "replay speed",
        "replay radial",
        "replay radial speed",
        "radial arrival",
    ]
    assert all(check.passed for check in checks.values())
    # the simulation is good to 1e-10, the replay to 1e-9: far inside the tolerance of 1e-3
    assert all(c.value < 1e-7 for name, c in checks.items() if name.startswith("replay"))


def test_states_of_a_replay_stand_at_the_interval_ends():
    rig, _, trajectory, _ = pumping()
    replay = replay_motion(case_of(rig), trajectory)
    ends = trajectory.breaks[1:]
    assert replay.states.shape == (ends.size, 6)
    np.testing.assert_allclose(replay.states[:, 0], trajectory.angle[ends], atol=1e-7)
    assert replay.message == ""


@pytest.mark.parametrize(
    "friction", [AxleFriction(0.06), AxleFriction(0.05, 0.02), AxleFriction(0.05, 0.0, 0.01)]
)
def test_wrong_friction_is_noticed(friction):
    rig, _, trajectory, _ = pumping()
    assert {"replay angle", "replay speed"} <= failures(replace(rig, friction=friction), trajectory)


def test_wrong_mass_is_noticed():
    rig, _, trajectory, _ = pumping()
    assert "replay radial" in failures(replace(rig, mass=1.22), trajectory)


def test_shifted_force_is_noticed():
    rig, _, trajectory, _ = pumping()
    spoiled = replace(trajectory, radial_force=trajectory.radial_force + 1.0)
    assert {"replay radial", "replay radial speed"} <= failures(rig, spoiled)


def test_moved_node_is_noticed():
    rig, _, trajectory, _ = pumping()
    node = trajectory.breaks[20]
    for name, title in (("angle", "replay angle"), ("speed", "replay speed")):
        column = getattr(trajectory, name).copy()
        column[node] += 0.01
        found = replayed(rig, replace(trajectory, **{name: column}))
        assert not found[title].passed
        assert f"{trajectory.time[node]:.4g} s" in found[title].detail


def test_arcs_restart_from_the_trajectory():
    rig, _, trajectory, _ = pumping()
    node = trajectory.arcs[1]
    angle = trajectory.angle.copy()
    angle[node:] += 0.01
    ends = trajectory.breaks[1:]
    states = replay_motion(case_of(rig), replace(trajectory, angle=angle)).states
    assert abs(states[ends == node, 0] - trajectory.angle[node]) < 1e-7
    after = int(np.flatnonzero(ends == node)[0]) + 1
    assert states[after, 0] - trajectory.angle[ends[after]] == pytest.approx(0.01, abs=1e-3)


def test_not_a_number_never_passes():
    rig, _, trajectory, _ = pumping()
    force = trajectory.radial_force.copy()
    force[trajectory.breaks[30]] = math.nan
    found = replayed(rig, replace(trajectory, radial_force=force))
    assert not found["replay radial"].passed
    assert "arc" in found["replay radial"].detail


def test_a_mass_that_flies_off_ends_the_replay():
    slide = replace(example_rig().radial, end_stops="avoid")
    rig = example_rig(radial=slide)
    _, _, trajectory, _ = pumping()
    spoiled = replace(trajectory, radial_force=np.full_like(trajectory.time, 1e4))
    assert "leaves the rig" in replayed(rig, spoiled)["replay radial"].detail


class TestStops:
    def test_braking_on_a_stop_is_noticed(self):
        simulation = Simulation(example_rig(), [1.0, -1.0, 0.4, 0.0])
        simulation.run(lambda _: -40.0, 1.0, until=lambda s: s[3] + 0.5)
        simulation.run(lambda _: -20.0, 1.0, until=lambda s: s[2] - 0.2)
        simulation.state[2:4] = [0.2, 0.0]
        simulation.run(lambda _: -40.0, 0.1, rests=True)
        rig, _, trajectory, _ = pump_motion(simulation)
        assert failures(rig, trajectory) == {"radial arrival"}

    def test_a_stop_does_not_pull(self):
        simulation = Simulation(example_rig(), [0.3, 1.0, 0.4, 0.0])
        simulation.run(lambda _: -30.0, 0.3, rests=True)
        rig, _, trajectory, _ = pump_motion(simulation)
        assert "replay radial" in failures(rig, trajectory)

    def test_mass_leaves_when_the_push_turns(self):
        # the mass rests outside until its load falls below the steady inward force
        simulation = Simulation(example_rig(), [0.0, 3.0, 0.4, 0.0])
        simulation.run(
            lambda _: -12.0,
            2.0,
            until=lambda s: simulation.steady(s) + 12.0,
            rests=True,
        )
        simulation.run(lambda _: -12.0, 0.1)
        rig, _, trajectory, _ = pump_motion(simulation)
        assert trajectory.radial[-1] < 0.399
        assert failures(rig, trajectory) == set()

    def test_leaving_within_an_interval(self):
        # the same motion with its force alone kept: one interval spans the departure
        simulation = Simulation(example_rig(), [0.0, 3.0, 0.4, 0.0])
        simulation.run(
            lambda _: -12.0,
            2.0,
            until=lambda s: simulation.steady(s) + 12.0,
            rests=True,
        )
        simulation.run(lambda _: -12.0, 0.1)
        last = len(simulation.breaks) - 1
        simulation.breaks = [simulation.breaks[0], simulation.breaks[last]]
        keep = [0, 10, len(simulation.time) // 2, len(simulation.time) - 1]
        simulation.time = [simulation.time[k] for k in keep]
        simulation.nodes = [simulation.nodes[k] for k in keep]
        simulation.breaks = [0, 3]
        rig, _, trajectory, _ = pump_motion(simulation)
        assert failures(rig, trajectory) == set()

    def test_stops_to_be_avoided_bear_nothing(self):
        rig, _, trajectory, _ = pumping()
        avoiding = replace(rig, radial=replace(rig.radial, end_stops="avoid"))
        assert "replay radial" in failures(avoiding, trajectory)

    def test_stops_to_be_avoided_bear_no_rest(self):
        simulation = Simulation(example_rig(), [1.0, -1.0, 0.4, 0.0])
        simulation.run(lambda _: 10.0, 0.3, rests=True)
        rig, _, trajectory, _ = pump_motion(simulation)
        assert failures(rig, trajectory) == set()
        avoiding = replace(rig, radial=replace(rig.radial, end_stops="avoid"))
        assert "replay radial" in failures(avoiding, trajectory)

    def test_drive_that_holds_the_mass_itself(self):
        slide = Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0, end_stops="avoid")
        simulation = Simulation(example_rig(radial=slide), [0.5, 1.0, 0.4, 0.0])
        simulation.run(simulation.steady, 0.8)
        simulation.stroke(0.2)
        rig, _, trajectory, _ = pump_motion(simulation)
        checks = replayed(rig, trajectory)
        assert "radial arrival" not in checks
        assert all(check.passed for check in checks.values())


class TestCoulomb:
    def sticking(self):
        rig = example_rig(friction=AxleFriction(0.02, 0.8, 0.03))
        simulation = Simulation(rig, [1.2, 0.0, 0.4, 0.0])
        turns = 0
        while rig.mass * rig.gravity * 0.4 * abs(math.sin(simulation.state[0])) > 0.8:
            way = -math.copysign(1.0, simulation.state[0])
            # the first instants are apart, so that the start at rest is not taken for the turn
            simulation.run(nothing, 0.05, rests=True, direction=way)
            simulation.run(nothing, 3.0, until=lambda s: s[1], rests=True, direction=way)
            simulation.state[1] = 0.0
            turns += 1
        assert turns >= 2
        simulation.stand(0.3, 0.0)
        return pump_motion(simulation)

    def test_turning_and_sticking_are_reproduced(self):
        rig, _, trajectory, _ = self.sticking()
        checks = replayed(rig, trajectory)
        assert all(check.value < 1e-6 for check in checks.values())

    def test_less_friction_is_noticed(self):
        rig, _, trajectory, _ = self.sticking()
        spoiled = replace(rig, friction=replace(rig.friction, coulomb=0.79))
        assert "replay angle" in failures(spoiled, trajectory)

    @pytest.mark.parametrize("driven", [False, True])
    def test_a_stuck_wheel_slips_when_the_arm_grows(self, driven):
        # the weight's torque passes 1 N m at an arm of 1 / (m g sin φ), 0.288 m; within 0.4 s at
        # 0.5 m/s the mass gets there and beyond, all in one interval
        rig = example_rig(friction=AxleFriction(0.02, 1.0), radial=FREE_FORCE)
        arm = 1.0 / (1.2 * 9.80665 * math.sin(0.3))
        _, _, after, _ = told_speeds(rig, [0.3, -1e-12, arm], [((0.4 - arm) / 0.5, 0.5)])
        simulator = Simulator.of(rig)
        if driven:
            # without a net force along the slide: gravity balanced while the wheel still stands
            push = -rig.mass * rig.gravity * math.cos(0.3)
            actions = Action(force=lambda _: push), Action()
            stuck = simulator.advance(0.0, 0.1, actions, [0.3, 0.0, 0.2, 0.5, 0.0, 0.0])
            assert stuck == pytest.approx([0.3, 0.0, 0.25, 0.5, 0.0, 0.0])
            slipped = simulator.advance(0.0, 0.3, actions, [0.3, 0.0, 0.25, 0.5, 0.0, 0.0])
            assert slipped[0] == pytest.approx(after.angle[-1], abs=2e-3)
            assert slipped[1] == pytest.approx(after.speed[-1], abs=5e-3)
            assert after.speed[-1] < -0.05
        else:
            actions = Action(acceleration=nothing), Action()
            end = simulator.advance(0.0, 0.4, actions, [0.3, 0.0, 0.2, 0.5, 0.0, 0.0])
            expected = [after.angle[-1], after.speed[-1], 0.4, 0.5, 0.0, 0.0]
            assert end == pytest.approx(expected, abs=1e-6)
            assert end[0] < 0.299


class TestWithoutForceLimit:
    MOVES = ((0.4, 0.0), (0.25, -0.8), (0.2, 0.0), (0.25, 0.8), (0.2, 0.0))

    def test_slide_speed_that_jumps_is_reproduced(self):
        rig = example_rig(radial=FREE_FORCE)
        _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], self.MOVES)
        checks = replayed(rig, trajectory)
        assert set(checks) == {"replay angle", "replay speed", "replay radial"}
        assert all(check.value < 1e-8 for check in checks.values())

    def test_wrong_friction_is_noticed(self):
        rig = example_rig(radial=FREE_FORCE)
        _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], self.MOVES)
        wrong = replace(rig, friction=AxleFriction(0.08))
        assert {"replay angle", "replay speed"} <= failures(wrong, trajectory)

    def test_slide_speed_that_is_not_the_rate_of_the_position_is_noticed(self):
        rig = example_rig(radial=FREE_FORCE)
        _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], self.MOVES)
        spoiled = replace(trajectory, radial_speed=1.02 * trajectory.radial_speed)
        assert "replay radial" in failures(rig, spoiled)

    def test_jumps_of_the_position_keep_the_momentum(self):
        rig = example_rig(radial=FREE_POSITION)
        moves = ((0.4, 0.0), (0.0, 0.2), (0.3, 0.0), (0.0, 0.4), (0.3, 0.0))
        _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], moves)
        checks = replayed(rig, trajectory)
        assert all(check.value < 1e-8 for check in checks.values())
        limited = example_rig(radial=FREE_FORCE)
        assert "replay radial" in failures(limited, trajectory)
