# SPDX-License-Identifier: BSD-3-Clause
"""Pictures: what they show, in which units, without a screen and without warnings."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from made_results import made_comparison, made_law, made_solution, timed_comparison, unsolved
from matplotlib.collections import LineCollection
from matplotlib.figure import Figure
from simulated_motion import example_rig

from rotorpump.errors import InputError
from rotorpump.physics.state import Slides
from rotorpump.plotting.compare import plot_comparison
from rotorpump.plotting.look import curves
from rotorpump.plotting.motion import emphasis, plot_motion
from rotorpump.plotting.pictures import save_comparison_pictures, save_solution_pictures
from rotorpump.plotting.profiles import plot_profiles
from rotorpump.rig.slide import Slide
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.objective import Objective
from rotorpump.solution.status import Status
from rotorpump.tasks import Rotate

PNG = b"\x89PNG\r\n\x1a\n"


def labels(axes) -> list[str]:
    return [line.get_label() for line in axes.get_lines() if not line.get_label().startswith("_")]


def heights(axes, label) -> list[float]:
    return next(line for line in axes.get_lines() if line.get_label() == label).get_ydata()


def level_lines(axes) -> list[float]:
    """Heights of the horizontal lines that span the axes."""
    return [
        float(line.get_ydata()[0])
        for line in axes.get_lines()
        if line.get_transform() != axes.transData
    ]


def flat(text: str) -> str:
    return text.replace("\n", " ")


def test_curves_show_both_sides_of_a_jump():
    rig = example_rig()
    trajectory = trajectory_of(
        rig,
        [0.0, 0.5, 0.5, 1.0],
        [0.3] * 4,
        [0.0] * 4,
        Slides(np.array([0.4, 0.4, 0.2, 0.2])),
        (0.0, 0.0),
        [0, 1, 2, 3],
        [0, 3],
    )
    time, radial = curves(trajectory, ("time", "radial"))
    assert radial[time < 0.5] == pytest.approx(0.4)
    assert radial[time > 0.5] == pytest.approx(0.2)
    assert sorted(radial[time == 0.5]) == pytest.approx([0.2, 0.4])


def test_the_comparison_shows_three_motions_and_the_limits():
    comparison = made_comparison()
    energy, radial, force = plot_comparison(comparison)
    motions = ["ideal law, 12 J", "practical law, 3 J", "optimal, 4 J"]
    assert labels(energy) == motions
    assert labels(radial) == [*motions, "ends of the stroke"]
    assert labels(force) == [*motions[1:], "force limit"]
    assert level_lines(radial) == [0.2, 0.4]
    assert level_lines(force) == [-40.0, 40.0]
    assert [flat(axes.get_ylabel()) for axes in (energy, radial, force)] == [
        "energy above rest [J]",
        "radial position of the mass [m]",
        "radial drive force [N]",
    ]
    assert force.get_xlabel() == "time [s]"
    assert [text.get_text() for text in energy.get_legend().get_texts()] == motions
    assert "by a factor of 3" in energy.get_title(loc="left")
    assert "force limit" in force.get_title(loc="right")
    end = comparison.optimal.trajectory.energy[-1]
    assert heights(energy, "optimal, 4 J")[-1] == pytest.approx(end)


def test_limits_lie_within_the_picture():
    comparison = made_comparison()
    for axes in plot_comparison(comparison)[1:]:
        low, high = axes.get_ylim()
        assert low < min(level_lines(axes))
        assert high > max(level_lines(axes))


def test_the_comparison_draws_into_given_axes():
    axes = Figure().subplots(3, 1)
    assert plot_comparison(made_comparison(), axes) == tuple(axes)
    assert made_comparison().plot(axes) == tuple(axes)
    with pytest.raises(InputError, match="axes: must be 3 Axes; received 2"):
        plot_comparison(made_comparison(), axes[:2])


def test_the_comparison_without_a_best_motion():
    energy, _, force = plot_comparison(made_comparison(optimal=unsolved(Status.FAILED)))
    assert len(labels(energy)) == 2
    assert labels(force) == ["practical law, 3 J", "force limit"]
    assert "factor" not in energy.get_title(loc="left")


def test_what_is_no_solution_or_not_verified_is_called_so():
    iterate = made_solution(status=Status.LIMIT_REACHED)
    energy, *_ = plot_comparison(made_comparison(optimal=iterate))
    assert labels(energy)[-1] == "last iterate (LIMIT_REACHED), no solution"
    energy, *_ = plot_comparison(made_comparison(optimal=made_solution(verified=False)))
    assert labels(energy)[-1].endswith("(not verified)")
    ideal = made_law("ideal", math.nan)
    energy, *_ = plot_comparison(replace(made_comparison(), ideal=ideal))
    assert labels(energy)[0] == "ideal law, short of the goal"


def test_a_law_that_never_arrives_does_not_stretch_the_picture():
    comparison = timed_comparison(5.0, 8.0)
    motion = comparison.ideal.trajectory
    slow = replace(motion, time=100.0 * motion.time, energy=50.0 * motion.energy)
    lost = replace(comparison.ideal, trajectory=slow, reached=False)
    energy, *_ = plot_comparison(replace(comparison, ideal=lost))
    assert energy.get_xlim()[1] < 1.1 * motion.time[-1]
    seen = slow.energy[slow.time <= motion.time[-1]].max()
    assert energy.get_ylim()[1] < 1.2 * max(seen, motion.energy.max())


def test_steady_rotation_is_drawn_over_the_angle():
    comparison = made_comparison()
    speed = Objective("speed", 4.0, "rad/s")
    turning = replace(
        comparison, task=Rotate(), optimal=replace(comparison.optimal, objective=speed)
    )
    top, _, bottom = plot_comparison(turning)
    assert flat(top.get_ylabel()) == "wheel speed [rad/s]"
    assert bottom.get_xlabel() == "wheel angle from hanging [rad]"


def test_the_motion_shows_five_quantities_and_the_limits():
    solution = made_solution()
    axes = plot_profiles(solution)
    assert [flat(panel.get_ylabel()) for panel in axes] == [
        "wheel angle from hanging [rad]",
        "energy above rest [J]",
        "radial position of the mass [m]",
        "radial speed of the mass [m/s]",
        "radial drive force [N]",
    ]
    assert [level_lines(panel) for panel in axes] == [
        [],
        [],
        [0.2, 0.4],
        [-0.8, 0.8],
        [-40.0, 40.0],
    ]
    assert axes[-1].get_xlabel() == "time [s]"
    assert axes[0].get_title(loc="left").endswith("J, verified")
    assert solution.plot(axes) == axes


def test_limits_that_are_not_there_are_not_drawn():
    solution = made_solution(rig=example_rig(radial=Slide(stroke=(0.2, 0.4), speed=0.8)))
    axes = plot_profiles(solution)
    assert level_lines(axes[4]) == []
    assert axes[4].get_title(loc="right") == ""


@pytest.mark.parametrize("plot", [plot_profiles, plot_motion])
def test_no_trajectory_no_picture(plot):
    with pytest.raises(InputError, match="solution: must have a trajectory; received 'FAILED'"):
        plot(unsolved(Status.FAILED))


def test_the_motion_refuses_too_few_axes():
    with pytest.raises(InputError, match="axes: must be 5 Axes; received 1"):
        plot_profiles(made_solution(), Figure().subplots(1, 1, squeeze=False)[:, 0])


def test_the_path_is_where_the_mass_is():
    solution = made_solution()
    axes = plot_motion(solution)
    late = next(c for c in axes.collections if isinstance(c, LineCollection))
    last = late.get_segments()[-1][-1]
    motion = solution.trajectory
    radial, angle = motion.radial[-1], motion.angle[-1]
    # the mass hangs below the axle at angle 0, and to the right of it a quarter turn later
    assert last == pytest.approx([radial * math.sin(angle), -radial * math.cos(angle)])
    assert axes.get_aspect() == 1.0
    assert axes.get_xlabel() == "to the right of the axle [m]"
    texts = [text.get_text() for text in axes.texts]
    assert "gravity" in texts
    assert {"1", "2", "3", "4"} <= set(texts)
    bar = axes.get_figure().axes[1]
    assert bar.get_ylabel() == "time [s]"


def test_the_last_two_swings_are_emphasised():
    time = np.linspace(0.0, 5.25, 2000)
    angle = 0.5 * np.cos(2.0 * math.pi * time)
    begin = emphasis(angle, -np.sin(2.0 * math.pi * time))
    assert time[begin] == pytest.approx(4.5, abs=0.01)


def test_at_most_one_turn_is_emphasised():
    angle = np.linspace(0.0, 40.0, 2000)
    begin = emphasis(angle, np.ones(2000))
    assert angle[-1] - angle[begin] == pytest.approx(2.0 * math.pi, abs=0.05)
    assert emphasis(np.empty(0), np.empty(0)) == 0


def test_a_motion_without_duration_can_be_drawn():
    rig = example_rig()
    point = trajectory_of(rig, [0.0, 0.0], 0.3, 0.0, Slides(0.4), (0.0, 0.0), [0, 1], [0, 1])
    solution = made_solution(trajectory=point)
    plot_motion(solution)
    plot_profiles(solution)
    plot_comparison(made_comparison(optimal=solution))


def test_pictures_are_written_whole(tmp_path):
    written = save_comparison_pictures(made_comparison(), tmp_path)
    assert [path.name for path in written] == ["compare.png", "motion.png", "profiles.png"]
    assert sorted(tmp_path.iterdir()) == sorted(written)
    for path in written:
        assert path.read_bytes().startswith(PNG)


def test_pictures_of_an_earlier_run_do_not_survive_a_failed_one(tmp_path):
    save_solution_pictures(made_solution(), tmp_path)
    assert save_solution_pictures(unsolved(Status.FAILED), tmp_path) == ()
    assert list(tmp_path.iterdir()) == []
