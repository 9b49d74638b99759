# SPDX-License-Identifier: BSD-3-Clause
"""Scales of the program's quantities, and the way back."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from posed_programs import rig_on

from rotorpump.rig.slide import Slide
from rotorpump.transcription.scaling import Scales

SCALES = Scales.of(rig_on(2))
RADIAL = SCALES.radial


def test_scales_are_those_of_a_small_swing():
    rig = rig_on(2)
    inertia = 0.25 + 1.2 * 0.4**2
    assert SCALES.time == pytest.approx(rig.pendulum_period / (2.0 * math.pi))
    assert SCALES.momentum == pytest.approx(inertia / SCALES.time)
    # twice the kinetic energy at one radian per time scale
    assert SCALES.energy == pytest.approx(inertia / SCALES.time**2)
    assert (RADIAL.origin, RADIAL.length) == pytest.approx((0.2, 0.2))


def test_limits_are_the_scales_where_they_are_low():
    slow = Scales.of(rig_on(2, radial=Slide(stroke=(0.2, 0.4), speed=0.1, force=3.0))).radial
    assert slow[2:] == pytest.approx((0.1, 3.0 / 1.2, 3.0))


def test_the_motor_line_is_a_limit_as_well():
    line = Slide(stroke=(0.2, 0.4), stall_force=3.0, no_load_speed=0.1)
    assert Scales.of(rig_on(2, radial=line)).radial[2:] == pytest.approx((0.1, 3.0 / 1.2, 3.0))


def test_flat_scales_come_back():
    assert Scales.from_flat(SCALES.flat) == SCALES


@pytest.mark.parametrize("rung", [0, 1, 2])
def test_scales_are_finite_without_limits(rung):
    scales = Scales.of(rig_on(rung))
    assert all(math.isfinite(value) and value > 0.0 for value in scales.radial[1:])


@given(st.integers(0, 2), st.floats(-100.0, 100.0))
def test_scaling_is_undone(order, value):
    scaled = RADIAL.scaled(order, value)
    assert RADIAL.value(order, scaled) == pytest.approx(value, rel=1e-12, abs=1e-12)


def test_stroke_runs_from_zero_to_one():
    assert RADIAL.scaled(0, 0.2) == pytest.approx(0.0)
    assert RADIAL.scaled(0, 0.4) == pytest.approx(1.0)
    assert RADIAL.scaled(1, RADIAL.speed) == pytest.approx(1.0)
    assert RADIAL.scaled(2, -RADIAL.acceleration) == pytest.approx(-1.0)


def test_units_change_nothing():
    # In units of length and mass that are larger by some factors, with gravity to match, the
    # scaled rig is the same one.
    metre, kilogram = 3.0, 0.5
    rig = rig_on(2)
    slide = Slide(stroke=(0.2 * metre, 0.4 * metre), speed=0.8 * metre, force=40 * metre * kilogram)
    other = rig_on(
        2,
        wheel=type(rig.wheel)(inertia=0.25 * kilogram * metre**2),
        mass=1.2 * kilogram,
        radial=slide,
        gravity=rig.gravity * metre,
    )
    scales = Scales.of(other)
    assert scales.time == pytest.approx(SCALES.time)
    assert scales.energy == pytest.approx(SCALES.energy * kilogram * metre**2)
    assert scales.radial.speed == pytest.approx(RADIAL.speed * metre)
    assert scales.radial.acceleration == pytest.approx(RADIAL.acceleration * metre)
