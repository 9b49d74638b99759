# SPDX-License-Identifier: BSD-3-Clause
"""Cutting a motion into arcs."""

from __future__ import annotations

import math
from dataclasses import replace
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from posed_programs import rig_on

from rotorpump.laws.lead import Leads, Plan, run_leads
from rotorpump.laws.trials import try_spin_up
from rotorpump.solving.seeds import guess_of, seed_of
from rotorpump.tasks import SpinUp
from rotorpump.transcription.arcs import Arc, cut_into_arcs, signature
from rotorpump.transcription.guess import Guess


def motion(angle, rate, duration, points=400):
    """A motion with the given angle and its rate as functions of time; the inertia is one."""
    time = np.linspace(0.0, duration, points)
    held = np.full_like(time, 0.4)
    return Guess(time, angle(time), rate(time), rate(time), held, *np.zeros((3, points)))


def swing(amplitude, duration, points=400):
    """φ = A cos t."""
    return motion(
        lambda t: amplitude * np.cos(t), lambda t: -amplitude * np.sin(t), duration, points
    )


def rotation(start, speed, duration):
    return motion(lambda t: start + speed * t, lambda t: np.full_like(t, speed), duration)


def mirrored(guess: Guess) -> Guess:
    return replace(guess, angle=-guess.angle, momentum=-guess.momentum, speed=-guess.speed)


def simulated(angle=0.5, duration=5.0, leads=(0.5, 0.5)) -> Guess:
    steps = round(duration / 0.004)
    rig = rig_on(2)
    start = (angle, 0.0, 0.4, 0.0, 0.0, 0.0)
    return guess_of(rig, run_leads(rig, start, Plan(Leads(*leads), 0.004), steps))


def test_letters():
    ends = (
        Arc(1, "standstill"),
        Arc(1, "angle", 0.0),
        Arc(1, "angle", math.pi),
        Arc(-1, "angle", -3.0 * math.pi),
        Arc(1, "angle", -2.0 * math.pi),
        Arc(1, "free"),
    )
    assert signature(ends) == "sbttbe"


def test_swing():
    # Lowest points at π/2, 3π/2, 5π/2; standstills at π and 2π.
    chain, ends = cut_into_arcs(swing(1.2, 8.0))
    assert signature(chain) == "bsbsbe"
    assert [arc.direction for arc in chain] == [-1, -1, 1, 1, -1, -1]
    expected = [math.pi / 2, math.pi, 3 * math.pi / 2, 2 * math.pi, 5 * math.pi / 2, 8.0]
    assert ends == pytest.approx(expected, abs=1e-3)
    assert [arc.angle for arc in chain if arc.end == "angle"] == [0.0, 0.0, 0.0]


@pytest.mark.parametrize("points", [200, 317, 1000])
def test_chain_does_not_depend_on_the_sampling(points):
    assert signature(cut_into_arcs(swing(1.2, 8.0, points))[0]) == "bsbsbe"


def test_rotation_passes_tops_and_lowest_points():
    chain, ends = cut_into_arcs(rotation(0.5, 2.0, 6.0))
    assert signature(chain) == "tbte"
    passed = [arc.angle for arc in chain[:-1]]
    assert passed == pytest.approx([math.pi, 2 * math.pi, 3 * math.pi])
    assert ends[:-1] == pytest.approx([(angle - 0.5) / 2.0 for angle in passed])
    assert {arc.direction for arc in chain} == {1}


def test_rotation_downwards():
    chain, ends = cut_into_arcs(rotation(0.5, -2.0, 6.0))
    passed = [arc.angle for arc in chain[:-1]]
    assert passed == pytest.approx([0.0, -math.pi, -2 * math.pi, -3 * math.pi])
    assert ends[:-1] == pytest.approx([(0.5 - angle) / 2.0 for angle in passed])
    assert {arc.direction for arc in chain} == {-1}


@pytest.mark.parametrize("start", [0.0, math.pi, -math.pi])
@pytest.mark.parametrize("speed", [1.5, -1.5])
def test_start_on_a_multiple_of_half_a_turn_is_left_not_passed(start, speed):
    chain, ends = cut_into_arcs(rotation(start, speed, 3.0))
    assert len(chain) == 2
    assert chain[0].angle == pytest.approx(start + math.copysign(math.pi, speed))
    assert chain[0].direction == chain[1].direction == np.sign(speed)
    assert ends == pytest.approx([math.pi / 1.5, 3.0])


def test_sample_on_an_event_counts_once():
    # Samples fall exactly on the lowest point and on the standstill.
    time = np.array([0.0, 1.0, 2.0, 3.0, 4.0, 5.0])
    angle = np.array([1.0, 0.0, -1.0, -1.5, -1.0, -0.2])
    momentum = np.array([-0.5, -1.0, -0.7, 0.0, 0.6, 0.9])
    still = np.zeros_like(time)
    chain, ends = cut_into_arcs(Guess(time, angle, momentum, momentum, *[still] * 4))
    assert signature(chain) == "bse"
    assert ends == pytest.approx([1.0, 3.0, 5.0])
    assert [arc.direction for arc in chain] == [-1, -1, 1]


def test_start_at_rest_is_no_event():
    chain, _ = cut_into_arcs(swing(0.4, 1.0))
    assert chain == (Arc(-1, "free"),) or (len(chain) == 1 and chain[0].direction == -1)


def test_event_at_the_very_end_is_the_end():
    chain, ends = cut_into_arcs(swing(1.2, math.pi * (1.0 + 1e-5), 1000))
    assert signature(chain) == "be"
    assert [arc.direction for arc in chain] == [-1, -1]
    assert ends[-1] == pytest.approx(math.pi, rel=1e-4)


def test_motionless_guess_is_one_free_arc():
    values = (0.5, 0.0, 0.0, 0.4, 0.0, 0.0, 0.0)
    still = Guess(np.array([0.0, 1.0]), *(np.full(2, value) for value in values))
    assert signature(cut_into_arcs(still)[0]) == "e"


@given(st.floats(0.2, 2.5), st.floats(0.3, 0.9), st.floats(0.3, 0.9))
def test_arcs_of_a_simulated_swing(angle, bottom, turn):
    guess = simulated(angle, 4.0, (bottom, turn))
    chain, ends = cut_into_arcs(guess)
    assert all(later > earlier for earlier, later in pairwise([0.0, *ends]))
    assert ends[-1] == guess.time[-1]
    for before, after in pairwise(chain):
        turned = before.end == "standstill"
        assert after.direction == (-before.direction if turned else before.direction)
    for arc, begin, end in zip(chain, [0.0, *ends[:-1]], ends, strict=True):
        inside = begin + (end - begin) * np.linspace(0.02, 0.98, 25)
        # not the wrong way; friction may hold the wheel for the rest of the motion
        assert np.all(arc.direction * guess.at("momentum", inside) >= 0.0)
        # no lowest point or top within an arc
        level = np.floor(guess.at("angle", inside) / math.pi)
        assert np.ptp(level) == 0.0
        if arc.end == "angle":
            assert guess.at("angle", np.array([end]))[0] == pytest.approx(arc.angle, abs=1e-9)
        elif arc.end == "standstill":
            assert guess.at("momentum", np.array([end]))[0] == pytest.approx(0.0, abs=1e-9)


@given(st.floats(0.2, 2.5))
def test_mirrored_motion_gives_the_mirrored_chain(angle):
    guess = simulated(angle, 4.0)
    chain, ends = cut_into_arcs(guess)
    reflected, other = cut_into_arcs(mirrored(guess))
    assert signature(reflected) == signature(chain)
    assert [arc.direction for arc in reflected] == [-arc.direction for arc in chain]
    assert other == pytest.approx(ends, rel=1e-12)
    for arc, image in zip(chain, reflected, strict=True):
        assert image.end == arc.end
        if arc.end == "angle":
            assert image.angle == pytest.approx(-arc.angle)


def test_last_arc_ends_at_a_given_angle():
    chain, ends = cut_into_arcs(rotation(0.5, 2.0, 1.2), final_angle=math.pi)
    assert chain == (Arc(1, "angle", math.pi),)
    assert ends == [1.2]


@pytest.mark.parametrize("angle", [0.35, 0.5, 0.8])
@pytest.mark.parametrize("leads", [(0.5, 0.5), (0.7, 0.9), (0.3, 0.7)])
def test_full_turn_passes_the_top_once(angle, leads):
    # A sampled run ends a fraction of a step beyond the top. That passage is the end of the last
    # arc; it must not make an arc of its own, from the top to the top.
    task = SpinUp(start_angle=angle, full_turn=True)
    rig = rig_on(2)
    trial = try_spin_up(rig, task, Leads(*leads))
    assert trial.reached
    seed = seed_of(task, guess_of(rig, trial.run))
    assert seed.word.count("t") == 1
    assert seed.chain[-1].end == "angle"
    assert abs(seed.chain[-1].angle) == pytest.approx(math.pi)


def test_cut_guess():
    guess = swing(1.0, 4.0, 401).cut(1.005, 3.0)
    assert guess.time[0] == 0.0
    assert guess.time[-1] == pytest.approx(1.995)
    assert guess.angle == pytest.approx(np.cos(guess.time + 1.005), abs=1e-4)
    assert guess.time.size == guess.angle.size == guess.momentum.size == guess.radial.size
