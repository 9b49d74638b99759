# SPDX-License-Identifier: BSD-3-Clause
"""What a motion asks of its drives, against closed forms."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import PLACES, example_rig

from rotorpump.physics.state import Slides
from rotorpump.rig.slide import Slide
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.usage import drive_uses, total_effort

SLIDE = Slide(stroke=(0.0, 1.0), motor_constant=5.0)
RIG = example_rig(radial=SLIDE)
BOTH = example_rig(radial=SLIDE, tangential=replace(SLIDE, motor_constant=2.0))


def made(force, pace, duration=2.0, *, pieces=40, rig=RIG, aside=(0.0, 0.0)):
    """A trajectory of these functions of time; its nodes start a new interval at each edge."""
    edges = np.linspace(0.0, duration, pieces + 1)
    time = np.append(0.0, (edges[:-1, None] + np.diff(edges)[:, None] * PLACES).ravel())
    forces, paces = (np.array([of(t) for t in time]) for of in (force, pace))
    slides = Slides(0.5, paces, 0.0, aside[1])
    breaks = 3 * np.arange(pieces + 1)
    return trajectory_of(rig, time, 0.2, 1.0, slides, (forces, aside[0]), breaks, breaks[[0, -1]])


def steady(value):
    return lambda _: value


def test_a_constant_force_at_a_constant_speed():
    (use,) = drive_uses(RIG, made(steady(-20.0), steady(-0.3)))
    assert use.axis == "radial"
    assert use.peak_force == pytest.approx(20.0)
    assert use.rms_force == pytest.approx(20.0)
    assert use.peak_power == pytest.approx(6.0)
    # 6 W, and (20 / 5)² W, for 2 s
    assert use.work == pytest.approx(12.0)
    assert use.heat == pytest.approx(32.0)


def test_a_drive_that_brakes_does_no_work():
    (use,) = drive_uses(RIG, made(steady(20.0), steady(-0.3)))
    assert use.work == 0.0
    assert use.peak_power == pytest.approx(6.0)


def test_a_sine_against_a_steady_speed():
    # whole periods: root mean square 10/√2 N; half of the time the power is positive
    (use,) = drive_uses(RIG, made(lambda t: 10.0 * math.sin(math.pi * t), steady(0.3)))
    assert use.peak_force == pytest.approx(10.0, rel=1e-5)
    assert use.rms_force == pytest.approx(10.0 / math.sqrt(2.0), rel=1e-5)
    assert use.peak_power == pytest.approx(3.0, rel=1e-5)
    assert use.work == pytest.approx(3.0 * 2.0 / math.pi, rel=1e-5)
    assert use.heat == pytest.approx(4.0, rel=1e-5)


def test_a_sign_that_changes_within_an_interval():
    # 10 (1 - t) N at 0.3 m/s in one interval: 3 W · 1 s / 2 before, the same taken out after it
    (use,) = drive_uses(RIG, made(lambda t: 10.0 * (1.0 - t), steady(0.3), pieces=1))
    assert use.work == pytest.approx(1.5, rel=1e-3)


def test_peaks_stand_at_the_ends_of_intervals():
    ramp = made(lambda t: 5.0 * t, steady(0.3), pieces=1)
    assert drive_uses(RIG, ramp)[0].peak_force == pytest.approx(10.0)
    assert drive_uses(RIG, ramp)[0].peak_power == pytest.approx(3.0)
    fall = made(lambda t: 10.0 - 5.0 * t, steady(0.3), pieces=1)
    assert drive_uses(RIG, fall)[0].peak_force == pytest.approx(10.0)


def test_a_jump_of_the_force_counts_once_on_each_side():
    # nodes after 1 s, the break, belong to the second interval
    (use,) = drive_uses(RIG, made(lambda t: -8.0 if t > 1.0 else 4.0, steady(0.3), pieces=2))
    assert use.peak_force == pytest.approx(8.0)
    assert use.rms_force == pytest.approx(math.sqrt((16.0 + 64.0) / 2.0))
    assert use.work == pytest.approx(4.0 * 0.3 * 1.0)


def test_each_drive_has_its_own_use():
    motion = made(steady(20.0), steady(0.3), rig=BOTH, aside=(-6.0, 0.1))
    radial, tangential = drive_uses(BOTH, motion)
    assert (radial.axis, tangential.axis) == ("radial", "tangential")
    assert (radial.work, tangential.work) == pytest.approx((12.0, 0.0))
    assert (radial.heat, tangential.heat) == pytest.approx((32.0, 18.0))
    assert total_effort(BOTH, motion, "work") == pytest.approx(12.0)
    assert total_effort(BOTH, motion, "heat") == pytest.approx(50.0)
    assert total_effort(BOTH, motion, "work+heat") == pytest.approx(62.0)


def test_heat_is_unknown_without_a_motor_constant():
    rig = example_rig(radial=replace(SLIDE, motor_constant=None))
    assert math.isnan(drive_uses(rig, made(steady(20.0), steady(0.3)))[0].heat)


def test_a_motion_without_duration_asks_for_nothing():
    rig = example_rig(radial=SLIDE)
    point = trajectory_of(rig, [0.0, 0.0], 0.2, 0.0, Slides(0.5), (9.0, 0.0), [0, 1], [0, 1])
    (use,) = drive_uses(rig, point)
    asked = (use.peak_force, use.rms_force, use.peak_power, use.work, use.heat)
    assert asked == (0.0, 0.0, 0.0, 0.0, 0.0)
