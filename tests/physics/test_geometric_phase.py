# SPDX-License-Identifier: BSD-3-Clause
"""A wheel without momentum turns when the mass is carried round a loop, by a known angle.

The numbers are derived: the line integral of -m (ξ dη - η dξ) / (J + m (ξ² + η²)), the integral
of its curvature over the area and a simulation from Lagrange's equations agree on them. For the
background see T. R. Kane and M. P. Scher, "A dynamical explanation of the falling cat phenomenon"
(1969), R. Montgomery, "Isoholonomic problems and some applications" (1990), and E. Putterman and
O. Raz, "The square cat" (arXiv:0801.0926); the first two from memory.
"""

from __future__ import annotations

import math

import pytest

from rotorpump.physics.contacts import Action
from rotorpump.physics.equations import angular_momentum
from rotorpump.physics.simulation import Simulator
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

PIECES = 4


def weightless(inertia, mass):
    """A simulation without gravity and friction, and the numbers of its rig."""
    rig = Rig(Wheel(inertia), mass, Slide((0.0, 5.0)), AxleFriction(0.0), Slide((-5.0, 5.0)))
    simulator = Simulator.of(rig)
    return Simulator(simulator.constants._replace(gravity=0.0), simulator.rails)


def carry(simulator, state, speeds, accelerations, duration):
    """State after the mass is carried along a smooth piece of a path, from rest to rest."""
    actions = tuple(Action(acceleration=course) for course in accelerations)
    for axis, speed in zip(("radial", "tangential"), speeds, strict=True):
        state = simulator.set_speed(state, axis, speed)
    for piece in range(PIECES):
        edges = (duration * (piece + step) / PIECES for step in (0, 1))
        state = simulator.advance(*edges, actions, state)
    for axis in ("radial", "tangential"):
        state = simulator.set_speed(state, axis, 0.0)
    return state


def carry_round(simulator, state, radius, turned, phase, duration=0.7):
    """State after a piece of a circle, in the wheel's frame."""
    rate = turned / duration

    def along(time):
        return -radius * rate**2 * math.cos(phase + rate * time)

    def across(time):
        return -radius * rate**2 * math.sin(phase + rate * time)

    speeds = -radius * rate * math.sin(phase), radius * rate * math.cos(phase)
    return carry(simulator, state, speeds, (along, across), duration)


def carry_straight(simulator, state, way, duration=0.4):
    """State after a straight move by ``way``."""
    speeds = tuple(part / duration for part in way)
    return carry(simulator, state, speeds, (lambda _: 0.0, lambda _: 0.0), duration)


def circle_phase(inertia, mass, centre, radius):
    """Angle after a circle: -π [1 - (ρ₀² + c² - a²) / √((ρ₀² + a² + c²)² - 4 a² c²)], ρ₀² = J/m."""
    own = inertia / mass
    root = math.sqrt((own + radius**2 + centre**2) ** 2 - 4.0 * radius**2 * centre**2)
    return -math.pi * (1.0 - (own + centre**2 - radius**2) / root)


@pytest.mark.parametrize(
    ("inertia", "mass", "centre", "radius", "phase"),
    [
        (0.5, 2.0, 0.0, 0.3, -1.6631961107240),
        (0.5, 2.0, 0.25, 0.1, -0.1587601985468),
        (0.5, 2.0, 0.1, 0.3, -1.5927479793273),
        (1.0, 1.0, 0.5, 0.5, -0.9201511845106),
        (1.0, 1.0, 3.0, 0.1, -0.000629387867),
    ],
)
def test_circles(inertia, mass, centre, radius, phase):
    assert circle_phase(inertia, mass, centre, radius) == pytest.approx(phase, rel=1e-9)
    simulator = weightless(inertia, mass)
    start = [0.0, 0.0, centre + radius, 0.0, 0.0, 0.0]
    end = carry_round(simulator, start, radius, 2.0 * math.pi, 0.0)
    assert end == pytest.approx([phase, 0.0, centre + radius, 0.0, 0.0, 0.0], abs=1e-8)
    back = carry_round(simulator, start, radius, -2.0 * math.pi, 0.0)
    assert back[0] == pytest.approx(-phase, abs=1e-8)


def test_a_circle_round_the_axle():
    # -2π m a² / (J + m a²)
    expected = -2.0 * math.pi * 2.0 * 0.09 / (0.5 + 2.0 * 0.09)
    assert circle_phase(0.5, 2.0, 0.0, 0.3) == pytest.approx(expected, rel=1e-12)


def test_the_speed_on_the_way_does_not_matter():
    simulator, start = weightless(0.5, 2.0), [0.0, 0.0, 0.35, 0.0, 0.0, 0.0]
    for duration in (0.2, 3.0):
        end = carry_round(simulator, start, 0.1, 2.0 * math.pi, 0.0, duration)
        assert end[0] == pytest.approx(-0.1587601985468, abs=1e-8)


def test_a_sector():
    # -(f(r₁) - f(r₂)) Δα with f = m r² / (J + m r²); 1.2 rad between 0.4 m and 0.2 m
    def f(radius):
        return 2.0 * radius**2 / (0.5 + 2.0 * radius**2)

    expected = -(f(0.4) - f(0.2)) * 1.2
    assert expected == pytest.approx(-0.302775441547519, rel=1e-12)
    simulator = weightless(0.5, 2.0)
    state = carry_round(simulator, [0.0, 0.0, 0.4, 0.0, 0.0, 0.0], 0.4, 1.2, 0.0)
    inward = (-0.2 * math.cos(1.2), -0.2 * math.sin(1.2))
    state = carry_straight(simulator, state, inward)
    state = carry_round(simulator, state, 0.2, -1.2, 1.2)
    state = carry_straight(simulator, state, (0.2, 0.0))
    assert state == pytest.approx([expected, 0.0, 0.4, 0.0, 0.0, 0.0], abs=1e-8)


def test_an_arc_turns_the_wheel_back_by_its_share():
    # the wheel by -m r² / (J + m r²) Δα, the mass in fixed axes by J / (J + m r²) Δα (derived)
    simulator = weightless(0.5, 2.0)
    end = carry_round(simulator, [0.0, 0.0, 0.4, 0.0, 0.0, 0.0], 0.4, 0.5, 0.0)
    inertia = 0.5 + 2.0 * 0.16
    assert end[0] == pytest.approx(-0.5 * 0.32 / inertia, abs=1e-8)
    assert end[0] + 0.5 == pytest.approx(0.5 * 0.5 / inertia, abs=1e-8)


@pytest.mark.parametrize(("axis", "way"), [("tangential", (0.0, 0.3)), ("radial", (0.25, 0.0))])
def test_a_straight_shift_turns_the_wheel_as_a_leap_does(axis, way):
    # Δφ = -ρ s [atan(s τ)], s² = m / (J + m ρ²), and the same with the axes exchanged
    simulator, start = weightless(0.25, 1.2), [0.4, 0.0, 0.3, 0.0, -0.1, 0.0]
    end = carry_straight(simulator, start, way)
    moved, other = (start[4], start[2]) if axis == "tangential" else (start[2], start[4])
    pace = math.sqrt(1.2 / (0.25 + 1.2 * other**2))
    sweep = math.atan(pace * (moved + max(way))) - math.atan(pace * moved)
    turned = (-other if axis == "tangential" else other) * pace * sweep
    assert abs(turned) > 0.05
    assert end[0] - 0.4 == pytest.approx(turned, abs=1e-8)
    leapt = simulator.set_place(start, axis, moved + max(way))
    assert leapt == pytest.approx(end, abs=1e-8)


def test_momentum_stays_zero_on_the_way():
    simulator = weightless(0.5, 2.0)
    actions = Action(acceleration=lambda t: math.sin(9.0 * t)), Action(acceleration=math.cos)
    state = simulator.advance(0.0, 0.8, actions, [0.0, 0.0, 0.3, 0.0, 0.1, 0.0])
    slides = Slides(*state[2:])
    assert angular_momentum(simulator.constants, state[1], slides) == pytest.approx(0.0, abs=1e-9)
    assert abs(state[1]) > 0.01
