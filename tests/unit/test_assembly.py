# SPDX-License-Identifier: BSD-3-Clause
"""What the assembly of a trajectory fills in."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from rotorpump.physics.state import Slides
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.solution.assembly import trajectory_of

RIG = Rig(
    wheel=Wheel(inertia=0.25, mass=3.0),
    mass=1.2,
    radial=Slide(stroke=(0.2, 0.4)),
    friction=AxleFriction(viscous=0.0, coulomb=0.3),
)
INERTIA = 0.25 + 1.2 * 0.4**2
OUTSIDE = Slides(0.4)


def assemble(momentum, angle=0.0, rig=RIG, slides=OUTSIDE, **known):
    last = len(momentum) - 1
    time = np.arange(last + 1, dtype=float)
    forces, breaks = (0.0, 0.0), np.arange(last + 1)
    return trajectory_of(rig, time, angle, momentum, slides, forces, breaks, [0, last], **known)


def sideways(acceleration, angle):
    """Reaction across the slide without force along it [N]."""
    weight = 4.2 * 9.80665 * np.sin(angle)
    return 1.2 * 0.4 * acceleration + weight


def test_derived_columns():
    run = assemble([1.0, 2.0, 3.0])
    assert run.speed == pytest.approx(run.momentum / INERTIA)
    assert run.energy == pytest.approx(run.momentum**2 / (2.0 * INERTIA))
    assert not np.any([run.tangential, run.tangential_speed, run.tangential_force])
    assert run.breaks.dtype == np.intp


def test_speed_and_energy_of_a_mass_that_moves_both_ways():
    # H = I ω + m (ρ vτ - τ vρ); hanging with both slides at the far corner is rest.
    rig = replace(RIG, tangential=Slide(stroke=(-0.3, 0.1)))
    run = assemble([1.0], rig=rig, slides=Slides(0.4, 0.5, -0.3, 0.7))
    inertia = 0.25 + 1.2 * 0.5**2
    speed = (1.0 - 1.2 * (0.4 * 0.7 + 0.3 * 0.5)) / inertia
    assert run.speed == pytest.approx([speed])
    velocity = (0.5 + 0.3 * speed) ** 2 + (0.7 + 0.4 * speed) ** 2
    height = 1.2 * 9.80665 * (0.5 - 0.4)
    assert run.energy == pytest.approx([0.125 * speed**2 + 0.6 * velocity + height])


def test_hanging_wheel_carries_its_weight():
    run = assemble([0.0, 0.0, 0.0], contacts=(-1.2 * 9.80665, 0.0))
    assert run.axle_load == pytest.approx(np.full(3, 4.2 * 9.80665))
    assert not run.radial_force.any()


def test_friction_opposes_the_motion_also_at_a_single_standstill():
    # φ̈ = ∓ c/I while the wheel turns: at a turning point it is the value before it.
    for momentum, signs in (
        ([1.0, 0.0, -1.0], [1.0, 1.0, -1.0]),
        ([0.0, -1.0, -1.0], [-1.0, -1.0, -1.0]),
    ):
        run = assemble(momentum, angle=0.1)
        along = -3.0 * 9.80665 * np.cos(0.1)
        weight = 1.2 * 9.80665 * 0.4 * np.sin(0.1)
        turning = -(np.array(signs) * 0.3 + weight) / INERTIA
        assert run.axle_load == pytest.approx(np.hypot(along, sideways(turning, 0.1)))


def test_a_load_slows_the_wheel_as_friction_does():
    loaded = assemble([1.0, 1.0], load_torque=0.2)
    rubbing = replace(RIG, friction=AxleFriction(viscous=0.0, coulomb=0.5))
    assert loaded.axle_load == pytest.approx(assemble([1.0, 1.0], rig=rubbing).axle_load)
    assert loaded.axle_load != pytest.approx(assemble([1.0, 1.0]).axle_load)


def test_standing_wheel_does_not_accelerate():
    run = assemble([1.0, 0.0, 0.0], angle=0.05)
    along = -3.0 * 9.80665 * np.cos(0.05)
    assert run.axle_load[1:] == pytest.approx(np.full(2, np.hypot(along, sideways(0.0, 0.05))))
    assert run.axle_load[0] != pytest.approx(run.axle_load[1])
