# SPDX-License-Identifier: BSD-3-Clause
"""Limits between the nodes, and the evaluation of intervals that they rest on."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import Simulation, example_rig, nothing, pumping
from told_motion import told_speeds

from rotorpump.checking.intervals import IntervalSamples, held_polynomials
from rotorpump.checking.margins import active_shares, margin_checks
from rotorpump.rig.slide import Slide


def failures(rig, trajectory):
    return {check.name for check in margin_checks(rig, trajectory) if not check.passed}


def test_good_motion_is_within_its_limits():
    rig, _, trajectory, _ = pumping()
    checks = margin_checks(rig, trajectory)
    assert [check.name for check in checks] == ["radial stroke", "radial speed", "radial force"]
    assert all(check.passed for check in checks)


@pytest.mark.parametrize(
    ("limit", "value", "name", "excess"),
    [
        ("stroke", (0.21, 0.4), "radial stroke", 0.01 / 0.19),
        ("stroke", (0.2, 0.39), "radial stroke", 0.01 / 0.19),
        ("speed", 0.79, "radial speed", 0.8 / 0.79 - 1.0),
        ("force", 39.0, "radial force", 40.0 / 39.0 - 1.0),
    ],
)
def test_each_tighter_limit_is_noticed(limit, value, name, excess):
    rig, _, trajectory, _ = pumping()
    tight = replace(rig, radial=replace(rig.radial, **{limit: value}))
    assert failures(tight, trajectory) == {name}
    found = {check.name: check.value for check in margin_checks(tight, trajectory)}
    assert found[name] == pytest.approx(excess, abs=1e-4)


@pytest.mark.parametrize("sign", [-1.0, 1.0])
def test_limits_hold_both_ways(sign):
    rig, _, trajectory, _ = pumping()
    tight = replace(rig, radial=replace(rig.radial, speed=0.79, force=39.0))
    one_way = replace(
        trajectory,
        radial_speed=sign * np.abs(trajectory.radial_speed),
        radial_force=sign * np.abs(trajectory.radial_force),
    )
    assert failures(tight, one_way) == {"radial speed", "radial force"}
    assert active_shares(rig, one_way)["radial", "speed"] > 0.2
    assert active_shares(rig, one_way)["radial", "force"] > 0.05


def test_overshoot_between_nodes_is_noticed():
    rig, _, trajectory, _ = pumping()
    # the cubic through 0.4, 0.3, 0.3, 0.4 leaves no node outside 0.3 to 0.4, but itself does
    radial = trajectory.radial.copy()
    radial[:4] = [0.4, 0.3, 0.3, 0.4]
    tight = replace(rig, radial=Slide(stroke=(0.3, 0.4), speed=0.8, force=40.0))
    held = replace(trajectory, radial=np.where(np.arange(radial.size) < 4, radial, 0.35))
    assert held.radial.min() >= 0.3
    assert "radial stroke" in failures(tight, held)


@pytest.mark.parametrize(
    ("column", "name"),
    [
        ("radial", "radial stroke"),
        ("radial_speed", "radial speed"),
        ("radial_force", "radial force"),
    ],
)
def test_not_a_number_never_passes(column, name):
    rig, _, trajectory, _ = pumping()
    values = getattr(trajectory, column).copy()
    values[50] = np.nan
    assert name in failures(rig, replace(trajectory, **{column: values}))


def test_limits_that_do_not_exist_are_not_checked():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4)))
    _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], [(0.2, 0.0), (0.0, 0.2), (0.2, 0.0)])
    assert [check.name for check in margin_checks(rig, trajectory)] == ["radial stroke"]
    assert set(active_shares(rig, trajectory)) == {("radial", "low stop"), ("radial", "high stop")}


def test_shares_of_a_rest_are_the_shares_of_its_phases():
    simulation = Simulation(example_rig(), [1.0, -1.0, 0.4, 0.0])
    simulation.run(nothing, 0.5, rests=True)
    simulation.run(lambda _: 40.0, 0.25, rests=True)
    shares = active_shares(simulation.rig, simulation.trajectory())
    assert shares["radial", "high stop"] == pytest.approx(1.0)
    assert shares["radial", "low stop"] == 0.0
    assert shares["radial", "speed"] == 0.0
    assert shares["radial", "force"] == pytest.approx(1.0 / 3.0)


def test_share_of_cruising():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4), speed=0.8))
    _, _, trajectory, _ = told_speeds(
        rig, [1.0, -0.5, 0.4], [(0.25, 0.0), (0.25, -0.8), (0.5, 0.0)]
    )
    shares = active_shares(rig, trajectory)
    assert shares["radial", "speed"] == pytest.approx(0.25)
    # within 1 % of the stroke for 2 mm / 0.8 m/s more than it rests there
    assert shares["radial", "high stop"] == pytest.approx(0.2525, abs=1e-3)
    assert shares["radial", "low stop"] == pytest.approx(0.5025, abs=1e-3)


@pytest.mark.parametrize("name", ["angle", "radial", "radial_speed", "radial_force"])
def test_samples_agree_with_the_interpolation_of_the_trajectory(name):
    _, _, trajectory, _ = pumping()
    samples = IntervalSamples(trajectory, np.array([0.1, 0.5, 0.9]))
    expected = getattr(trajectory.at(samples.time.ravel()), name)
    np.testing.assert_allclose(samples.column(name).ravel(), expected, rtol=1e-12, atol=1e-12)


def test_samples_skip_intervals_without_length():
    rig = example_rig(radial=Slide(stroke=(0.2, 0.4)))
    _, _, trajectory, _ = told_speeds(rig, [1.0, -0.5, 0.4], [(0.02, 0.0), (0.0, 0.2), (0.02, 0.0)])
    samples = IntervalSamples(trajectory, np.array([0.0, 1.0]))
    np.testing.assert_allclose(samples.column("radial"), [[0.4, 0.4], [0.2, 0.2]])
    assert held_polynomials(trajectory, "radial_speed")[1] is None


def test_held_polynomials_agree_with_the_interpolation_of_the_trajectory():
    _, _, trajectory, _ = pumping()
    edges = trajectory.time[trajectory.breaks]
    times = 0.3 * edges[:-1] + 0.7 * edges[1:]
    polynomials = held_polynomials(trajectory, "radial_force")
    values = [polynomial(t) for polynomial, t in zip(polynomials, times, strict=True)]
    np.testing.assert_allclose(values, trajectory.at(times).radial_force, rtol=1e-10, atol=1e-10)
