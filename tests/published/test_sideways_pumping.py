# SPDX-License-Identifier: BSD-3-Clause
"""Closed forms of a mass that jumps sideways.

Turning of the wheel at no momentum: derived for rotorpump. Published under the name of geometric
phase: Kane & Scher 1969, Montgomery 1990 (from memory); the closed loop in the plane is that of
Putterman & Raz, arXiv:0801.0926. Linear growth of swings: Case & Swanson, Am. J. Phys. 58 (1990)
463; Case, Am. J. Phys. 64 (1996) 215 (from memory).
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.integrate import dblquad, quad

from rotorpump.laws.hybrid import march
from rotorpump.laws.moves import Instant, jump, placed
from rotorpump.laws.pointwise import pointwise_rule
from rotorpump.laws.stretch import End
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

INERTIA, MASS, ARM = 0.5, 2.0, 0.35


def constants_of(radial, tangential, **friction) -> Constants:
    axle = AxleFriction(**({"viscous": 0.0} | friction))
    return Constants.of(Rig(Wheel(INERTIA), MASS, radial, axle, tangential, gravity=9.81))


def turned(constants, slides, axis, end) -> float:
    return jump(constants, Instant(0.0, 0.0, 0.0, slides), axis, end).angle


@pytest.mark.parametrize(("begin", "end"), [(0.0, 0.1), (-0.2, 0.2), (0.15, -0.05)])
def test_shift_at_standstill(begin, end):
    # dφ = -m ρ dτ / (J + m (ρ² + τ²)) along the tangential axis, by quadrature.
    constants = constants_of(ARM, Slide(stroke=(-0.2, 0.2)))
    shift = turned(constants, Slides(ARM, 0.0, begin), "tangential", end)
    reach = INERTIA + MASS * ARM**2
    expected, _ = quad(lambda tau: -MASS * ARM / (reach + MASS * tau**2), begin, end)
    assert shift == pytest.approx(expected, rel=1e-12)


def test_small_shift_moves_mass_and_wheel_against_each_other():
    # Along an arc δα the wheel turns by -m ρ²/(J + m ρ²) δα, the mass by J/(J + m ρ²) δα.
    constants = constants_of(ARM, Slide(stroke=(-0.2, 0.2)))
    arc = 1e-4
    shift = turned(constants, Slides(ARM), "tangential", ARM * arc)
    total = INERTIA + MASS * ARM**2
    assert shift / arc == pytest.approx(-MASS * ARM**2 / total, rel=1e-7)
    assert (shift + arc) / arc == pytest.approx(INERTIA / total, rel=1e-7)


def test_jumps_round_a_rectangle():
    # Around a loop the wheel turns by -∫ 2 ρ₀²/(ρ₀² + ρ² + τ²)² dA with ρ₀² = J/m (derived).
    constants = constants_of(Slide(stroke=(0.2, 0.4)), Slide(stroke=(-0.1, 0.15)))
    now = Instant(0.0, 0.0, 0.0, Slides(0.2, 0.0, -0.1))
    for axis, end in (("radial", 0.4), ("tangential", 0.15), ("radial", 0.2), ("tangential", -0.1)):
        now = jump(constants, now, axis, end)
    square = INERTIA / MASS
    area, _ = dblquad(
        lambda tau, rho: 2.0 * square / (square + rho**2 + tau**2) ** 2, 0.2, 0.4, -0.1, 0.15
    )
    assert now.angle == pytest.approx(-area, rel=1e-10)


def test_linear_growth_of_small_swings():
    # Every extreme adds the same, 2 (τ/ρ) J/(J + m ρ²), whatever the amplitude.
    offset = 1e-4 * ARM
    constants = constants_of(ARM, Slide(stroke=(-offset, offset)))
    middle = Slides(ARM)
    amplitudes = []
    for stretch in march(
        constants, pointwise_rule(constants), Instant(0.0, 2e-3, 0.0, middle), 12.0
    ):
        if stretch.end is End.TURN:
            # at the same place of the mass the extremes can be compared
            amplitudes.append(abs(placed(constants, stretch.last, middle).angle))
    gains = np.diff([2e-3, *amplitudes])
    gain = 2.0 * (offset / ARM) * INERTIA / (INERTIA + MASS * ARM**2)
    assert gains.size >= 10
    assert gains == pytest.approx(gain, rel=1e-4)


@pytest.mark.parametrize("coulomb", [0.0, 0.2])
def test_first_swing_from_the_hanging_position(coulomb):
    # The jump turns the wheel by ν = ρ q atan(q τ); from rest there, with the mass at -τ, the
    # weight and friction do no net work: m g [ρ (cos φ - cos ν) + τ (sin φ - sin ν)] = c (φ - ν).
    offset = 0.1
    constants = constants_of(ARM, Slide(stroke=(-offset, offset)), coulomb=coulomb)
    scale = math.sqrt(MASS / (INERTIA + MASS * ARM**2))
    shift = ARM * scale * math.atan(scale * offset)
    motion = march(constants, pointwise_rule(constants), Instant(0.0, 0.0, 0.0, Slides(ARM)))
    first = next(motion)
    assert first.slides.tangential == -offset
    assert first.first.angle == pytest.approx(shift, rel=1e-12)
    while first.end is not End.TURN:
        first = next(motion)
    assert first.slides.tangential == -offset
    end = first.last.angle
    weight = MASS * 9.81
    work = weight * ARM * (math.cos(end) - math.cos(shift))
    work += weight * offset * (math.sin(end) - math.sin(shift))
    assert end > shift
    assert work == pytest.approx(coulomb * (end - shift), abs=1e-9)
