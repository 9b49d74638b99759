# SPDX-License-Identifier: BSD-3-Clause
"""Both forms of the equations agree with each other, with Lagrange and with the power balance."""

from __future__ import annotations

import math
from functools import cache

import casadi
import numpy as np
import pytest
import sympy
from hypothesis import given
from hypothesis import strategies as st

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import (
    angular_momentum,
    momentum_rate,
    motion_along,
    wheel_speed,
)
from rotorpump.physics.forces import accelerations, standing_torque
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.state import Push, Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

RIG = Constants.of(
    Rig(
        wheel=Wheel(inertia=0.25, mass=3.0, unbalance=0.15, unbalance_angle=0.9),
        mass=1.2,
        radial=Slide((0.2, 0.4)),
        tangential=Slide((-0.3, 0.3)),
        friction=AxleFriction(0.05, 0.1, 0.02, 0.3, 0.02),
    ),
    load_torque=0.07,
)
STEP = 1e-4


def between(low, high):
    return st.floats(low, high, allow_nan=False)


STATES = st.tuples(
    between(-7.0, 7.0),
    st.one_of(between(-12.0, -0.05), between(0.05, 12.0)),
    between(0.2, 0.4),
    between(-2.0, 2.0),
    between(-0.3, 0.3),
    between(-2.0, 2.0),
)
"""Angle, wheel speed, place and speed of the mass along both axes."""

GIVEN = st.tuples(between(-80.0, 80.0), between(-80.0, 80.0))
"""Forces [N], or accelerations [m/s2] where they are enforced, along both axes."""

HELD = st.tuples(st.booleans(), st.booleans())


def pushes_of(given_values, held):
    return [
        Push(held=True, acceleration=value) if holds else Push(value)
        for value, holds in zip(given_values, held, strict=True)
    ]


def motion_of(state, given_values, held=(False, False)):
    angle, speed, *slides = state
    pushes = pushes_of(given_values, held)
    return accelerations(math, RIG, angle, speed, Slides(*slides), *pushes, np.sign(speed))


@cache
def lagrangian():
    """Mass matrix and remainder of Lagrange's equations, and the momentum of all masses.

    Derived from the places of the masses alone: the moving one at ρ e_ρ + τ e_τ, the unbalance as
    a mass moment u. The second rates of the momentum are those that the axle has to bring about.
    """
    time = sympy.Symbol("t")
    names = "inertia mass gravity along across"
    inertia, mass, gravity, along, across = sympy.symbols(names)
    angle, radial, aside = (sympy.Function(name)(time) for name in ("a", "r", "s"))
    outward = sympy.Matrix([sympy.sin(angle), -sympy.cos(angle)])
    sideways = sympy.Matrix([sympy.cos(angle), sympy.sin(angle)])
    place = radial * outward + aside * sideways
    moment = along * outward + across * sideways
    velocity = place.diff(time)
    kinetic = inertia * angle.diff(time) ** 2 / 2 + mass * velocity.dot(velocity) / 2
    potential = gravity * (mass * place[1] + moment[1])
    coordinates = (angle, radial, aside)
    equations = [
        (kinetic - potential).diff(q.diff(time)).diff(time) - (kinetic - potential).diff(q)
        for q in coordinates
    ]
    lift = (mass * place + moment).diff(time, 2)
    second, first, zeroth = (sympy.symbols(f"{letter}0:3") for letter in "avq")
    plain = [
        (q.diff(time, order), symbol)
        for order, symbols in ((2, second), (1, first), (0, zeroth))
        for q, symbol in zip(coordinates, symbols, strict=True)
    ]
    equations = sympy.Matrix(equations).subs(plain)
    lift = lift.subs(plain)
    still = dict.fromkeys(second, 0)
    parts = [equations.jacobian(second), equations.subs(still), lift.jacobian(second)]
    arguments = (*zeroth, *first, inertia, mass, gravity, along, across)
    return sympy.lambdify(arguments, [*parts, lift.subs(still)], "numpy")


def by_lagrange(state, given_values, held):
    """Accelerations, forces on the mass, and axle load, friction at the load included."""
    angle, speed, radial, slide, aside, sideways = state
    c = RIG
    masses, rest, lift, lift_rest = lagrangian()(
        *(angle, radial, aside, speed, slide, sideways),
        *(c.wheel_inertia, c.mass, c.gravity, c.unbalance_radial, c.unbalance_tangential),
    )
    way = math.copysign(1.0, speed)
    weight = np.array([0.0, (c.mass + c.wheel_mass) * c.gravity])
    load, change = 0.0, 1.0
    while change > 1e-13:
        torque = -way * (c.coulomb + c.load_arm * load + c.load_torque)
        torque -= c.viscous * speed + c.quadratic * abs(speed) * speed
        # unknown are the acceleration where a force is given, and the force where it is not
        system, right = masses.astype(float).copy(), np.array([torque, 0.0, 0.0]) - rest.ravel()
        for row, (value, holds) in enumerate(zip(given_values, held, strict=True), start=1):
            if holds:
                right -= masses[:, row] * value
                system[:, row] = -np.eye(3)[row]
            else:
                right[row] += value
        found = np.linalg.solve(system, right)
        pairs = zip(given_values, held, found[1:], strict=True)
        moved = [(value, other) if holds else (other, value) for value, holds, other in pairs]
        second = np.array([found[0], moved[0][0], moved[1][0]])
        reaction = lift @ second + lift_rest.ravel() + weight
        change = abs(np.hypot(*reaction) - load) / np.hypot(*weight)
        load = np.hypot(*reaction)
    return [*second, moved[0][1], moved[1][1], load]


@given(STATES, GIVEN, HELD)
def test_force_form_agrees_with_lagrange(state, given_values, held):
    expected = by_lagrange(state, given_values, held)
    assert motion_of(state, given_values, held) == pytest.approx(expected, rel=1e-9, abs=1e-9)


@given(STATES, GIVEN, HELD)
def test_momentum_form_agrees_with_the_force_form(state, given_values, held):
    angle, speed, *slides = state
    motion = motion_of(state, given_values, held)
    places = Slides(*slides)
    rate, along = motion_along(
        math, RIG, angle, speed, places, motion.radial, motion.tangential, np.sign(speed)
    )
    assert along == pytest.approx(motion, rel=1e-9, abs=1e-9)
    load = motion.axle_load
    expected = momentum_rate(math, RIG, angle, speed, places, np.sign(speed), load)
    assert rate == pytest.approx(expected, rel=1e-9, abs=1e-9)
    momentum = angular_momentum(RIG, speed, places)
    assert wheel_speed(RIG, momentum, places) == pytest.approx(speed, rel=1e-12)


@given(STATES, GIVEN)
def test_rate_of_the_momentum(state, given_values):
    motion = motion_of(state, given_values)
    rate = momentum_rate(
        math, RIG, *state[:2], Slides(*state[2:]), np.sign(state[1]), motion.axle_load
    )
    ahead, behind = (angular_momentum(RIG, s[1], Slides(*s[2:])) for s in neighbours(state, motion))
    assert rate == pytest.approx((ahead - behind) / (2.0 * STEP), rel=1e-4, abs=2e-3)


def neighbours(state, motion):
    angle, speed, radial, slide, aside, sideways = state
    pairs = ((angle, speed, motion.wheel), (radial, slide, motion.radial))
    pairs += ((aside, sideways, motion.tangential),)
    for time in (STEP, -STEP):
        yield [
            value
            for place, pace, second in pairs
            for value in (place + pace * time + 0.5 * second * time**2, pace + second * time)
        ]


def energy(state):
    angle, speed, radial, slide, aside, sideways = state
    velocity = (slide - aside * speed) ** 2 + (sideways + radial * speed) ** 2
    along = RIG.mass * radial + RIG.unbalance_radial
    across = RIG.mass * aside + RIG.unbalance_tangential
    height = across * math.sin(angle) - along * math.cos(angle)
    return 0.5 * (RIG.wheel_inertia * speed**2 + RIG.mass * velocity) + RIG.gravity * height


@given(STATES, GIVEN)
def test_power_balance(state, given_values):
    # d/dt(½Jω² + ½m|v|² + m g y) = Fρ vρ + Fτ vτ + Q ω, the left side by central differences.
    motion = motion_of(state, given_values)
    ahead, behind = (energy(there) for there in neighbours(state, motion))
    speed, way = state[1], np.sign(state[1])
    torque = friction_torque(RIG, speed, way, motion.axle_load) - way * RIG.load_torque
    given_power = given_values[0] * state[3] + given_values[1] * state[5] + torque * speed
    assert given_power == pytest.approx((ahead - behind) / (2.0 * STEP), rel=1e-3, abs=2e-2)


@given(STATES, GIVEN, HELD)
def test_torque_on_a_standing_wheel(state, given_values, held):
    # Without what holds it, a wheel would start with the acceleration that the torque gives it.
    angle, _, *slides = state
    places, pushes = Slides(*slides), pushes_of(given_values, held)
    torque, hold = standing_torque(math, RIG, angle, places, *pushes)
    free = RIG._replace(coulomb=0.0, load_arm=0.0, load_torque=0.0)
    motion = accelerations(math, free, angle, 0.0, places, *pushes, 1.0)
    inertia = RIG.wheel_inertia
    inertia += RIG.mass * sum(
        holds * place**2
        for holds, place in zip(held, (places.tangential, places.radial), strict=True)
    )
    assert torque == pytest.approx(inertia * motion.wheel, rel=1e-9, abs=1e-9)
    still = accelerations(math, RIG, angle, 0.0, places, *pushes, 0.0, stuck=True)
    assert still.wheel == 0.0
    assert hold == pytest.approx(RIG.coulomb + RIG.load_arm * still.axle_load)


@pytest.mark.parametrize("held", [(False, False), (True, False), (False, True)])
def test_symbols_and_arrays_give_the_numbers(held):
    state, given_values = (0.7, -3.0, 0.3, 0.4, -0.1, 0.6), (-12.0, 7.0)
    expected = [*motion_of(state, given_values, held)]
    symbols = casadi.SX.sym("x", 8)
    angle, speed, *rest = casadi.vertsplit(symbols)
    pushes = pushes_of(rest[4:], held)
    motion = accelerations(casadi, RIG, angle, speed, Slides(*rest[:4]), *pushes, -1.0)
    function = casadi.Function("f", [symbols], [casadi.vertcat(*motion)])
    assert np.array(function([*state, *given_values])).ravel() == pytest.approx(expected, rel=1e-13)
    columns = [np.full(2, value) for value in (*state, *given_values)]
    pushes = pushes_of(columns[6:], held)
    arrays = accelerations(np, RIG, *columns[:2], Slides(*columns[2:6]), *pushes, -1.0)
    for found, value in zip(arrays, expected, strict=True):
        assert found == pytest.approx([value, value], rel=1e-13)
