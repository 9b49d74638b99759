# SPDX-License-Identifier: BSD-3-Clause
"""Tasks: goals, starts that fit a rig, and what each can be optimized for."""

from __future__ import annotations

import math
import re
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.errors import InputError
from rotorpump.measures import MEASURES, check_measure, measure
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp

RIG = Rig(
    wheel=Wheel(inertia=0.25, mass=3.0),
    mass=1.2,
    radial=Slide(stroke=(0.2, 0.4), speed=0.8),
    friction=AxleFriction(viscous=0.05),
)
ASIDE = Slide(stroke=(-0.1, 0.3), force=40.0)
BOTH = replace(RIG, tangential=ASIDE)
PUMP = Pump(duration=8.0, start_angle=0.3)
QUARTER = 0.5 * math.pi

positive = st.floats(1e-300, 1e300)


def refused(message, act, *given, **named):
    with pytest.raises(InputError, match=f"^{re.escape(message)}"):
        act(*given, **named)


class TestGoals:
    @given(st.none() | positive, st.none() | positive, st.booleans())
    def test_exactly_one(self, energy, speed, full_turn):
        goals = {"energy": energy, "speed": speed, "full_turn": full_turn}
        if (energy is not None) + (speed is not None) + full_turn == 1:
            made = SpinUp(start_angle=0.3, **goals)
            assert {name: getattr(made, name) for name in goals} == goals
        else:
            refused("goal: exactly one of", SpinUp, start_angle=0.3, **goals)

    @pytest.mark.parametrize("speed", [-1.0, 0.0, math.nan, math.inf, True, "3"])
    def test_a_bad_speed_is_refused(self, speed):
        refused("speed: must be ", SpinUp, start_angle=0.3, speed=speed)

    @given(st.integers() | st.text() | st.none() | st.floats())
    def test_full_turn_is_true_or_false(self, value):
        message = "full_turn: must be true or false; received"
        refused(message, SpinUp, start_angle=0.3, energy=1.0, full_turn=value)

    @given(st.floats(3.15, 1e6) | st.floats(-1e6, -3.15))
    def test_an_angle_beyond_half_a_turn_is_refused(self, angle):
        message = "start_angle: must lie within -pi and pi; received"
        refused(message, Pump, duration=1.0, start_angle=angle)

    @pytest.mark.parametrize("value", [1, -1, 1.0, -1.0])
    def test_directions(self, value):
        kept = Rotate(direction=value).direction
        assert (type(kept), kept) == (int, value)

    @pytest.mark.parametrize("value", [0, 2, 0.5, True, "1", None, math.nan])
    def test_other_directions_are_refused(self, value):
        refused("direction: must be 1 or -1; received", Rotate, direction=value)


class TestStart:
    def test_the_mass_starts_outside_and_in_the_middle_unless_told(self):
        assert PUMP.place_in(RIG) == (0.4, 0.0)
        assert PUMP.place_in(BOTH) == pytest.approx((0.4, 0.1))
        assert PUMP.place_in(replace(RIG, tangential=0.05)) == (0.4, 0.05)
        assert PUMP.place_in(replace(BOTH, radial=0.3)) == pytest.approx((0.3, 0.1))
        told = replace(PUMP, start_radial=0.25, start_tangential=-0.1)
        assert told.place_in(BOTH) == (0.25, -0.1)

    @pytest.mark.parametrize(
        ("field", "value", "stroke"),
        [
            ("start_radial", 0.19, "0.2 to 0.4"),
            ("start_radial", 0.41, "0.2 to 0.4"),
            ("start_tangential", -0.11, "-0.1 to 0.3"),
            ("start_tangential", 0.31, "-0.1 to 0.3"),
        ],
    )
    def test_a_start_beyond_the_stroke_is_refused(self, field, value, stroke):
        task = replace(PUMP, **{field: value})
        refused(f"{field}: must lie within the stroke {stroke}; received {value}", task.check, BOTH)

    def test_a_held_axis_starts_where_it_is_held(self):
        replace(PUMP, start_tangential=0.0).check(RIG)
        refused("start_tangential: must lie", replace(PUMP, start_tangential=0.1).check, RIG)

    @pytest.mark.parametrize("unbalance_angle", [0.0, math.pi, -math.pi])
    @pytest.mark.parametrize("angle", [0.0, -0.0, math.pi, -math.pi])
    def test_a_start_that_no_radial_move_can_leave_is_refused(self, angle, unbalance_angle):
        # a counterweight opposite to the slide leaves a rounding beside its line
        rig = replace(RIG, wheel=Wheel(0.25, 3.0, 0.3, unbalance_angle))
        task = replace(PUMP, start_angle=angle)
        refused("start_angle: must differ from 0 and from half a turn", task.check, rig)
        replace(task, start_speed=0.1).check(rig)
        replace(task, start_angle=1e-3).check(rig)

    @pytest.mark.parametrize(
        "rig",
        [
            BOTH,
            replace(RIG, tangential=0.05),
            replace(RIG, wheel=Wheel(0.25, 3.0, 0.1, 0.5)),
            replace(RIG, radial=0.0, tangential=ASIDE),
        ],
        ids=["both slides", "mass aside", "unbalance aside", "tangential slide"],
    )
    def test_what_is_not_balanced_may_hang_still(self, rig):
        replace(PUMP, start_angle=0.0).check(rig)

    def test_a_start_that_no_tangential_move_can_leave_is_refused(self):
        centred, task = (
            replace(RIG, radial=0.0, tangential=ASIDE),
            replace(PUMP, start_angle=-QUARTER),
        )
        refused("start_angle: must differ from a quarter turn either way", task.check, centred)
        task.check(replace(centred, radial=0.1))


class TestMeasures:
    @pytest.mark.parametrize(
        ("task", "name", "unit", "more"),
        [
            (PUMP, "energy", "J", True),
            (SpinUp(start_angle=0.3, energy=5.0), "time", "s", False),
            (Rotate(), "speed", "rad/s", True),
            (Rotate(load_torque=0.2), "speed", "rad/s", True),
            (Rotate(mean_speed=7.0), "work", "J", False),
        ],
    )
    def test_each_task_has_a_default(self, task, name, unit, more):
        found = measure(task)
        assert (found.name, found.unit, found.more_is_better) == (name, unit, more)
        assert measure(task, name) == found
        refused("objective: must be one of '", measure, task, "beauty")
        refused("objective: must be one of '", measure, task, 3)

    def test_costs_are_better_small_and_gains_large(self):
        for offered in MEASURES.values():
            for entry in offered:
                less = entry.name in {"time", "work", "heat", "work+heat"}
                assert entry.more_is_better is not less

    @pytest.mark.parametrize("name", ["work", "heat", "work+heat"])
    def test_the_cost_of_a_turn_needs_a_speed(self, name):
        assert measure(Rotate(mean_speed=7.0), name).unit == "J"
        refused("objective: needs a mean_speed", measure, Rotate(), name)

    @pytest.mark.parametrize("name", ["speed", "load power"])
    def test_what_a_given_speed_fixes_is_no_objective(self, name):
        task = Rotate(mean_speed=7.0, load_torque=0.2)
        refused(f"objective: must not be '{name}' where mean_speed is given", measure, task, name)

    def test_load_power_needs_a_load(self):
        assert measure(Rotate(load_torque=0.2), "load power").unit == "W"
        refused("objective: needs a load_torque", measure, Rotate(), "load power")

    @pytest.mark.parametrize("name", ["heat", "work+heat"])
    def test_heat_needs_a_motor_constant_of_every_slide(self, name):
        wanted = measure(Rotate(mean_speed=7.0), name)
        partly = replace(BOTH, radial=replace(BOTH.radial, motor_constant=8.0))
        message = f"motor_constant: is required of the tangential slide for the objective '{name}'"
        refused(message, check_measure, partly, wanted)
        check_measure(partly.with_slides(lambda slide: replace(slide, motor_constant=8.0)), wanted)
        check_measure(BOTH, measure(Rotate(mean_speed=7.0), "work"))
