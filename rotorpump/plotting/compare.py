# SPDX-License-Identifier: BSD-3-Clause
"""The three motions of a comparison, one above the other quantity."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes

from rotorpump.errors import InputError
from rotorpump.plotting.look import (
    IDEAL,
    INK,
    OPTIMAL,
    PRACTICAL,
    Pen,
    curves,
    draw,
    dress,
    mark_limits,
    stacked,
)
from rotorpump.quantities import QUANTITIES
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solution.wording import quantity, task_words
from rotorpump.studies.comparison import Comparison
from rotorpump.tasks import Rotate


@dataclass(frozen=True, eq=False)
class _Motion:
    """A motion, how it is drawn and what it is called."""

    trajectory: Trajectory
    pen: Pen
    label: str
    reached: bool
    driven: bool


def plot_comparison(comparison: Comparison, axes: Sequence[Axes] | None = None) -> tuple[Axes, ...]:
    """Draw energy, position of the mass and drive force of the three motions.

    Parameters
    ----------
    comparison : Comparison
        The comparison. A motion that does not exist is left out.
    axes : sequence of Axes, length 3, or 5 for two slides, optional
        Where to draw; in a new figure by default.

    Returns
    -------
    tuple of Axes
        Energy, then position and force of each slide against time. For steady rotation: wheel
        speed, positions and forces against the wheel angle. The ideal law is not among the forces:
        its moves take infinite ones.

    Raises
    ------
    InputError
        If the number of axes does not fit.
    """
    turning = isinstance(comparison.task, Rotate)
    across = "angle" if turning else "time"
    slides = [name for axis in comparison.rig.driven for name in (axis, f"{axis}_force")]
    names = ("speed" if turning else "energy", *slides)
    panels = stacked(len(names), 2.9 + 1.8 * len(names)) if axes is None else tuple(axes)
    if len(panels) != len(names):
        raise InputError("axes", f"must be {len(names)} Axes", len(panels))
    motions = _motions(comparison)
    for motion in motions:
        along, *columns = curves(motion.trajectory, (across, *names))
        if turning and along.size:
            # the law's steady turn comes after many others
            along = along - 2.0 * math.pi * round(float(along[0]) / (2.0 * math.pi))
        for panel, name, column in zip(panels, names, columns, strict=True):
            if motion.driven or not name.endswith("_force"):
                draw(panel, along, column, motion.pen, motion.label)
    _finish(comparison, panels, names, across)
    if not turning:
        _crop(panels, motions)
    return panels


def _motions(comparison: Comparison) -> list[_Motion]:
    """Collect the motions that exist."""
    ideal, practical, optimal = comparison.ideal, comparison.practical, comparison.optimal
    unit = comparison.measure.unit
    motions = [
        _Motion(ideal.trajectory, IDEAL, _law_label(ideal), ideal.reached, False),
        _Motion(practical.trajectory, PRACTICAL, _law_label(practical), practical.reached, True),
    ]
    if optimal.trajectory is not None:
        if optimal.success:
            label = f"optimal, {quantity(optimal.objective.value, unit)}"
            label += "" if optimal.verified else " (not verified)"
        else:
            label = f"last iterate ({optimal.status.name}), no solution"
        motions.append(_Motion(optimal.trajectory, OPTIMAL, label, optimal.success, True))
    return motions


def _law_label(run: LawRun) -> str:
    value = run.objective.value
    if math.isnan(value):
        return f"{run.law} law, short of the goal"
    return f"{run.law} law, {quantity(value, run.objective.unit)}"


def _finish(
    comparison: Comparison, panels: tuple[Axes, ...], names: tuple[str, ...], across: str
) -> None:
    """Limits, labels, legend and title."""
    for panel, name in zip(panels, names, strict=True):
        dress(panel, name)
    for number, slide in enumerate(comparison.rig.slides):
        force = slide.standing_force
        mark_limits(panels[1 + 2 * number], slide.stroke, "ends of the stroke")
        mark_limits(
            panels[2 + 2 * number],
            (-force, force),
            "force limit",
            "the ideal law takes infinite forces, not shown",
        )
    panels[-1].set_xlabel(QUANTITIES[across].label, color=INK)
    panels[0].legend(loc="best", frameon=False)
    factor = comparison.overstatement
    title = task_words(comparison.task)
    if math.isfinite(factor):
        title += f"\nthe ideal law overstates what the limits allow by a factor of {factor:.3g}"
    panels[0].set_title(title, loc="left", fontsize="medium", color=INK)


def _crop(panels: tuple[Axes, ...], motions: Sequence[_Motion]) -> None:
    """End the time axis with the motions that reach the goal; others may go on for very long."""
    shown = [motion for motion in motions if motion.reached] or list(motions)
    end = max(float(motion.trajectory.time[-1]) for motion in shown)
    begin = min(float(motion.trajectory.time[0]) for motion in shown)
    room = 0.01 * (end - begin)
    if room > 0.0:
        for panel in panels:
            panel.set_xlim(begin - room, end + room)
            _fit_height(panel, begin, end)


def _fit_height(panel: Axes, begin: float, end: float) -> None:
    """Grow no taller than what can be seen needs; limits stay in sight."""
    seen = []
    for line in panel.get_lines():
        along, values = (np.asarray(data, dtype=float) for data in line.get_data())
        if line.get_transform() != panel.transData:  # a limit: it spans the whole width
            seen.append(values)
        else:
            seen.append(values[(along >= begin) & (along <= end)])
    heights = np.concatenate(seen) if seen else np.empty(0)
    heights = heights[np.isfinite(heights)]
    if heights.size:
        low, high = float(heights.min()), float(heights.max())
        room = 0.06 * (high - low)
        if room > 0.0:
            panel.set_ylim(low - room, high + room)
