# SPDX-License-Identifier: BSD-3-Clause
"""The slide's polynomial motion within an interval."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.rig.slide import Slide
from rotorpump.transcription.path import (
    FORCE_LIMITED,
    INSTANT,
    RATE_LIMITED,
    SPEED_LIMITED,
    SlidePath,
    rung_of,
)

VALUES = st.floats(-3.0, 3.0)
PATHS = st.builds(
    SlidePath,
    st.lists(VALUES, min_size=0, max_size=2).map(tuple),
    VALUES,
    VALUES,
    st.floats(0.05, 2.0),
)


@pytest.mark.parametrize(
    ("limits", "forced", "rung"),
    [
        ({}, False, INSTANT),
        ({"speed": 1.0}, False, SPEED_LIMITED),
        ({"speed": 1.0}, True, FORCE_LIMITED),
        ({"force": 10.0}, True, FORCE_LIMITED),
        ({"force": 10.0, "force_rate": 100.0}, True, RATE_LIMITED),
    ],
)
def test_limits_decide_the_rung(limits, forced, rung):
    assert rung_of(Slide(stroke=(0.2, 0.4), **limits), forced=forced) == rung


def test_instant_path_by_hand():
    path = SlidePath((), 0.2, 0.5, 0.6)
    assert path.position(0.2) == pytest.approx(0.3)
    assert path.speed(0.2) == pytest.approx(0.5)
    assert path.acceleration(0.2) == 0.0
    assert path.end() == ()


def test_speed_limited_path_by_hand():
    # ρ = 0.3 + 0.4 t - t², ending with speed -0.8
    path = SlidePath((0.3,), 0.4, -0.8, 0.6)
    assert path.position(0.5) == pytest.approx(0.3 + 0.2 - 0.25)
    assert path.speed(0.5) == pytest.approx(0.4 - 1.0)
    assert path.acceleration(0.5) == pytest.approx(-2.0)
    assert path.end() == pytest.approx((0.3 + 0.24 - 0.36,))


def test_force_limited_path_by_hand():
    # ρ̈ = 6 - 12 t, so ρ = 0.3 + 0.5 t + 3 t² - 2 t³
    path = SlidePath((0.3, 0.5), 6.0, 0.0, 0.5)
    assert path.position(0.2) == pytest.approx(0.3 + 0.1 + 0.12 - 0.016)
    assert path.speed(0.2) == pytest.approx(0.5 + 1.2 - 0.24)
    assert path.acceleration(0.2) == pytest.approx(6.0 - 2.4)
    assert path.end() == pytest.approx((0.3 + 0.25 + 0.75 - 0.25, 0.5 + 3.0 - 1.5))


@given(PATHS, st.floats(0.0, 1.0))
def test_derivatives_agree_with_differences(path, share):
    # The path is a cubic at most: central differences of speed and position are as exact as
    # rounding and the third derivative allow.
    now, step = share * path.duration, 1e-4 * path.duration
    for value, rate in ((path.position, path.speed), (path.speed, path.acceleration)):
        difference = (value(now + step) - value(now - step)) / (2.0 * step)
        assert rate(now) == pytest.approx(difference, rel=1e-6, abs=1e-6)


@given(PATHS)
def test_ends_of_the_path(path):
    motion = (path.position, path.speed, path.acceleration)
    rung = len(path.start)
    assert [value(0.0) for value in motion[:rung]] == list(path.start)
    assert path.end() == pytest.approx([value(path.duration) for value in motion[:rung]])
    # what is controlled is linear in time, from the first value to the last
    control = motion[rung]
    assert control(0.0) == pytest.approx(path.first)
    assert control(0.5 * path.duration) == pytest.approx(0.5 * (path.first + path.last), abs=1e-12)
    assert control(path.duration) == pytest.approx(path.last, abs=1e-12)


@given(PATHS)
def test_arrays_give_the_numbers(path):
    times = path.duration * np.linspace(0.0, 1.0, 5)
    for value in (path.position, path.speed, path.acceleration):
        many = np.broadcast_to(value(times), times.shape)
        assert many == pytest.approx([value(float(time)) for time in times])
    assert math.isfinite(path.position(path.duration))
