# SPDX-License-Identifier: BSD-3-Clause
"""Parts of a rig and tasks cannot be built wrong, and keep what they were given."""

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
from rotorpump.tasks import Pump, Rotate, SpinUp

SLIDE = {
    "stroke": (0.2, 0.4),
    "speed": 0.8,
    "force": 40.0,
    "power": 20.0,
    "force_rate": 900.0,
    "continuous_force": 25.0,
    "stall_force": 60.0,
    "no_load_speed": 1.5,
    "motor_constant": 8.0,
    "rubbing": 0.5,
}
START = {"start_angle": 0.3, "start_speed": 1.0, "start_radial": 0.3, "start_tangential": 0.1}
FRICTION = {
    "viscous": 0.05,
    "coulomb": 0.1,
    "quadratic": 0.01,
    "load": 0.002,
    "journal_radius": 0.01,
}
VALID = {
    Wheel: {"inertia": 0.25, "mass": 3.0, "unbalance": 0.1, "unbalance_angle": -0.5},
    Slide: SLIDE,
    AxleFriction: FRICTION,
    Rig: {
        "wheel": Wheel(inertia=0.25),
        "mass": 1.2,
        "radial": Slide(**SLIDE),
        "friction": AxleFriction(**FRICTION),
        "tangential": 0.1,
        "gravity": 9.81,
    },
    Pump: {"duration": 8.0, **START},
    SpinUp: {"energy": 5.0, "deadline": 9.0, **START},
    Rotate: {"mean_speed": 7.0, "load_torque": 0.2},
}

LIMITS = [(Slide, name) for name in ("speed", "force", "power", "force_rate", "continuous_force")]
POSITIVE = [
    *LIMITS,
    (Wheel, "inertia"),
    (Slide, "stall_force"),
    (Slide, "no_load_speed"),
    (Slide, "motor_constant"),
    # where there is friction that depends on the load, as here
    (AxleFriction, "journal_radius"),
    (Rig, "mass"),
    (Rig, "gravity"),
    (Pump, "duration"),
    (SpinUp, "energy"),
    (SpinUp, "deadline"),
    (Rotate, "mean_speed"),
]
NON_NEGATIVE = [
    (Wheel, "mass"),
    (Wheel, "unbalance"),
    (Slide, "rubbing"),
    (AxleFriction, "viscous"),
    (AxleFriction, "coulomb"),
    (AxleFriction, "quadratic"),
    (AxleFriction, "load"),
    (Pump, "start_radial"),
    (SpinUp, "start_radial"),
    (Rotate, "load_torque"),
]
SIGNED = [
    (Wheel, "unbalance_angle"),
    (Rig, "tangential"),
    *(
        (kind, name)
        for kind in (Pump, SpinUp)
        for name in ("start_angle", "start_speed", "start_tangential")
    ),
]
NUMBERS = POSITIVE + NON_NEGATIVE + SIGNED
PARTS = [(Rig, "wheel"), (Rig, "friction")]
OTHERS = [
    (Slide, "stroke"),
    (Slide, "end_stops"),
    (Rig, "radial"),
    (SpinUp, "speed"),
    (SpinUp, "full_turn"),
    (Rotate, "direction"),
]
"""Fields with rules of their own, tested with the rig and the tasks."""

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
    listed = [*NUMBERS, *PARTS, *OTHERS]
    assert len(set(listed)) == len(listed)
    assert set(listed) == {(kind, f.name) for kind in VALID for f in fields(kind)}


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


def test_what_the_user_has_to_decide_has_no_default():
    for kind in (AxleFriction, Wheel, Slide, Rig, Pump, SpinUp):
        with pytest.raises(TypeError, match=r"missing"):
            kind()


def test_what_is_not_given_is_standard_or_absent():
    slide, friction, wheel = Slide((0.1, 0.2)), AxleFriction(0.1), Wheel(0.1)
    assert {getattr(slide, name) for _, name in LIMITS} == {math.inf}
    assert (slide.stall_force, slide.no_load_speed, slide.motor_constant) == (None, None, None)
    assert (slide.rubbing, slide.end_stops) == (0.0, "bear")
    assert (friction.coulomb, friction.quadratic, friction.load, friction.journal_radius) == (
        0,
    ) * 4
    assert (wheel.mass, wheel.unbalance) == (0.0, 0.0)
    rig = Rig(wheel, 1.2, slide, friction)
    assert rig.gravity == 9.80665  # standard gravity, third CGPM of 1901 (from memory)
    assert rig.tangential == 0.0
    turn = Rotate()
    assert (turn.mean_speed, turn.load_torque, turn.direction) == (None, 0.0, 1)
