# SPDX-License-Identifier: BSD-3-Clause
"""The rig: slides with their limits, held axes, and what follows from its numbers."""

from __future__ import annotations

import math
import re
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.errors import InputError
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

SLIDE = Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0)
ASIDE = Slide(stroke=(-0.1, 0.15), speed=0.5)


def rig(radial=SLIDE, tangential=0.0, **changes):
    parts = {"wheel": Wheel(0.25, 3.0), "mass": 1.2, "friction": AxleFriction(0.05)}
    return Rig(radial=radial, tangential=tangential, **(parts | changes))


def refused(message, make, *given, **named):
    with pytest.raises(InputError, match=f"^{re.escape(message)}"):
        make(*given, **named)


class TestStroke:
    @given(st.floats(-1e6, 1e6), st.floats(1e-3, 1e6))
    def test_ends_are_kept(self, low, length):
        slide = Slide(stroke=[low, low + length])
        assert slide.stroke == (low, low + length)
        assert slide.length == pytest.approx(length, rel=1e-6, abs=1e-9)
        assert slide.middle == pytest.approx(low + 0.5 * length)

    @given(st.floats(-1e6, 1e6), st.floats(0.0, 1e6))
    def test_reversed_or_equal_ends_are_refused(self, low, length):
        refused("stroke: must satisfy lo < hi; received", Slide, stroke=(low + length, low))

    @pytest.mark.parametrize(
        "value", [0.4, "ab", None, (), (0.2,), (0.1, 0.2, 0.3), {0.1, 0.2}, {0.1: 1, 0.2: 2}]
    )
    def test_anything_but_two_values_is_refused(self, value):
        refused("stroke: must be two numbers (lo, hi); received", Slide, stroke=value)

    @pytest.mark.parametrize("value", [math.nan, math.inf, True, "0.1", None])
    @pytest.mark.parametrize("place", [0, 1])
    def test_ends_that_are_no_finite_numbers_are_refused(self, value, place):
        stroke = [0.2, 0.4]
        stroke[place] = value
        refused("stroke: must be ", Slide, stroke=tuple(stroke))

    @pytest.mark.parametrize("digits", [400, 5000])
    def test_an_end_beyond_a_float_is_refused(self, digits):
        message = "stroke: must be a number that a float can hold; received"
        refused(message, Slide, stroke=(0.1, 10**digits))

    def test_only_a_tangential_slide_may_reach_beyond_the_axle(self):
        message = "stroke: must satisfy 0 <= lo < hi for the radial slide; received (-0.1, 0.15)"
        refused(message, rig, ASIDE)
        assert rig(0.3, ASIDE).tangential.stroke == (-0.1, 0.15)
        assert rig(Slide((0.0, 0.4))).radial.stroke == (0.0, 0.4)


class TestDrive:
    @pytest.mark.parametrize("name", ["stall_force", "no_load_speed"])
    def test_a_motor_line_needs_both_its_ends(self, name):
        missing = {"stall_force": "no_load_speed", "no_load_speed": "stall_force"}[name]
        refused(f"{missing}: is required: it makes the motor line", Slide, (0.2, 0.4), **{name: 2})

    def test_what_a_motor_line_limits(self):
        line = Slide((0.2, 0.4), force=50.0, speed=0.8, stall_force=40.0, no_load_speed=1.5)
        assert (line.standing_force, line.top_speed) == (40.0, 0.8)
        quick = replace(line, stall_force=60.0, no_load_speed=0.7)
        assert (quick.standing_force, quick.top_speed) == (50.0, 0.7)
        free = Slide((0.2, 0.4))
        assert (free.standing_force, free.top_speed) == (math.inf, math.inf)

    @pytest.mark.parametrize(
        ("limits", "forceful"),
        [
            ({}, False),
            ({"speed": 0.8, "motor_constant": 8.0, "rubbing": 2.0}, False),
            ({"force": 40.0}, True),
            ({"power": 20.0}, True),
            ({"force_rate": 900.0}, True),
            ({"continuous_force": 25.0}, True),
            ({"stall_force": 40.0, "no_load_speed": 1.5}, True),
        ],
    )
    def test_which_limits_are_limits_of_the_force(self, limits, forceful):
        assert Slide((0.2, 0.4), **limits).forceful is forceful

    @given(st.text() | st.booleans() | st.none() | st.just(["bear"]))
    def test_unknown_end_stops_are_refused(self, word):
        if word not in ("bear", "avoid"):
            refused("end_stops: must be one of 'bear', 'avoid'", Slide, (0.2, 0.4), end_stops=word)

    def test_known_end_stops(self):
        assert Slide((0.2, 0.4), end_stops="bear").bearing
        assert not Slide((0.2, 0.4), end_stops="avoid").bearing


def test_friction_by_load_needs_a_radius():
    message = "journal_radius: must be greater than 0 where load is given; received 0.0"
    refused(message, AxleFriction, 0.05, load=0.002)
    assert AxleFriction(0.05, load=0.002, journal_radius=0.01).load_arm == pytest.approx(2e-5)
    assert AxleFriction(0.05, journal_radius=0.01).load_arm == 0.0


class TestAxes:
    def test_a_number_holds_the_mass(self):
        one = rig(0.3, ASIDE)
        assert (one.driven, one.slides) == (("tangential",), (ASIDE,))
        assert one.stroke("radial") == (0.3, 0.3)
        assert one.stroke("tangential") == ASIDE.stroke
        with pytest.raises(TypeError, match="the radial axis has no slide"):
            one.slide("radial")
        assert rig().driven == ("radial",)
        assert rig(tangential=ASIDE).driven == ("radial", "tangential")
        assert type(rig(1, ASIDE).radial) is float

    @pytest.mark.parametrize(
        ("radial", "tangential", "message"),
        [
            (-0.1, ASIDE, "radial: must not be negative; received -0.1"),
            (math.inf, ASIDE, "radial: must be finite; received inf"),
            (True, ASIDE, "radial: must be a Slide, or a number that holds it; received True"),
            ((0.2, 0.4), ASIDE, "radial: must be a Slide, or a number that holds it"),
            (SLIDE, math.nan, "tangential: must be finite; received nan"),
            (SLIDE, "0.1", "tangential: must be a Slide, or a number that holds it"),
            (SLIDE, None, "tangential: must be a Slide, or a number that holds it; received None"),
            (0.3, 0.1, "radial: must be a slide where tangential is held; received 0.3"),
        ],
    )
    def test_what_holds_no_mass_is_refused(self, radial, tangential, message):
        refused(message, rig, radial, tangential)

    def test_every_slide_is_changed_and_nothing_else(self):
        one = rig(tangential=ASIDE)
        faster = one.with_slides(lambda slide: replace(slide, speed=2.0 * slide.speed))
        assert (faster.radial.speed, faster.tangential.speed) == (1.6, 1.0)
        restored = faster.with_slides(lambda slide: replace(slide, speed=0.5 * slide.speed))
        assert restored == one
        assert rig(0.3, ASIDE).with_slides(lambda _: SLIDE) == rig(0.3, SLIDE)


class TestMirrored:
    def test_what_changes_sides(self):
        one = rig(tangential=ASIDE, wheel=Wheel(0.25, 3.0, 0.1, 0.7)).mirrored()
        assert one.tangential == replace(ASIDE, stroke=(-0.15, 0.1))
        assert (one.radial, one.wheel.unbalance_angle) == (SLIDE, -0.7)
        assert rig(tangential=0.1).mirrored().tangential == -0.1

    @given(st.floats(-3.0, 3.0), st.floats(0.0, 0.4), st.floats(-0.4, 0.4))
    def test_the_static_moment_is_mirrored(self, angle, radial, aside):
        one = rig(tangential=ASIDE, wheel=Wheel(0.25, 3.0, 0.1, angle))
        along, across = one.static_moment(radial, aside)
        assert one.mirrored().static_moment(radial, -aside) == pytest.approx((along, -across))
        assert one.mirrored().mirrored() == one


class TestHanging:
    def test_inertia_and_period(self):
        one = rig(gravity=10.0)
        assert one.inertia(0.3) == pytest.approx(0.25 + 1.2 * 0.09)
        assert one.inertia(0.3, -0.4) == pytest.approx(0.25 + 1.2 * 0.25)
        assert one.lowest_place == (0.4, 0.0)
        # T = 2 pi sqrt(I / (m g r)), the small swing of a compound pendulum
        expected = 2.0 * math.pi * math.sqrt((0.25 + 1.2 * 0.16) / (1.2 * 10.0 * 0.4))
        assert one.pendulum_period == pytest.approx(expected)

    def test_an_unbalance_that_outweighs_the_mass(self):
        # 1 kg m towards the axis's other end, against at most 0.48 kg m of the mass
        one = rig(gravity=10.0, wheel=Wheel(0.25, 3.0, 1.0, math.pi))
        assert one.static_moment(0.4, 0.0) == pytest.approx((1.2 * 0.4 - 1.0, 0.0))
        assert one.lowest_place == (0.2, 0.0)
        expected = 2.0 * math.pi * math.sqrt((0.25 + 1.2 * 0.04) / (10.0 * (1.0 - 1.2 * 0.2)))
        assert one.pendulum_period == pytest.approx(expected)

    @given(st.floats(0.0, 0.5), st.floats(-3.2, 3.2), st.floats(-0.3, 0.1))
    def test_nowhere_does_the_rig_hang_lower(self, unbalance, angle, left):
        one = rig(tangential=Slide((left, left + 0.2)), wheel=Wheel(0.25, 3.0, unbalance, angle))
        most = math.hypot(*one.static_moment(*one.lowest_place))
        for radial in np.linspace(*one.stroke("radial"), 5):
            for aside in np.linspace(*one.stroke("tangential"), 5):
                assert math.hypot(*one.static_moment(radial, aside)) <= most * (1.0 + 1e-12)
