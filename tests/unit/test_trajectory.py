# SPDX-License-Identifier: BSD-3-Clause
"""Interpolation of trajectories: exact for polynomials, faithful at jumps."""

from __future__ import annotations

from dataclasses import fields
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.polynomial import Polynomial

from rotorpump.solution.trajectory import HELD, Trajectory

PLACES = np.array([0.155051025721682, 0.644948974278318, 1.0])
EDGES = (0.0, 0.3, 0.5, 1.1)
SMOOTH = [name for name in Trajectory.quantities() if name not in HELD and name != "time"]


def motion(functions) -> Trajectory:
    """Three intervals of four nodes; each column is a function of time and interval."""
    time, interval = [0.0], [0]
    for k, (left, right) in enumerate(pairwise(EDGES)):
        time += list(left + (right - left) * PLACES)
        interval += [k] * 3
    zeros = np.zeros(len(time))
    columns = {name: zeros for name in Trajectory.quantities()}
    for name, function in functions.items():
        columns[name] = np.array([function(t, k) for t, k in zip(time, interval, strict=True)])
    columns["time"] = np.array(time)
    breaks = np.arange(0, 10, 3)
    return Trajectory(**columns, breaks=breaks, arcs=breaks[[0, -1]])


coefficients = st.lists(st.floats(-10.0, 10.0), min_size=1, max_size=4)
times = st.lists(st.floats(0.0, 1.1), min_size=1, max_size=20).map(sorted)


@given(coefficients, times)
def test_cubics_are_exact(numbers, wanted):
    cubic = Polynomial(numbers)
    smooth = motion({name: lambda t, _: cubic(t) for name in SMOOTH})
    found = smooth.at(wanted)
    for name in SMOOTH:
        np.testing.assert_allclose(getattr(found, name), cubic(np.array(wanted)), atol=1e-11)
    np.testing.assert_array_equal(found.time, wanted)


@given(st.lists(st.floats(-10.0, 10.0), min_size=3, max_size=3), times)
def test_held_quantities_are_exact_for_quadratics_that_jump(numbers, wanted):
    def jumping(t, k):
        return numbers[0] + numbers[1] * t + numbers[2] * t**2 + 5.0 * k

    jumps = motion({name: jumping for name in HELD})
    expected = [jumping(t, min(np.searchsorted(EDGES, t, side="right") - 1, 2)) for t in wanted]
    for name in HELD:
        np.testing.assert_allclose(getattr(jumps.at(wanted), name), expected, atol=1e-11)


def test_a_node_at_a_break_holds_the_left_value_and_at_gives_the_right_one():
    steps = motion({"radial_force": lambda _, k: float(k)})
    assert steps.radial_force[3] == 0.0
    assert steps.at(0.3).radial_force[0] == pytest.approx(1.0)
    assert steps.at(0.3 - 1e-12).radial_force[0] == pytest.approx(0.0)
    assert steps.at(1.1).radial_force[0] == pytest.approx(2.0)


def test_nodes_are_met():
    wave = motion({name: lambda t, _: np.sin(3.0 * t) for name in Trajectory.quantities()[1:]})
    for name in Trajectory.quantities():
        np.testing.assert_allclose(
            getattr(wave.at(wave.time), name)[1:3], getattr(wave, name)[1:3], atol=1e-14
        )
    np.testing.assert_allclose(wave.at(wave.time).angle, wave.angle, atol=1e-14)


def jump_in_place() -> Trajectory:
    """The radial position jumps at 1 s, between two nodes at one time, and at the end."""
    time = np.array([0.0, 0.5, 1.0, 1.0, 1.5, 2.0, 2.0])
    columns = {name: np.zeros(7) for name in Trajectory.quantities()}
    columns["time"] = time
    columns["radial"] = np.array([0.4, 0.4, 0.4, 0.2, 0.2, 0.2, 0.4])
    breaks = np.array([0, 2, 3, 5, 6])
    return Trajectory(**columns, breaks=breaks, arcs=breaks[[0, -1]])


def test_two_nodes_at_one_time_are_a_jump():
    jump = jump_in_place()
    found = jump.at([0.9, 1.0 - 1e-9, 1.0, 1.1, 1.9])
    np.testing.assert_allclose(found.radial, [0.4, 0.4, 0.2, 0.2, 0.2])
    assert np.all(np.isfinite(jump.at([0.0, 1.0, 2.0]).radial))


def test_samples_are_uniform_and_end_in_time():
    line = motion({"angle": lambda t, _: 2.0 * t})
    sampled = line.sample(8.0)
    np.testing.assert_allclose(sampled.time, np.arange(9) / 8.0)
    np.testing.assert_allclose(sampled.angle, 2.0 * sampled.time, atol=1e-13)
    assert line.sample(10.0).time.size == 12
    assert line.sample(0.5).time.size == 1


@pytest.mark.parametrize("rate", [0.0, -1.0, np.nan, np.inf])
def test_a_rate_must_be_positive(rate):
    with pytest.raises(ValueError, match=r"^rate: must be greater than 0; received"):
        motion({}).sample(rate)


@pytest.mark.parametrize("wanted", [-0.1, 1.2, [0.5, 1.2], [-0.1, 0.5]])
def test_times_beyond_the_motion_are_refused(wanted):
    with pytest.raises(ValueError, match=r"^time: must lie within 0 and 1.1; received"):
        motion({}).at(wanted)


def test_a_time_beside_an_end_by_a_rounding_is_the_end():
    line = motion({"angle": lambda t, _: t})
    np.testing.assert_allclose(line.at([-1e-12, 1.1 + 1e-12]).time, [0.0, 1.1])


def test_what_is_interpolated_can_be_interpolated_again():
    line = motion({"angle": lambda t, _: t, "radial_force": lambda t, k: t + k})
    fine = line.at(np.linspace(0.0, 1.1, 12))
    assert fine.duration == pytest.approx(1.1)
    np.testing.assert_array_equal(fine.breaks, np.arange(12))
    np.testing.assert_array_equal(fine.arcs, [0, 11])
    np.testing.assert_allclose(fine.at([0.05, 0.77]).angle, [0.05, 0.77])


def test_columns_are_the_quantities_in_order():
    line = motion({"angle": lambda t, _: t})
    assert list(line.columns()) == list(Trajectory.quantities())
    assert Trajectory.quantities()[0] == "time"
    names = {f.name for f in fields(Trajectory)} - {"breaks", "arcs"}
    assert set(Trajectory.quantities()) == names
    assert line.columns()["angle"] is line.angle


@pytest.mark.parametrize("nodes", [1, 2])
def test_a_motion_of_no_duration_is_its_last_node(nodes):
    rows = {name: np.array([7.0, 9.0 + k])[-nodes:] for k, name in enumerate(SMOOTH)}
    columns = {name: rows.get(name, np.full(nodes, -1.0)) for name in Trajectory.quantities()}
    columns["time"] = np.full(nodes, 2.0)
    breaks = np.arange(nodes)
    still = Trajectory(**columns, breaks=breaks, arcs=breaks[[0, -1]])
    for found, times in ((still.at([2.0, 2.0]), 2), (still.at(2.0), 1), (still.sample(50.0), 1)):
        np.testing.assert_array_equal(found.time, np.full(times, 2.0))
        for name in Trajectory.quantities()[1:]:
            np.testing.assert_array_equal(getattr(found, name), np.full(times, columns[name][-1]))
    with pytest.raises(ValueError, match=r"^time: must lie within 2 and 2; received"):
        still.at(2.1)
