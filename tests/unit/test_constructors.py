# SPDX-License-Identifier: BSD-3-Clause
"""Rigs and tasks cannot be built wrong, and keep what they were given."""

from __future__ import annotations

import math
from dataclasses import FrozenInstanceError, fields

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.errors import InputError
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp, measure

RIG = {
    "wheel": Wheel(inertia=0.25, mass=3.0),
    "mass": 1.2,
    "radial": Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0),
    "friction": AxleFriction(viscous=0.05),
}
VALID = {
    Wheel: {"inertia": 0.25, "mass": 3.0},
    Slide: {"stroke": (0.2, 0.4), "speed": 0.8, "force": 40.0},
    AxleFriction: {"viscous": 0.05, "coulomb": 0.1, "quadratic": 0.01},
    Rig: {**RIG, "gravity": 9.81},
    Pump: {"duration": 8.0, "start_angle": 0.3, "start_speed": 1.0, "start_radial": 0.3},
    SpinUp: {"start_angle": 0.3, "start_speed": 1.0, "start_radial": 0.3, "energy": 5.0},
}

POSITIVE = [
    (Wheel, "inertia"),
    (Slide, "speed"),
    (Slide, "force"),
    (Rig, "mass"),
    (Rig, "gravity"),
    (Pump, "duration"),
    (Pump, "start_radial"),
    (SpinUp, "start_radial"),
    (SpinUp, "energy"),
]
NON_NEGATIVE = [
    (Wheel, "mass"),
    (AxleFriction, "viscous"),
    (AxleFriction, "coulomb"),
    (AxleFriction, "quadratic"),
]
SIGNED = [
    (Pump, "start_angle"),
    (Pump, "start_speed"),
    (SpinUp, "start_angle"),
    (SpinUp, "start_speed"),
]
LIMITS = [(Slide, "speed"), (Slide, "force")]
NUMBERS = POSITIVE + NON_NEGATIVE + SIGNED
PARTS = [(Rig, "wheel"), (Rig, "radial"), (Rig, "friction")]

above_zero = st.floats(min_value=1e-300, max_value=1e300)
below_zero = st.floats(max_value=-1e-300, allow_infinity=False, allow_nan=False)
not_numbers = (
    st.booleans()
    | st.text()
    | st.lists(st.floats(), max_size=3)
    | st.complex_numbers()
    | st.binary(max_size=3)
)


def build(kind, **changes):
    return kind(**(VALID[kind] | changes))


def refuses(kind, field, value):
    with pytest.raises(InputError) as caught:
        build(kind, **{field: value})
    assert caught.value.field == field
    assert str(caught.value).startswith(f"{field}: ")
    assert repr(value) in str(caught.value)


def test_lists_of_fields_are_complete():
    listed = set(NUMBERS + PARTS + [(Slide, "stroke"), (Slide, "end_stops")])
    listed |= {(SpinUp, "speed"), (SpinUp, "full_turn")}
    assert listed == {(kind, f.name) for kind in VALID for f in fields(kind)}


@pytest.mark.parametrize(("kind", "field"), POSITIVE)
@given(value=above_zero)
def test_positive_values_are_kept(kind, field, value):
    assert getattr(build(kind, **{field: value}), field) == value


@pytest.mark.parametrize(("kind", "field"), NON_NEGATIVE)
@given(value=above_zero | st.just(0.0))
def test_non_negative_values_are_kept(kind, field, value):
    assert getattr(build(kind, **{field: value}), field) == value


@pytest.mark.parametrize(("kind", "field"), SIGNED)
@given(value=st.floats(-math.pi, math.pi))
def test_signed_values_are_kept(kind, field, value):
    assert getattr(build(kind, **{field: value}), field) == value


@pytest.mark.parametrize(("kind", "field"), POSITIVE + NON_NEGATIVE)
@given(value=below_zero)
def test_negative_values_are_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize(("kind", "field"), POSITIVE)
@pytest.mark.parametrize("value", [0, 0.0, -0.0])
def test_zero_is_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize(("kind", "field"), NUMBERS)
@pytest.mark.parametrize("value", [math.nan, -math.inf])
def test_values_that_are_not_finite_are_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize(("kind", "field"), [pair for pair in NUMBERS if pair not in LIMITS])
def test_infinity_is_refused(kind, field):
    refuses(kind, field, math.inf)


@pytest.mark.parametrize(("kind", "field"), LIMITS)
def test_an_infinite_limit_is_no_limit(kind, field):
    assert getattr(build(kind, **{field: math.inf}), field) == math.inf


@pytest.mark.parametrize(("kind", "field"), NUMBERS)
@given(value=not_numbers)
def test_what_is_no_number_is_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize(("kind", "field"), NUMBERS)
@pytest.mark.parametrize("number", [1, np.float64(1.0), np.int64(1), np.float32(1.0)])
def test_other_numbers_become_floats(kind, field, number):
    kept = getattr(build(kind, **{field: number}), field)
    assert type(kept) is float
    assert kept == 1.0


@pytest.mark.parametrize(("kind", "field"), NUMBERS)
@pytest.mark.parametrize("value", [10**400, -(10**400)])
def test_numbers_beyond_a_float_are_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize("digits", [400, 5000])
def test_a_stroke_beyond_a_float_is_refused(digits):
    with pytest.raises(InputError, match=r"^stroke: must be a number that a float can hold; rec"):
        build(Slide, stroke=(0.1, 10**digits))


@pytest.mark.parametrize(("kind", "field"), PARTS)
@given(value=st.none() | st.floats() | st.text() | st.just(Rotate()))
def test_parts_of_the_wrong_kind_are_refused(kind, field, value):
    refuses(kind, field, value)


@pytest.mark.parametrize("kind", VALID)
def test_objects_are_frozen_and_equal_by_value(kind):
    made = build(kind)
    assert made == build(kind)
    with pytest.raises(FrozenInstanceError):
        setattr(made, fields(kind)[0].name, 1.0)


class TestStroke:
    @given(st.floats(0.0, 1e6), st.floats(1e-3, 1e6))
    def test_ends_are_kept(self, low, length):
        slide = build(Slide, stroke=[low, low + length])
        assert slide.stroke == (low, low + length)
        assert slide.length == pytest.approx(length, rel=1e-6, abs=1e-9)

    @given(st.floats(0.0, 1e6), st.floats(0.0, 1e6))
    def test_reversed_or_equal_ends_are_refused(self, low, length):
        refuses(Slide, "stroke", (low + length, low))

    @given(below_zero, above_zero)
    def test_a_negative_end_is_refused(self, low, high):
        refuses(Slide, "stroke", (low, high))

    @pytest.mark.parametrize(
        "value", [0.4, "ab", None, (), (0.2,), (0.1, 0.2, 0.3), {0.1, 0.2}, {0.1: 1, 0.2: 2}]
    )
    def test_anything_but_two_values_is_refused(self, value):
        refuses(Slide, "stroke", value)

    @pytest.mark.parametrize("value", [math.nan, math.inf, True, "0.1", None])
    @pytest.mark.parametrize("place", [0, 1])
    def test_ends_that_are_no_finite_numbers_are_refused(self, value, place):
        stroke = [0.2, 0.4]
        stroke[place] = value
        with pytest.raises(InputError, match=r"^stroke: must be") as caught:
            build(Slide, stroke=tuple(stroke))
        assert caught.value.field == "stroke"

    @given(st.text() | st.booleans() | st.none() | st.just(["bear"]))
    def test_unknown_end_stops_are_refused(self, word):
        if word not in ("bear", "avoid"):
            refuses(Slide, "end_stops", word)

    def test_known_end_stops(self):
        assert build(Slide, end_stops="bear").bearing
        assert not build(Slide, end_stops="avoid").bearing


class TestTasks:
    @given(st.floats(3.15, 1e6) | st.floats(-1e6, -3.15))
    def test_an_angle_beyond_half_a_turn_is_refused(self, angle):
        refuses(Pump, "start_angle", angle)
        refuses(SpinUp, "start_angle", angle)

    @given(above_zero)
    def test_a_speed_goal_is_kept(self, speed):
        assert build(SpinUp, energy=None, speed=speed).speed == speed

    @given(below_zero | st.sampled_from([0.0, math.nan, math.inf, -math.inf, True, "3"]))
    def test_a_bad_speed_goal_is_refused(self, speed):
        with pytest.raises(InputError, match=r"^speed: must be"):
            build(SpinUp, energy=None, speed=speed)

    @given(st.none() | above_zero, st.none() | above_zero, st.booleans())
    def test_exactly_one_goal(self, energy, speed, full_turn):
        goals = {"energy": energy, "speed": speed, "full_turn": full_turn}
        if (energy is not None) + (speed is not None) + full_turn == 1:
            made = build(SpinUp, **goals)
            assert {name: getattr(made, name) for name in goals} == goals
        else:
            with pytest.raises(InputError, match=r"^goal: exactly one of") as caught:
                build(SpinUp, **goals)
            assert caught.value.field == "goal"

    @given(st.integers() | st.text() | st.none() | st.floats())
    def test_full_turn_is_true_or_false(self, value):
        refuses(SpinUp, "full_turn", value)

    def test_the_mass_starts_at_the_outer_end_unless_told(self):
        rig = build(Rig)
        assert build(Pump, start_radial=None).radial_in(rig) == 0.4
        assert build(Pump).radial_in(rig) == 0.3

    @pytest.mark.parametrize("radial", [0.19, 0.41])
    def test_a_start_beyond_the_stroke_is_refused(self, radial):
        with pytest.raises(InputError, match=r"^start_radial: must lie within the stroke 0.2 to"):
            build(Pump, start_radial=radial).check(build(Rig))

    @pytest.mark.parametrize("angle", [0.0, -0.0])
    def test_a_start_that_nothing_can_move_is_refused(self, angle):
        with pytest.raises(InputError, match=r"^start_angle: must differ from 0"):
            build(Pump, start_angle=angle, start_speed=0.0).check(build(Rig))
        build(Pump, start_angle=angle, start_speed=0.1).check(build(Rig))

    @pytest.mark.parametrize(
        ("task", "name", "better"),
        [(build(Pump), "energy", True), (build(SpinUp), "time", False), (Rotate(), "speed", True)],
    )
    def test_each_task_has_its_measure(self, task, name, better):
        assert measure(task) == measure(task, name)
        assert measure(task).name == name
        assert measure(task).more_is_better is better
        with pytest.raises(InputError, match=r"^objective: must be one of"):
            measure(task, "beauty")


class TestRig:
    def test_inertia_and_period(self):
        rig = build(Rig, gravity=10.0)
        assert rig.inertia(0.3) == pytest.approx(0.25 + 1.2 * 0.09)
        # T = 2 pi sqrt(I / (m g r)), the small swing of a compound pendulum
        expected = 2.0 * math.pi * math.sqrt((0.25 + 1.2 * 0.16) / (1.2 * 10.0 * 0.4))
        assert rig.pendulum_period == pytest.approx(expected)

    def test_what_is_not_given_is_standard_or_absent(self):
        rig = Rig(**RIG)
        assert rig.gravity == 9.80665  # standard gravity, third CGPM of 1901 (from memory)
        assert Slide(stroke=(0.1, 0.2)) == Slide((0.1, 0.2), math.inf, math.inf, "bear")
        assert AxleFriction(0.1) == AxleFriction(0.1, 0.0, 0.0)
        assert Wheel(0.1).mass == 0.0

    def test_friction_and_limits_of_a_task_have_no_default(self):
        for kind in (AxleFriction, Wheel, Slide, Rig, Pump, SpinUp):
            with pytest.raises(TypeError, match=r"missing"):
                kind()
