# SPDX-License-Identifier: BSD-3-Clause
"""One motion against time, with the limits of its slides."""

from __future__ import annotations

from collections.abc import Sequence

from matplotlib.axes import Axes

from rotorpump.errors import InputError
from rotorpump.plotting.look import INK, OPTIMAL, curves, draw, dress, mark_limits, stacked
from rotorpump.quantities import QUANTITIES
from rotorpump.solution.solution import Solution
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solution.wording import quantity, task_words

WHEEL = ("angle", "energy")
"""Quantities of the wheel, above those of the slides."""


def plot_profiles(solution: Solution, axes: Sequence[Axes] | None = None) -> tuple[Axes, ...]:
    """Draw wheel angle, energy, and the mass's positions, speeds and drive forces against time.

    Parameters
    ----------
    solution : Solution
        A solution with a trajectory.
    axes : sequence of Axes, length 5, or 8 for two slides, optional
        Where to draw; in a new figure by default.

    Returns
    -------
    tuple of Axes
        One for each quantity, with the limits of the slides as lines.

    Raises
    ------
    InputError
        If the solution has no trajectory, or the number of axes does not fit.
    """
    trajectory = motion_of(solution)
    rig = solution.rig
    slides = [name for axis in rig.driven for name in (axis, f"{axis}_speed", f"{axis}_force")]
    names = (*WHEEL, *slides)
    panels = stacked(len(names), 2.0 * len(names)) if axes is None else tuple(axes)
    if len(panels) != len(names):
        raise InputError("axes", f"must be {len(names)} Axes", len(panels))
    time, *columns = curves(trajectory, ("time", *names))
    for panel, name, column in zip(panels, names, columns, strict=True):
        draw(panel, time, column, OPTIMAL, QUANTITIES[name].words)
        dress(panel, name)
    for number, slide in enumerate(rig.slides):
        place, pace, force = panels[2 + 3 * number : 5 + 3 * number]
        mark_limits(place, slide.stroke, "ends of the stroke")
        mark_limits(pace, (-slide.speed, slide.speed), "speed limit")
        mark_limits(force, (-slide.standing_force, slide.standing_force), "force limit")
    panels[-1].set_xlabel(QUANTITIES["time"].label, color=INK)
    panels[0].set_title(headline(solution), loc="left", fontsize="medium", color=INK)
    return panels


def motion_of(solution: Solution) -> Trajectory:
    """Return the trajectory of a solution.

    Raises
    ------
    InputError
        If it has none.
    """
    if solution.trajectory is None:
        raise InputError("solution", "must have a trajectory", solution.status.name)
    return solution.trajectory


def headline(solution: Solution) -> str:
    """Return task, value and standing of a solution."""
    objective = solution.objective
    if not solution.success:
        return f"{task_words(solution.task)}\nlast iterate ({solution.status.name}), no solution"
    standing = "verified" if solution.verified else "NOT VERIFIED"
    value = quantity(objective.value, objective.unit)
    return f"{task_words(solution.task)}\n{objective.name} {value}, {standing}"
