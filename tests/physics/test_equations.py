# SPDX-License-Identifier: BSD-3-Clause
"""The two forms of the equations agree with each other, with the power balance and with Newton."""

from __future__ import annotations

import math

import casadi
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.laws.hybrid import march
from rotorpump.laws.pointwise import pointwise_preference
from rotorpump.laws.stretch import Instant
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import (
    accelerations,
    contact_force,
    momentum_rate,
    total_inertia,
    wheel_speed,
)
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.loads import axle_load

RIG = Constants(0.25, 1.2, 9.80665, 0.05, 0.1, 0.02, 0.2, 0.4)
WHEEL_MASS = 3.0
STEP = 1e-4


def between(low, high):
    return st.floats(low, high, allow_nan=False)


STATES = st.tuples(
    between(-7.0, 7.0),
    st.one_of(between(-12.0, -0.05), between(0.05, 12.0)),
    between(0.2, 0.4),
    between(-2.0, 2.0),
    between(-80.0, 80.0),
)
"""Angle, wheel speed, position and speed of the mass, force on it."""


def rates(state):
    angle, speed, radial, slide, force = state
    return accelerations(np, RIG, angle, speed, radial, slide, force, np.sign(speed))


def energy(angle, speed, radial, slide):
    moving = RIG.mass * (slide**2 + radial**2 * speed**2) + RIG.wheel_inertia * speed**2
    return 0.5 * moving - RIG.mass * RIG.gravity * radial * math.cos(angle)


@given(STATES)
def test_both_forms_give_the_same_acceleration(state):
    # H = I ω, so Ḣ = I φ̈ + 2 m ρ vρ ω.
    angle, speed, radial, slide, _ = state
    wheel, _ = rates(state)
    rate = momentum_rate(np, RIG, angle, speed, radial, np.sign(speed))
    inertia = total_inertia(RIG, radial)
    from_momentum = (rate - 2.0 * RIG.mass * radial * slide * speed) / inertia
    assert from_momentum == pytest.approx(wheel, rel=1e-9, abs=1e-9)
    assert wheel_speed(RIG, inertia * speed, radial) == pytest.approx(speed, rel=1e-12)


@given(STATES)
def test_contact_force_gives_the_acceleration_it_was_made_for(state):
    angle, speed, radial, _, force = state
    _, mass = rates(state)
    back = contact_force(np, RIG, angle, speed, radial, mass)
    assert back == pytest.approx(force, rel=1e-9, abs=1e-9)


@given(STATES)
def test_power_balance(state):
    # d/dt(½Jω² + ½m|v|² + m g y) = Fρ vρ + Q ω, the left side by central differences.
    angle, speed, radial, slide, force = state
    wheel, mass = rates(state)

    def after(time):
        return energy(
            angle + speed * time + 0.5 * wheel * time**2,
            speed + wheel * time,
            radial + slide * time + 0.5 * mass * time**2,
            slide + mass * time,
        )

    power = (after(STEP) - after(-STEP)) / (2.0 * STEP)
    friction = friction_torque(RIG, speed, np.sign(speed))
    assert power == pytest.approx(force * slide + friction * speed, rel=1e-4, abs=2e-3)


@given(STATES)
def test_axle_carries_what_newton_asks(state):
    # Reaction = m a - (m + M) gravity for the moving mass and a balanced wheel, in fixed axes.
    angle, speed, radial, slide, force = state
    wheel, mass = rates(state)
    along = np.array([math.sin(angle), -math.cos(angle)])
    across = np.array([math.cos(angle), math.sin(angle)])
    acceleration = (mass - radial * speed**2) * along
    acceleration += (radial * wheel + 2.0 * slide * speed) * across
    weight = np.array([0.0, -(RIG.mass + WHEEL_MASS) * RIG.gravity])
    reaction = RIG.mass * acceleration - weight
    load = axle_load(np, RIG, WHEEL_MASS, angle, speed, radial, slide, force, wheel)
    assert load == pytest.approx(np.hypot(*reaction), rel=1e-9, abs=1e-9)


def test_symbols_give_the_numbers():
    state = (0.7, -3.0, 0.3, 0.4, -12.0)
    symbols = casadi.SX.sym("x", 5)
    angle, speed, radial, slide, force = casadi.vertsplit(symbols)
    wheel, mass = accelerations(casadi, RIG, angle, speed, radial, slide, force, -1.0)
    load = axle_load(casadi, RIG, WHEEL_MASS, angle, speed, radial, slide, force, wheel)
    function = casadi.Function("f", [symbols], [casadi.vertcat(wheel, mass, load)])
    expected = [*rates(state), axle_load(np, RIG, WHEEL_MASS, *state, rates(state)[0])]
    assert np.array(function(state)).ravel() == pytest.approx(expected, rel=1e-13)


@pytest.mark.parametrize("momentum", [2.0, -2.0])
def test_jump_keeps_angle_and_momentum(momentum):
    # A rising mass that starts outside jumps inside: ω₊ = ω₋ I₋/I₊.
    start = Instant(0.0, math.copysign(0.3, momentum), momentum, RIG.outer)
    first = next(march(RIG, pointwise_preference(RIG), start, 0.1)).first
    assert first.radial == RIG.inner
    assert (first.time, first.angle, first.momentum) == (0.0, start.angle, momentum)
    ratio = total_inertia(RIG, RIG.outer) / total_inertia(RIG, RIG.inner)
    assert first.pace(RIG) == pytest.approx(start.pace(RIG) * ratio, rel=1e-14)
