# SPDX-License-Identifier: BSD-3-Clause
"""Closed forms of the instantaneous law, met by the event simulation.

Growth per half swing without friction, 1 - cos θ₁ = κ (1 - cos θ₀) with κ = I₁ρ₁/(I₂ρ₂): Tea &
Falk, Am. J. Phys. 36 (1968) 1165; Burns, Am. J. Phys. 38 (1970) 920; Curry, Am. J. Phys. 44
(1976) 924; Wirkus, Rand & Ruina, Coll. Math. J. 29 (1998) 266-275 (citations from memory). The
other forms, and all numbers, are derived for rotorpump and computed from the closed forms.
"""

from __future__ import annotations

import math
from itertools import islice, pairwise

import numpy as np
import pytest
from scipy.optimize import brentq

from rotorpump.laws.hybrid import march
from rotorpump.laws.moves import Instant
from rotorpump.laws.pointwise import landmark_rule, pointwise_rule
from rotorpump.laws.stretch import End, Stretch
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

GRAVITY = 9.81


def constants_of(inertia, mass, stroke, viscous=0.0, coulomb=0.0, gravity=GRAVITY):
    friction = AxleFriction(viscous, coulomb)
    return Constants.of(Rig(Wheel(inertia), mass, Slide(stroke), friction, gravity=gravity))


def wheel(viscous=0.0, coulomb=0.0):
    """I₀ = 0.5 kg m2, m = 2 kg, ρ = 0.4/0.2 m."""
    return constants_of(0.5, 2.0, (0.2, 0.4), viscous, coulomb)


def point_mass():
    """A pendulum of 1.1/0.9 m; a wheel inertia of 1e-12 kg m2 changes 12th digits alone."""
    return constants_of(1e-12, 1.0, (0.9, 1.1))


def outside(constants):
    return Slides(constants.radial_high)


def swing_from(constants, angle, rule=None) -> list[Stretch]:
    """Stretches from rest outside up to the next turning point, or the top."""
    law = rule or pointwise_rule(constants)
    stretches = []
    for stretch in march(constants, law, Instant(0.0, angle, 0.0, outside(constants))):
        stretches.append(stretch)
        if stretch.end in (End.TURN, End.TOP, End.STUCK):
            return stretches
    raise AssertionError("the swing did not end")


def amplitude_after(constants, angle, rule=None) -> float:
    last = swing_from(constants, angle, rule)[-1]
    assert last.end is End.TURN
    return abs(last.last.angle)


@pytest.mark.parametrize(
    ("constants", "start", "after"),
    [
        (point_mass(), 20.0, 27.1403883578),
        (point_mass(), 60.0, 85.0028825472),
        (point_mass(), 80.0, 120.5801952019),
        (wheel(), 10.0, 16.8548011947),
        (wheel(), 40.0, 70.2162843080),
        (wheel(), 60.0, 114.4433354277),
    ],
)
def test_growth_per_half_swing(constants, start, after):
    # Tea & Falk 1968, in the exact form; degrees.
    grown = math.degrees(amplitude_after(constants, math.radians(start)))
    assert grown == pytest.approx(after, abs=1e-7)


def test_times_of_one_half_swing():
    # sqrt(l1/g) K(sin θ0/2) and sqrt(l2/g) K(sin θ1/2) for 1.1/0.9 m from 60 degrees.
    falling, rising = swing_from(point_mass(), math.pi / 3.0)
    assert falling.time[-1] == pytest.approx(0.564488500, abs=1e-8)
    assert rising.time[-1] - rising.time[0] == pytest.approx(0.550909576, abs=1e-8)


def test_chain_of_swings_up_to_the_first_turn():
    # Angles [deg] and times [s] of the turning points from 10 degrees, 1.1/0.9 m; the ninth half
    # swing passes over the top: ceil(ln(2/(1 - cos θ0)) / ln κ) = 9.
    angles = [13.526421, 18.312569, 24.832991, 33.779865, 46.229602, 64.072247, 91.575002]
    angles.append(151.160158)
    times = [1.004441, 2.011111, 3.021911, 4.040476, 5.074025, 6.138128, 7.273609, 8.748013]
    constants = point_mass()
    start = Instant(0.0, math.radians(10.0), 0.0, outside(constants))
    motion = list(islice(march(constants, pointwise_rule(constants), start), 18))
    ends = [stretch.end for stretch in motion]
    assert ends == [End.BOTTOM, End.TURN] * 8 + [End.BOTTOM, End.TOP]
    turns = [stretch.last for stretch in motion if stretch.end is End.TURN]
    assert np.degrees([abs(turn.angle) for turn in turns]) == pytest.approx(angles, abs=1e-6)
    assert [turn.time for turn in turns] == pytest.approx(times, abs=1e-6)


def test_gain_per_full_turn():
    # 2 m g (ρ₁ - ρ₂ I₂/I₁) in the far state at the top; derived. J.
    constants = wheel()
    start = Instant(0.0, 0.0, 10.0, outside(constants))
    motion = islice(march(constants, pointwise_rule(constants), start), 8)
    tops = [stretch.last.momentum for stretch in motion if stretch.end is End.TOP]
    energies = [momentum**2 / (2.0 * (0.5 + 2.0 * 0.4**2)) for momentum in tops]
    assert np.diff(energies) == pytest.approx([10.144975609756] * 3, abs=1e-7)


def test_work_of_the_drive_in_a_half_swing():
    # ½ H²(1/I₂ - 1/I₁) + m g (ρ₁ - ρ₂)(1 - cos θ₁) = m g ρ₁ (cos θ₀ - cos θ₁); derived. J.
    constants = wheel()
    falling, rising = swing_from(constants, math.pi / 6.0)
    inward = rising.first.energy(constants) - falling.last.energy(constants)
    turn = rising.last
    released = Instant(turn.time, turn.angle, 0.0, outside(constants))
    outward = released.energy(constants) - turn.energy(constants)
    assert inward + outward == pytest.approx(1.92158377407881, abs=1e-8)


@pytest.mark.parametrize(("start", "after"), [(20.0, 25.65264116), (60.0, 99.65034447)])
def test_coulomb_growth_with_moves_at_the_landmarks(start, after):
    # (I₁/I₂)(S₁g(1 - cos θ₀) - c θ₀) = S₂g(1 - cos θ₁) + c θ₁, S = m ρ, c = 0.3 N m; derived. deg.
    constants = wheel(coulomb=0.3)
    grown = amplitude_after(constants, math.radians(start), landmark_rule(constants))
    assert math.degrees(grown) == pytest.approx(after, abs=1e-7)
    # The pointwise rule comes in before the lowest point and gains a little more.
    better = math.degrees(amplitude_after(constants, math.radians(start)))
    assert after + 1e-3 < better < after + 1.0


@pytest.mark.parametrize("start", [0.4, 1.0])
def test_coulomb_growth_of_the_pointwise_rule(start):
    # With the inward move at sin α = c (I₁ - I₂)/(g (S₁I₁ - S₂I₂)) before the lowest point, the
    # balance of H²/2 is I₁(S₁g(cos α - cos θ₀) - c(θ₀ - α)) + I₂(S₂g(1 - cos α) - c α)
    # = I₂(S₂g(1 - cos θ₁) + c θ₁); derived.
    dry, far, near = 0.3, 0.5 + 2.0 * 0.4**2, 0.5 + 2.0 * 0.2**2
    pull, weak = 2.0 * GRAVITY * 0.4, 2.0 * GRAVITY * 0.2
    early = math.asin(dry * (far - near) / (pull * far - weak * near))
    fall = far * (pull * (math.cos(early) - math.cos(start)) - dry * (start - early))
    fall += near * (weak * (1.0 - math.cos(early)) - dry * early)
    after = brentq(
        lambda end: near * (weak * (1.0 - math.cos(end)) + dry * end) - fall, 0.0, math.pi
    )
    assert amplitude_after(wheel(coulomb=dry), start) == pytest.approx(after, abs=1e-9)


def test_coulomb_threshold_of_growth():
    # (1 - cos T)/T = c (I₁ + I₂)/(g (S₁I₁ - S₂I₂)), c = 0.3 N m: T = 11.61057484 deg; derived.
    threshold = math.radians(11.61057484)
    constants = wheel(coulomb=0.3)
    after = amplitude_after(constants, threshold, landmark_rule(constants))
    assert after == pytest.approx(threshold, abs=1e-9)


@pytest.mark.parametrize(
    ("constants", "factor"),
    [
        (wheel(viscous=0.5), 1.1256941857590),
        (wheel(viscous=0.6520261038547684), 1.0),
        # The critical friction of J = 0.25 kg m2, m = 1.2 kg, ρ = 0.4/0.2 m.
        (constants_of(0.25, 1.2, (0.2, 0.4), 0.38348770, gravity=9.80665), 1.0),
    ],
)
def test_viscous_growth_of_small_swings(constants, factor):
    # sqrt(κ) exp(-[ζ₁/√(1-ζ₁²)(π/2 + asin ζ₁) + ζ₂/√(1-ζ₂²)(π/2 - asin ζ₂)]); derived.
    start = 3e-4
    assert amplitude_after(constants, start) / start == pytest.approx(factor, abs=2e-7)


def test_momentum_stays_in_every_jump():
    # Motions of the law: the angle and the angular momentum go on, the position jumps.
    constants = wheel(viscous=0.1)
    start = Instant(0.0, 1.0, 0.0, outside(constants))
    motion = list(march(constants, pointwise_rule(constants), start, 6.0))
    jumps = [(a, b) for a, b in pairwise(motion) if a.slides != b.slides]
    assert len(jumps) > 5
    for before, after in jumps:
        assert after.first.momentum == before.last.momentum
        assert after.first.angle == before.last.angle
