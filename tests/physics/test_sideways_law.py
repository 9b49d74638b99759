# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law with a tangential slide, with both, and on unbalanced rigs."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from ideal_rig import FRICTIONS, SIDEWAYS, pumped_and_lost, rig

from rotorpump.laws.hybrid import march
from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.moves import Instant, placed
from rotorpump.laws.pointwise import landmark_rule, pointwise_rule
from rotorpump.laws.stretch import End
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.example import example_rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp

RIGS = {
    "sideways": {"radial": 0.3, "tangential": SIDEWAYS},
    "through the axle": {"radial": 0.0, "tangential": SIDEWAYS},
    "to one side": {"radial": 0.3, "tangential": Slide(stroke=(0.02, 0.2))},
    "both": {"tangential": SIDEWAYS},
    "held aside": {"tangential": 0.1},
    "unbalanced": {"wheel": Wheel(0.25, 3.0, unbalance=0.15, unbalance_angle=0.9)},
}


def built(name, *friction):
    return rig(*friction, **RIGS[name])


@pytest.mark.parametrize("friction", FRICTIONS)
@pytest.mark.parametrize("name", RIGS)
def test_energy_audit_of_pumping(name, friction):
    machine = built(name, *friction)
    run = run_ideal(machine, Pump(duration=5.0, start_angle=0.4))
    pumped, lost = pumped_and_lost(run, machine.friction)
    energy = run.trajectory.energy
    assert pumped > 0.5
    assert energy[-1] - energy[0] == pytest.approx(pumped - lost, abs=3e-4 * pumped)


@pytest.mark.parametrize("name", RIGS)
@pytest.mark.parametrize("start", [(0.4, 0.1), (-0.6, 2.0)])
def test_mirror_symmetry(name, start):
    machine = built(name, 0.03, 0.02, 0.001)
    angle, speed = start
    one = run_ideal(machine, Pump(duration=4.0, start_angle=angle, start_speed=speed))
    task = Pump(duration=4.0, start_angle=-angle, start_speed=-speed)
    other = run_ideal(machine.mirrored(), task)
    assert other.objective.value == pytest.approx(one.objective.value, rel=1e-8)
    image = other.trajectory.mirrored()
    times = np.linspace(0.0, 4.0, 50)
    assert image.at(times).momentum == pytest.approx(one.trajectory.at(times).momentum, abs=1e-6)


@pytest.mark.parametrize("name", ["sideways", "through the axle", "both"])
@pytest.mark.parametrize("coulomb", [0.0, 0.4])
def test_a_sideways_jump_starts_a_hanging_wheel(name, coulomb):
    run = run_ideal(built(name, 0.01, coulomb), SpinUp(full_turn=True, start_angle=0.0))
    assert run.reached
    assert run.trajectory.momentum[0] == 0.0


def test_friction_that_no_jump_overcomes():
    # The largest torque of the weight sideways is m g hypot(ρ, τ), at its most from hanging m g τ.
    hold = 1.02 * 1.2 * 9.80665 * 0.12
    run = run_ideal(built("sideways", 0.0, hold), Pump(duration=2.0, start_angle=0.0))
    assert "holds the wheel" in run.message
    assert set(run.trajectory.angle) == {0.0}


@pytest.mark.parametrize("name", ["sideways", "to one side", "held aside"])
@pytest.mark.parametrize("friction", FRICTIONS)
def test_no_other_rule_swings_further(name, friction):
    # At one place of the mass the turning angles can be compared, whatever jumps led there.
    constants = Constants.of(built(name, *friction))
    place = Slides(constants.radial_high, 0.0, constants.tangential_high)

    def reached(rule):
        for stretch in march(constants, rule, Instant(0.0, 0.8, -1e-6, place)):
            if stretch.end is End.TURN:
                return -placed(constants, stretch.last, place).angle
        raise AssertionError("it swings")

    best = reached(pointwise_rule(constants))
    assert best >= reached(landmark_rule(constants)) - 1e-9
    for early in (-0.3, 0.3):
        pointwise = pointwise_rule(constants)

        def shifted(axis, slides, pointwise=pointwise, early=early):
            urges = pointwise(axis, slides).items()
            return {
                end: replace(
                    urge,
                    sine=urge.sine * math.cos(early) - urge.cosine * math.sin(early),
                    cosine=urge.cosine * math.cos(early) + urge.sine * math.sin(early),
                )
                for end, urge in urges
            }

        assert best > reached(shifted) + 1e-5


def test_a_heavy_mass_rises_next_to_the_axle():
    # Beside a light wheel the mass sideways adds to the inertia that the weight has to slow down.
    heavy = rig(0.02, radial=0.3, mass=5.0, wheel=Wheel(0.05), tangential=Slide((-0.3, 0.3)))
    trajectory = run_ideal(heavy, Rotate()).trajectory
    assert set(np.unique(trajectory.tangential)) == {-0.3, 0.0, 0.3}
    rising = (np.sin(trajectory.angle) > 0.9) & (trajectory.tangential == 0.0)
    assert rising.any()


def swings(trajectory) -> int:
    """Half swings that begin before the end."""
    signs = np.sign(trajectory.momentum[trajectory.momentum != 0.0])
    return int(np.count_nonzero(np.diff(signs))) + 1


@pytest.mark.parametrize("radial", [0.27, 0.38])
def test_radial_pumping_beats_sideways_pumping(radial):
    # Common practice: of the same stroke, along the radius takes fewer swings to the first turn
    # than sideways at the middle or outer end of it. (Sideways close to the axle it does not.)
    machine, _ = example_rig()
    task = SpinUp(full_turn=True, start_angle=0.35)
    sideways = replace(machine, radial=radial, tangential=Slide(stroke=(-0.11, 0.11)))
    along, across = run_ideal(machine, task), run_ideal(sideways, task)
    assert along.reached
    assert across.reached
    assert swings(along.trajectory) < swings(across.trajectory)
    assert along.objective.value < across.objective.value


def test_two_axes_are_called_a_superposition():
    task = SpinUp(full_turn=True, start_angle=0.3)
    both = run_ideal(built("both"), task)
    assert "superposition" in both.message
    assert "radial move first" in both.message
    assert both.objective.value < run_ideal(rig(), task).objective.value
    assert "superposition" not in run_ideal(built("sideways"), task).message
    # Where both moves fall on one instant, the place between them is shown.
    t = both.trajectory
    still = np.diff(t.time) == 0.0
    assert not np.any(still & (np.diff(t.radial) != 0.0) & (np.diff(t.tangential) != 0.0))
    assert t.momentum[1:][still] == pytest.approx(t.momentum[:-1][still], abs=1e-15)


def test_direction_of_an_unbalanced_rotation():
    machine = built("unbalanced", 0.05)
    forward = run_ideal(machine, Rotate())
    backward = run_ideal(machine, Rotate(direction=-1))
    image = run_ideal(machine.mirrored(), Rotate())
    assert backward.objective.value == image.objective.value
    assert backward.objective.value != pytest.approx(forward.objective.value, rel=1e-6)
    assert backward.trajectory.angle[-1] == pytest.approx(-2.0 * math.pi)
    assert np.all(backward.trajectory.speed < 0.0)
    assert np.array_equal(backward.trajectory.radial, image.trajectory.radial)


@pytest.mark.parametrize("name", RIGS)
def test_steady_rotation_repeats(name):
    machine = built(name, 0.04, 0.02)
    run = run_ideal(machine, Rotate())
    t = run.trajectory
    assert run.reached
    assert t.angle[-1] - t.angle[0] == pytest.approx(2.0 * math.pi)
    assert t.momentum[-1] == pytest.approx(t.momentum[0], rel=1e-9)
    assert (t.radial[-1], t.tangential[-1]) == (t.radial[0], t.tangential[0])
    pumped, lost = pumped_and_lost(run, machine.friction)
    assert pumped == pytest.approx(lost, rel=1e-3)
