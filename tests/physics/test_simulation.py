# SPDX-License-Identifier: BSD-3-Clause
"""Plain simulation: the energy closes with everything switched on, and events are met exactly."""

from __future__ import annotations

import math
from functools import cache

import numpy as np
import pytest
from scipy.optimize import brentq

from rotorpump.physics.contacts import Action
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import angular_momentum
from rotorpump.physics.impulses import kick, kinetic_energy, leap
from rotorpump.physics.phases import Ending, Phase, SimulationFailure, follow
from rotorpump.physics.simulation import LEDGER, NOTHING, Simulator
from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

STILL = Action(), Action()
HORIZON, STRETCH = 0.4, 0.1


def random_rig(rng):
    low, left = rng.uniform(0.0, 0.3), rng.uniform(-0.3, 0.1)
    return Rig(
        wheel=Wheel(*rng.uniform([0.1, 1.0, 0.01, -3.0], [0.5, 5.0, 0.2, 3.0])),
        mass=rng.uniform(0.5, 2.0),
        radial=Slide((low, low + rng.uniform(0.05, 0.3)), rubbing=rng.uniform(0.5, 4.0)),
        tangential=Slide((left, left + rng.uniform(0.05, 0.3)), rubbing=rng.uniform(0.5, 4.0)),
        friction=AxleFriction(*rng.uniform(0.0, [0.1, 0.3, 0.02, 0.2, 0.02])),
    )


def random_force(rng):
    strength, beat, phase = rng.uniform([10.0, 5.0, 0.0], [60.0, 30.0, 7.0])
    return lambda time: strength * math.sin(beat * time + phase)


def energy(simulator, state):
    slides = Slides(*state[2:6])
    momentum = angular_momentum(simulator.constants, state[1], slides)
    return energy_above_rest(math, simulator.constants, state[0], momentum, slides)


@cache
def random_runs():
    """Rise of energy and ledger of random rigs under random forces, shape (50, 6)."""
    rng = np.random.default_rng(1906)
    found = []
    for _ in range(50):
        rig = random_rig(rng)
        simulator = Simulator.of(rig, load_torque=rng.uniform(0.02, 0.2))
        low, high = rig.stroke("radial")
        start = [rng.uniform(-3.0, 3.0), rng.uniform(-4.0, 4.0), high, 0.0]
        state = [*start, rig.stroke("tangential")[0], 0.0, *NOTHING]
        before = energy(simulator, state)
        actions = Action(force=random_force(rng)), Action(force=random_force(rng))
        for begin in np.arange(0.0, HORIZON - 1e-9, STRETCH):
            state = simulator.advance(begin, begin + STRETCH, actions, state)
        assert low <= state[2] <= high
        found.append([energy(simulator, state) - before, *state[6:]])
    return np.array(found)


def gaps(without=None):
    """Energy that is missing, relative to what was turned over, shape (50,)."""
    rise, ledger = random_runs()[:, 0], random_runs()[:, 1:].copy()
    turned_over = np.abs(ledger).sum(axis=1)
    if without is not None:
        ledger[:, LEDGER.index(without)] = 0.0
    return (ledger[:, 0] - ledger[:, 1:].sum(axis=1) - rise) / turned_over


def test_energy_of_random_rigs_closes():
    assert np.max(np.abs(gaps())) < 1e-6


@pytest.mark.parametrize("entry", LEDGER)
def test_every_entry_of_the_ledger_is_needed(entry):
    assert np.median(np.abs(gaps(without=entry))) > 1e-4


def test_a_simulation_without_a_ledger_goes_the_same_way():
    rig = random_rig(np.random.default_rng(7))
    start = [1.0, 2.0, *[rig.stroke("radial")[0], 0.0], rig.stroke("tangential")[1], 0.0]
    actions = Action(force=lambda t: 30.0 * math.cos(9.0 * t)), Action(force=lambda _: -20.0)
    bare, booked = (
        Simulator.of(rig, 0.05).advance(0.0, 0.3, actions, [*start, *ledger])
        for ledger in ([], NOTHING)
    )
    assert bare == pytest.approx(booked[:6], abs=1e-7)


def test_impulses_of_a_told_speed_are_booked_as_work():
    rig = random_rig(np.random.default_rng(3))
    simulator = Simulator.of(rig)
    state = [0.3, 2.0, 0.2, 0.0, 0.1, 0.0, *NOTHING]
    after = simulator.set_speed(state, "tangential", 1.5)
    rise = energy(simulator, after) - energy(simulator, state)
    assert after[5] == 1.5
    assert after[6] == pytest.approx(rise)
    assert abs(rise) > 0.1


class TestImpulses:
    CONSTANTS = Simulator.of(random_rig(np.random.default_rng(5))).constants
    STATE = (0.3, 2.0, 0.25, 0.4, 0.1, -0.7)

    def momentum(self, state):
        return angular_momentum(self.CONSTANTS, state[1], Slides(*state[2:6]))

    @pytest.mark.parametrize("axis", ["radial", "tangential"])
    @pytest.mark.parametrize("free", [True, False])
    def test_momentum_is_kept(self, axis, free):
        after = kick(self.CONSTANTS, [*self.STATE], axis, 1.3, free=free)
        assert self.momentum(after) == pytest.approx(self.momentum(self.STATE), rel=1e-13)
        changes = np.array(after) - np.array(self.STATE)
        own, other = (3, 5) if axis == "radial" else (5, 3)
        assert changes[own] == pytest.approx(1.3)
        assert (changes[other] == 0.0) != free
        assert changes[1] != 0.0

    @pytest.mark.parametrize("axis", ["radial", "tangential"])
    def test_a_mass_that_gives_way_keeps_its_velocity_there(self, axis):
        after = kick(self.CONSTANTS, [*self.STATE], axis, 1.3, free=True)

        def velocity(state):
            _, speed, radial, slide, aside, sideways = state
            return slide - aside * speed, sideways + radial * speed

        kept = 1 if axis == "radial" else 0
        assert velocity(after)[kept] == pytest.approx(velocity(self.STATE)[kept], rel=1e-13)

    def test_kinetic_energy(self):
        c, (_, speed, radial, slide, aside, sideways) = self.CONSTANTS, self.STATE
        velocity = math.hypot(slide - aside * speed, sideways + radial * speed)
        expected = 0.5 * c.wheel_inertia * speed**2 + 0.5 * c.mass * velocity**2
        assert kinetic_energy(c, [*self.STATE]) == pytest.approx(expected)

    def test_a_radial_leap_keeps_angle_and_momentum(self):
        # τ = 0: ω₊ = ω₋ I₋ / I₊
        state = [0.3, 2.0, 0.4, 0.0, 0.0, 0.0]
        after = leap(self.CONSTANTS, state, "radial", 0.2)
        before, then = (
            self.CONSTANTS.wheel_inertia + self.CONSTANTS.mass * r**2 for r in (0.4, 0.2)
        )
        assert after == pytest.approx([0.3, 2.0 * before / then, 0.2, 0.0, 0.0, 0.0])

    @pytest.mark.parametrize("axis", ["radial", "tangential"])
    def test_a_leap_is_a_fast_move(self, axis):
        rig = Rig(Wheel(0.3), 1.2, Slide((0.1, 0.5)), AxleFriction(0.0), Slide((-0.5, 0.5)))
        simulator = Simulator.of(rig)
        state, entry = [0.3, 2.0, 0.25, 0.0, 0.1, 0.0], 2 if axis == "radial" else 4
        short = 1e-6
        moved = simulator.set_speed(state, axis, (0.35 - state[entry]) / short)
        moved = simulator.advance(0.0, short, STILL_BUT_MOVING, moved)
        moved = simulator.set_speed(moved, axis, 0.0)
        assert simulator.set_place(state, axis, 0.35) == pytest.approx(moved, abs=1e-4)
        assert abs(moved[0] - 0.3) > 0.01


STILL_BUT_MOVING = Action(acceleration=lambda _: 0.0), Action(acceleration=lambda _: 0.0)


class TestStandstill:
    """Swings against dry friction, in closed form.

    Published: the torque of the weight M and friction τ give M (cos θ₁ - cos θ₀) = τ (θ₀ + θ₁)
    for a swing from θ₀ to θ₁ beyond the lowest point; the numbers are solutions of it.
    """

    def swing(self, simulator, state):
        """State at the next turning point or standstill."""

        def after(duration):
            return simulator.advance(0.0, duration, STILL, state)

        pace = math.copysign(1.0, -state[0])
        first = 0.05
        while pace * after(first)[1] > 0.0:
            first += 0.05
        found = brentq(lambda t: pace * after(t)[1], 0.04, first, xtol=1e-12)
        return after(found)

    def test_a_pendulum_swings_to_its_next_turning_point(self):
        # M = 5 N m, τ = 0.2 N m, θ₀ = 2 rad: 1.836598043631 rad
        friction, gravity = AxleFriction(0.0, coulomb=0.2), 10.0
        rig = Rig(Wheel(0.3), 1.0, Slide((0.1, 0.5)), friction, gravity=gravity)
        state = [2.0, 0.0, 0.5, 0.0, 0.0, 0.0]
        assert -self.swing(Simulator.of(rig), state)[0] == pytest.approx(1.836598043631, abs=1e-8)

    @pytest.mark.parametrize(("angle", "moves"), [(0.0399, False), (0.0401, True)])
    def test_a_wheel_starts_where_the_weight_exceeds_friction(self, angle, moves):
        # sin θ = 0.2 / 5 at 0.04001 rad
        rig = Rig(Wheel(0.3), 1.0, Slide((0.1, 0.5)), AxleFriction(0.0, 0.2), gravity=10.0)
        after = Simulator.of(rig).advance(0.0, 1.0, STILL, [angle, 0.0, 0.5, 0.0, 0.0, 0.0])
        assert (after[0] != angle) == moves

    def test_friction_of_the_load_holds_a_wheel(self):
        # hanging load (1 + 2) kg · 10 m/s², arm 0.02 m: 0.6 N m against 5 sin θ N m
        friction = AxleFriction(0.0, load=0.5, journal_radius=0.04)
        rig = Rig(Wheel(0.3, mass=2.0), 1.0, Slide((0.1, 0.5)), friction, gravity=10.0)
        threshold = math.asin(0.6 / 5.0)
        for angle, moves in ((threshold - 1e-4, False), (threshold + 1e-4, True)):
            after = Simulator.of(rig).advance(0.0, 1.0, STILL, [angle, 0.0, 0.5, 0.0, 0.0, 0.0])
            assert (after[0] != angle) == moves

    # Far while falling, near while rising, with a Coulomb torque of 0.3 N m: formula derived, with
    # S = m r, (I1/I2) (S1 g (1 - cos θ0) - c θ0) = S2 g (1 - cos θ1) + c θ1; start where
    # (1 - cos θ)/θ = c (I1 + I2) / (g (S1 I1 - S2 I2)).
    RIG = Rig(Wheel(0.5), 2.0, Slide((0.2, 0.4)), AxleFriction(0.0, 0.3), gravity=9.81)

    def half_swing(self, degrees):
        simulator = Simulator.of(self.RIG)
        state = [math.radians(degrees), 0.0, 0.4, 0.0, 0.0, 0.0]
        late = 0.05
        while simulator.advance(0.0, late, STILL, state)[0] > 0.0:
            late += 0.05
        bottom = brentq(
            lambda t: simulator.advance(0.0, t, STILL, state)[0], late - 0.05, late, xtol=1e-13
        )
        state = simulator.advance(0.0, bottom, STILL, state)
        state = simulator.set_place([0.0, *state[1:]], "radial", 0.2)

        def speed(duration):
            return simulator.advance(0.0, duration, STILL, state)[1]

        late = 0.05
        while speed(late) < 0.0:
            late += 0.05
        turn = brentq(speed, late - 0.05, late, xtol=1e-13)
        return -math.degrees(simulator.advance(0.0, turn, STILL, state)[0])

    @pytest.mark.parametrize(
        ("before", "after"),
        [(20.0, 25.65264116), (60.0, 99.65034447), (11.61057484, 11.61057484)],
    )
    def test_half_swings_against_friction(self, before, after):
        assert self.half_swing(before) == pytest.approx(after, abs=1e-6)


def test_a_contact_that_never_settles_is_reported():
    bounce = Phase(lambda _, s: [1.0], (Ending(lambda _, s: s[0] - 1e-3, lambda s: [0.0]),))
    with pytest.raises(SimulationFailure, match="contact changes"):
        follow(0.0, 1.0, [0.0], lambda _, s: bounce)
