# SPDX-License-Identifier: BSD-3-Clause
"""Pictures of rigs with two slides, and with a tangential one alone."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from made_results import made_comparison, made_solution
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure
from simulated_motion import Simulation, example_rig, nothing, pump_motion, weaving

from rotorpump.errors import InputError
from rotorpump.plotting.compare import plot_comparison
from rotorpump.plotting.motion import plot_motion
from rotorpump.plotting.profiles import plot_profiles
from rotorpump.rig.slide import Slide
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Rotate


def solved(rig, task, trajectory, objective):
    return made_solution(rig=rig, task=task, trajectory=trajectory, objective=objective)


@pytest.fixture
def both():
    """A motion of both slides."""
    return solved(*weaving())


@pytest.fixture
def compared(both):
    """Three motions of both slides, which are the same."""
    made = made_comparison()
    laws = {
        name: replace(getattr(made, name), trajectory=both.trajectory)
        for name in ("ideal", "practical")
    }
    return replace(made, rig=both.rig, task=both.task, optimal=both, **laws)


def labels(axes) -> list[str]:
    return [line.get_label() for line in axes.get_lines() if not line.get_label().startswith("_")]


def words(panels) -> list[str]:
    return [axes.get_ylabel().replace("\n", " ") for axes in panels]


def level_lines(axes) -> list[float]:
    return [
        float(line.get_ydata()[0])
        for line in axes.get_lines()
        if line.get_transform() != axes.transData
    ]


def test_the_comparison_has_place_and_force_of_each_slide(compared):
    panels = plot_comparison(compared)
    assert words(panels) == [
        "energy above rest [J]",
        "radial position of the mass [m]",
        "radial drive force [N]",
        "tangential position of the mass [m]",
        "tangential drive force [N]",
    ]
    limits = [[], [0.2, 0.4], [-60.0, 60.0], [-0.15, 0.1], [-50.0, 50.0]]
    assert [level_lines(axes) for axes in panels] == limits
    for axes in (panels[2], panels[4]):
        assert not any(label.startswith("ideal") for label in labels(axes))
    for axes in (panels[0], panels[1], panels[3]):
        assert labels(axes)[0].startswith("ideal law")
    assert panels[-1].get_xlabel() == "time [s]"
    line = next(x for x in panels[3].get_lines() if x.get_label().startswith("optimal"))
    assert line.get_ydata()[-1] == pytest.approx(compared.optimal.trajectory.tangential[-1])


def test_a_rotation_of_two_slides_is_drawn_over_the_angle(compared):
    speed = Objective("speed", 4.0, "rad/s")
    turning = replace(compared.optimal, objective=speed)
    panels = plot_comparison(replace(compared, task=Rotate(), optimal=turning))
    assert words(panels)[0] == "wheel speed [rad/s]"
    assert panels[-1].get_xlabel() == "wheel angle from hanging [rad]"


def test_the_motion_has_three_quantities_of_each_slide(both):
    panels = plot_profiles(both)
    assert words(panels) == [
        "wheel angle from hanging [rad]",
        "energy above rest [J]",
        "radial position of the mass [m]",
        "radial speed of the mass [m/s]",
        "radial drive force [N]",
        "tangential position of the mass [m]",
        "tangential speed of the mass [m/s]",
        "tangential drive force [N]",
    ]
    assert [level_lines(axes) for axes in panels[2:]] == [
        [0.2, 0.4],
        [],
        [-60.0, 60.0],
        [-0.15, 0.1],
        [],
        [-50.0, 50.0],
    ]


@pytest.mark.parametrize(("plot", "count"), [("compare", 5), ("profiles", 8)])
def test_as_many_axes_as_panels(compared, both, plot, count):
    draw, what = {"compare": (plot_comparison, compared), "profiles": (plot_profiles, both)}[plot]
    axes = Figure().subplots(count, 1)
    assert draw(what, axes) == tuple(axes)
    with pytest.raises(InputError, match=f"axes: must be {count} Axes; received 3"):
        draw(what, axes[:3])


def test_the_path_is_where_the_mass_is(both):
    axes = plot_motion(both)
    late = next(c for c in axes.collections if isinstance(c, LineCollection))
    motion = both.trajectory
    angle, radial, aside = motion.angle[-1], motion.radial[-1], motion.tangential[-1]
    # a quarter turn counter-clockwise from the radial axis stands the tangential one
    across, along = (
        np.array([math.cos(angle), math.sin(angle)]),
        np.array([math.sin(angle), -math.cos(angle)]),
    )
    assert late.get_segments()[-1][-1] == pytest.approx(radial * along + aside * across)


def circles(axes) -> list[float]:
    """Radii of the dotted circles."""
    ring = [line for line in axes.get_lines() if len(line.get_xdata()) == 361]
    return [float(np.hypot(*line.get_data())[0]) for line in ring]


def test_the_circles_are_the_nearest_and_farthest_place(both):
    assert circles(plot_motion(both)) == pytest.approx([0.2, math.hypot(0.4, 0.15)])
    beside = replace(both.rig, tangential=replace(both.rig.tangential, stroke=(0.05, 0.1)))
    found = circles(plot_motion(replace(both, rig=beside)))
    assert found == pytest.approx([math.hypot(0.2, 0.05), math.hypot(0.4, 0.1)])


def test_the_rails_are_drawn_through_the_mass(both):
    axes = plot_motion(both)
    rails = [line for line in axes.get_lines() if len(line.get_xdata()) == 2]
    masses = [line.get_xydata()[0] for line in axes.get_lines() if line.get_marker() == "o"]
    assert (len(rails), len(masses)) == (8, 4)
    for number, rail in enumerate(rails):
        first, last = rail.get_xydata()
        assert np.hypot(*(last - first)) == pytest.approx((0.2, 0.25)[number % 2])
        here = masses[number // 2]
        way = np.hypot(*(here - first)) + np.hypot(*(last - here))
        assert way == pytest.approx(np.hypot(*(last - first)))


def test_a_tangential_slide_alone():
    rig = example_rig(radial=0.3, tangential=Slide((-0.2, 0.2), force=40.0))
    simulation = Simulation(rig, [0.5, 1.0, 0.3, 0.0, 0.0, 0.0])
    simulation.run(nothing, 0.2, across=lambda s: -25.0 * math.sin(s[0]))
    solution = solved(*pump_motion(simulation))
    assert words(plot_profiles(solution))[2:] == [
        "tangential position of the mass [m]",
        "tangential speed of the mass [m/s]",
        "tangential drive force [N]",
    ]
    assert circles(plot_motion(solution)) == pytest.approx([0.3, math.hypot(0.3, 0.2)])
