# SPDX-License-Identifier: BSD-3-Clause
"""The simulation with the mass held against the exact pendulum, g = 9.81 m/s2."""

from __future__ import annotations

import math
from itertools import islice

import pytest

from rotorpump.laws.hybrid import march
from rotorpump.laws.moves import Instant
from rotorpump.laws.pointwise import Urge
from rotorpump.laws.stretch import End
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel


def constants_of(inertia, mass, inner, outer, gravity=9.81):
    slide = Slide(stroke=(inner, outer))
    return Constants.of(Rig(Wheel(inertia), mass, slide, AxleFriction(0.0), gravity=gravity))


WHEEL = constants_of(0.5, 2.0, 0.2, 0.4)
POINT = constants_of(1e-13, 1.0, 0.5, 1.0)


def hold_outside(axis, slides):
    """Never wants the inner end."""
    return {0.2: Urge(0.0, 0.0, 1.0)}


def outside(constants):
    return Slides(constants.radial_high)


def inertia_outside(constants):
    return constants.wheel_inertia + constants.mass * constants.radial_high**2


def frequency(constants):
    pull = constants.mass * constants.gravity * constants.radial_high
    return math.sqrt(pull / inertia_outside(constants))


def first_end(constants, speed):
    start = Instant(0.0, 0.0, inertia_outside(constants) * speed, outside(constants))
    return next(march(constants, hold_outside, start))


@pytest.mark.parametrize(
    ("degrees", "ratio"),
    [
        # T/T₀ = (2/π) K(sin α/2) = 1/AGM(1, cos α/2), computed; the page "pendulum period" of
        # calculatorlib tabulates the same from 5 to 175 degrees with 6 decimals.
        (10.0, 1.00190718814322),
        (45.0, 1.0399733431968),
        (90.0, 1.1803405990161),
        (120.0, 1.37288050061835),
        (150.0, 1.76220372950376),
        (170.0, 2.43936271967388),
        (175.0, 2.87766351234782),
        (179.0, 3.90106516038909),
    ],
)
@pytest.mark.parametrize("constants", [WHEEL, POINT])
def test_period_of_large_swings(constants, degrees, ratio):
    start = Instant(0.0, math.radians(degrees), 0.0, outside(constants))
    motion = list(islice(march(constants, hold_outside, start), 4))
    assert [s.end for s in motion] == [End.BOTTOM, End.TURN, End.BOTTOM, End.TURN]
    period = motion[-1].time[-1] * frequency(constants) / (2.0 * math.pi)
    assert period == pytest.approx(ratio, rel=1e-8)
    assert motion[-1].angle[-1] == pytest.approx(math.radians(degrees), abs=1e-8)


@pytest.mark.parametrize(
    ("ratio", "turn"),
    [
        # ω₀ T = 2 k K(k) with k = 2 ω₀/ω_bottom, computed; by ω_bottom/(2 ω₀).
        (1.01, 6.6563527131339),
        (1.1, 4.2216800668657),
        (1.5, 2.4128899939821),
        (2.0, 1.6857503548126),
        (5.0, 0.63474713898167),
    ],
)
def test_period_of_rotation(ratio, turn):
    pace = frequency(WHEEL)
    start = Instant(0.0, 0.0, 2.0 * ratio * pace * inertia_outside(WHEEL), outside(WHEEL))
    motion = list(islice(march(WHEEL, hold_outside, start), 2))
    assert [s.end for s in motion] == [End.TOP, End.BOTTOM]
    assert motion[-1].time[-1] * pace == pytest.approx(turn, rel=1e-8)


def test_speed_at_the_separatrix():
    # 2 sqrt(g/l) for a point mass at 1 m: 6.26418390535 rad/s, computed.
    assert first_end(POINT, 6.26418390535 * (1.0 - 1e-8)).end is End.TURN
    assert first_end(POINT, 6.26418390535 * (1.0 + 1e-8)).end is End.TOP


def test_angle_within_a_swing():
    # φ = 2 asin(k sn(ω₀ t, k)) for an amplitude of 1.2 rad, ω₀ = 1 rad/s and t = 3 s from the
    # lowest point: 0.491539969148 rad, computed.
    slow = constants_of(1e-13, 1.0, 0.5, 1.0, gravity=1.0)
    speed = 2.0 * math.sin(0.6)
    motion = list(march(slow, hold_outside, Instant(0.0, 0.0, speed, outside(slow)), 3.0))
    assert motion[-1].time[-1] == pytest.approx(3.0, abs=1e-12)
    assert motion[-1].angle[-1] == pytest.approx(0.491539969148, abs=1e-8)
