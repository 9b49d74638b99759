# SPDX-License-Identifier: BSD-3-Clause
"""Whether a task can begin on a rig, and has anything left to do."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest

from rotorpump.errors import InputError
from rotorpump.physics.beginning import check_beginning
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp

RIG = Rig(
    wheel=Wheel(inertia=0.2),
    mass=1.5,
    radial=Slide(stroke=(0.1, 0.3)),
    friction=AxleFriction(viscous=0.0),
    gravity=10.0,
)


def refusal(task) -> InputError:
    with pytest.raises(InputError) as caught:
        check_beginning(RIG, task)
    return caught.value


@pytest.mark.parametrize(
    "task",
    [
        Rotate(),
        Pump(duration=1.0, start_angle=0.1),
        Pump(duration=1.0, start_angle=0.0, start_speed=-1.0),
        Pump(duration=1.0, start_angle=math.pi, start_speed=1.0),
        SpinUp(full_turn=True, start_angle=-0.4, start_radial=0.1),
        SpinUp(full_turn=True, start_angle=math.pi, start_speed=-1.0),
        SpinUp(speed=3.0, start_angle=0.2, start_speed=2.9),
        SpinUp(energy=3.0, start_angle=0.2),
    ],
)
def test_what_can_begin_passes(task):
    check_beginning(RIG, task)


@pytest.mark.parametrize("angle", [0.0, math.pi, -math.pi, 1e-10])
@pytest.mark.parametrize("goal", [{"energy": 9.0}, {"speed": 1.0}, {"full_turn": True}])
def test_a_balanced_wheel_at_rest_cannot_begin(angle, goal):
    assert refusal(SpinUp(start_angle=angle, **goal)).field == "start_angle"
    assert refusal(Pump(start_angle=angle, duration=1.0)).field == "start_angle"


@pytest.mark.parametrize("radial", [0.0999, 0.3001])
def test_the_mass_begins_within_its_stroke(radial):
    error = refusal(Pump(duration=1.0, start_angle=0.5, start_radial=radial))
    assert error.field == "start_radial"
    assert error.received == radial
    assert "0.1 to 0.3" in error.rule


def energy_at_start(angle, speed, radial):
    """½ (J + m ρ²) ω² + m g (ρ_outer - ρ cos φ), by hand."""
    return 0.5 * (0.2 + 1.5 * radial**2) * speed**2 + 15.0 * (0.3 - radial * math.cos(angle))


@pytest.mark.parametrize(("angle", "speed", "radial"), [(0.7, 0.0, 0.3), (-0.2, -4.0, 0.15)])
def test_the_energy_goal_must_exceed_what_is_there(angle, speed, radial):
    present = energy_at_start(angle, speed, radial)
    start = {"start_angle": angle, "start_speed": speed, "start_radial": radial}
    check_beginning(RIG, SpinUp(energy=present * (1.0 + 1e-9), **start))
    error = refusal(SpinUp(energy=present * (1.0 - 1e-9), **start))
    assert error.field == "energy"
    assert f"{present:.6g} J" in error.rule


@pytest.mark.parametrize("speed", [2.0, -2.0])
def test_the_speed_goal_counts_in_either_direction(speed):
    error = refusal(SpinUp(speed=2.0, start_angle=0.3, start_speed=speed))
    assert error.field == "speed"
    assert "2 rad/s" in error.rule
    check_beginning(RIG, SpinUp(speed=2.001, start_angle=0.3, start_speed=speed))


@pytest.mark.parametrize("side", [1.0, -1.0])
def test_a_full_turn_must_not_begin_past_the_top(side):
    task = SpinUp(full_turn=True, start_angle=side * math.pi, start_speed=side * 0.1)
    assert refusal(task).field == "full_turn"


@pytest.mark.parametrize(
    "changes",
    [
        {"tangential": 0.05},
        {"radial": 0.3, "tangential": Slide(stroke=(-0.1, 0.1))},
        {"wheel": Wheel(inertia=0.2, unbalance=0.1, unbalance_angle=1.0)},
    ],
)
def test_a_rig_that_is_not_balanced_can_begin_hanging_at_rest(changes):
    check_beginning(replace(RIG, **changes), SpinUp(full_turn=True, start_angle=0.0))


def test_the_energy_goal_counts_the_place_of_the_mass():
    # ½ I ω² + m g (hypot(0.3, 0.1) - ρ cos φ + τ sin φ) above the lowest place, by hand.
    rig = replace(RIG, tangential=Slide(stroke=(-0.1, 0.1)))
    start = {"start_angle": 0.5, "start_speed": 2.0, "start_tangential": 0.08}
    height = math.hypot(0.3, 0.1) - 0.3 * math.cos(0.5) + 0.08 * math.sin(0.5)
    present = 0.5 * (0.2 + 1.5 * (0.3**2 + 0.08**2)) * 4.0 + 15.0 * height
    check_beginning(rig, SpinUp(energy=present * (1.0 + 1e-9), **start))
    with pytest.raises(InputError, match=f"{present:.6g} J"):
        check_beginning(rig, SpinUp(energy=present * (1.0 - 1e-9), **start))
