# SPDX-License-Identifier: BSD-3-Clause
"""What all pictures share: colours, curves between the nodes, limits as lines, figures.

Figures are made without any global state, so that pictures need no screen.
"""

from __future__ import annotations

import math
import textwrap
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from numpy.typing import NDArray

from rotorpump.checking.intervals import IntervalSamples
from rotorpump.quantities import QUANTITIES
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

INK = "#2b2b33"
FAINT = "#c9c9d1"
LIMIT = "#8c1d40"
"""Text, things in the background, limits."""

DOTS = (0, (1.0, 2.0))
LIMIT_WIDTH = 1.0
LABEL_WIDTH = 16
"""Letters in a line of a vertical label."""


@dataclass(frozen=True)
class Pen:
    """How a motion is drawn: colour, width and dashes differ, so that no one clue is needed."""

    colour: str
    width: float
    dashes: str | tuple[int, tuple[float, ...]]
    order: float


IDEAL = Pen("#9a9aa6", 1.3, (0, (5.0, 1.6)), 2.0)
PRACTICAL = Pen("#e0912f", 1.5, (0, (1.6, 1.2)), 2.2)
OPTIMAL = Pen("#0f4c81", 2.0, "-", 2.4)

PLACES = np.linspace(0.0, 1.0, 6)
"""Where an interval is evaluated for a curve."""


def curves(trajectory: Trajectory, names: Sequence[str]) -> list[Array]:
    """Evaluate quantities between the nodes, both sides of every jump included.

    Parameters
    ----------
    trajectory : Trajectory
        The motion.
    names : sequence of str
        Names of quantities.

    Returns
    -------
    list of ndarray, shape (n,)
        The quantities, each in its SI unit; no points if the motion has no duration.
    """
    samples = IntervalSamples(trajectory, PLACES)
    return [
        samples.time.ravel() if name == "time" else samples.column(name).ravel() for name in names
    ]


def stacked(count: int, height: float) -> tuple[Axes, ...]:
    """Return axes below each other with one horizontal axis, in a figure of their own."""
    figure = Figure(figsize=(8.0, height), layout="constrained")
    grid = figure.subplots(count, 1, sharex=True, squeeze=False)
    figure.align_ylabels(grid[:, 0])
    return tuple(grid[:, 0])


def single(width: float, height: float) -> Axes:
    """Return axes in a figure of their own."""
    return Figure(figsize=(width, height), layout="constrained").subplots()


def draw(axes: Axes, across: Array, values: Array, pen: Pen, label: str) -> None:
    """Draw a curve."""
    axes.plot(
        across,
        values,
        color=pen.colour,
        linewidth=pen.width,
        linestyle=pen.dashes,
        zorder=pen.order,
        label=label,
    )


def mark_limits(axes: Axes, values: Sequence[float], words: str, more: str = "") -> None:
    """Draw limits as dotted lines, make room for them, and say above the axes what they are.

    Infinite ones are left out. ``more`` is said in any case.
    """
    shown = [value for value in values if math.isfinite(value)]
    for index, value in enumerate(shown):
        label = words if index == 0 else "_"
        axes.axhline(value, color=LIMIT, linewidth=LIMIT_WIDTH, linestyle=DOTS, label=label)
    said = [f"dotted: {words}"] if shown else []
    said += [more] if more else []
    if said:
        axes.set_title("; ".join(said), loc="right", fontsize="small", color=INK, pad=3.0)
    if shown:
        low, high = axes.get_ylim()
        low, high = min(low, *shown), max(high, *shown)
        room = 0.06 * (high - low)
        axes.set_ylim(low - room, high + room)


def dress(axes: Axes, name: str) -> None:
    """Label the vertical axis with a quantity and its unit, and draw a light grid."""
    axes.set_ylabel(textwrap.fill(QUANTITIES[name].label, LABEL_WIDTH), color=INK)
    axes.grid(True, color=FAINT, linewidth=0.5, alpha=0.6)
    axes.set_axisbelow(True)
    axes.spines[["top", "right"]].set_visible(False)
    axes.margins(x=0.01)
