# SPDX-License-Identifier: BSD-3-Clause
"""The wheel seen from the front, and the path of the mass in space."""

from __future__ import annotations

import math

import numpy as np
from matplotlib.axes import Axes
from matplotlib.collections import LineCollection
from matplotlib.colors import LinearSegmentedColormap
from matplotlib.patches import Circle
from numpy.typing import NDArray

from rotorpump.plotting.look import DOTS, FAINT, INK, LIMIT, LIMIT_WIDTH, curves, single
from rotorpump.plotting.profiles import headline, motion_of
from rotorpump.quantities import QUANTITIES
from rotorpump.rig.rig import Rig
from rotorpump.solution.solution import Solution
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

LAST_SWINGS = 2
MOST_TURNS = 1.0
"""The last part of the motion that is emphasised: so many swings, at most so many turns."""

INSTANTS = 4
"""Instants at which the wheel is drawn."""

EARLY = "#a4a4b0"
COLOURS = LinearSegmentedColormap.from_list("late", ["#1c2466", "#1d8c8c", "#f4a83c"])
"""Lighter and yellower with time, so that hue is not the only clue."""

RIM = 1.22
"""Radius of the drawn rim, in units of the farthest place of the mass."""


def plot_motion(solution: Solution, axes: Axes | None = None) -> Axes:
    """Draw the wheel from the front at a few instants, and the path of the mass, colour by time.

    Parameters
    ----------
    solution : Solution
        A solution with a trajectory.
    axes : Axes, optional
        Where to draw; in a new figure by default.

    Returns
    -------
    Axes
        The last two swings (at most one turn) are emphasised, what was before is faint. The
        circles are the farthest and the nearest place of the mass; gravity points down; positive
        turns are counter-clockwise.

    Raises
    ------
    InputError
        If the solution has no trajectory.
    """
    trajectory = motion_of(solution)
    axes = single(7.4, 7.0) if axes is None else axes
    rig = solution.rig
    time, angle, speed, x, y = _path(trajectory)
    begin = emphasis(angle, speed)
    _draw_wheel(axes, rig)
    if begin > 0:
        early = "path of the mass before"
        axes.plot(x[: begin + 1], y[: begin + 1], color=EARLY, linewidth=0.9, label=early)
    points = np.column_stack([x, y])[begin:]
    if len(points) > 1:
        _draw_late(axes, time[begin:], points)
        _draw_instants(axes, rig, trajectory, float(time[begin]))
    _finish(axes, rig, headline(solution))
    return axes


def emphasis(angle: Array, speed: Array) -> int:
    """Index at which the emphasised last part of a motion begins.

    Parameters
    ----------
    angle, speed : ndarray, shape (n,)
        Wheel angle [rad] and speed [rad/s] along the motion.
    """
    if angle.size == 0:
        return 0
    turns = np.flatnonzero(np.diff(np.sign(speed[speed != 0.0])) != 0.0)
    moving = np.flatnonzero(speed != 0.0)
    # one swing is what lies between two turning points; the last one may be unfinished
    first = int(moving[turns[-LAST_SWINGS]]) if turns.size >= LAST_SWINGS else 0
    travel = np.concatenate([[0.0], np.cumsum(np.abs(np.diff(angle)))])
    far = travel[-1] - travel > MOST_TURNS * 2.0 * math.pi
    return max(first, int(np.count_nonzero(far)))


def _path(trajectory: Trajectory) -> list[Array]:
    """Time, angle, wheel speed, and the place of the mass to the right and up."""
    names = ("time", "angle", "speed", "radial", "tangential")
    time, angle, speed, radial, tangential = curves(trajectory, names)
    x, y = _place(angle, radial, tangential)
    return [time, angle, speed, x, y]


def _place(angle: Array, radial: Array, tangential: Array) -> tuple[Array, Array]:
    """Place of the mass seen from the front, to the right of the axle and above it [m].

    Notes
    -----
    x = ρ sin φ + τ cos φ, y = -ρ cos φ + τ sin φ.
    """
    sine, cosine = np.sin(angle), np.cos(angle)
    return radial * sine + tangential * cosine, -radial * cosine + tangential * sine


def _draw_wheel(axes: Axes, rig: Rig) -> None:
    """Rim, axle, and the range of the mass's distance from the axle as circles."""
    inner, outer = _reach(rig)
    axes.add_patch(Circle((0.0, 0.0), RIM * outer, fill=False, edgecolor=FAINT, linewidth=5.0))
    axes.add_patch(Circle((0.0, 0.0), 0.03 * outer, facecolor=INK, zorder=4.0))
    around = np.linspace(0.0, 2.0 * math.pi, 361)
    for radius, label in ((inner, "nearest and farthest place of the mass"), (outer, "_")):
        axes.plot(
            radius * np.cos(around),
            radius * np.sin(around),
            color=LIMIT,
            linewidth=LIMIT_WIDTH,
            linestyle=DOTS,
            label=label,
        )


def _reach(rig: Rig) -> tuple[float, float]:
    """Nearest and farthest place of the mass from the axle [m]."""
    low, high = rig.stroke("tangential")
    side = 0.0 if low < 0.0 < high else min(abs(low), abs(high))
    near, far = rig.stroke("radial")
    return math.hypot(near, side), math.hypot(far, max(abs(low), abs(high)))


def _rails(rig: Rig, radial: float, tangential: float) -> list[tuple[Array, Array]]:
    """Return the ends of each rail in the wheel, radial and tangential, where the mass is."""
    rails = {
        "radial": (np.array(rig.stroke("radial")), np.full(2, tangential)),
        "tangential": (np.full(2, radial), np.array(rig.stroke("tangential"))),
    }
    return [rails[axis] for axis in rig.driven]


def _draw_late(axes: Axes, time: Array, points: Array) -> None:
    """Draw the emphasised part, coloured by time."""
    pieces = np.stack([points[:-1], points[1:]], axis=1)
    late = LineCollection(list(pieces), cmap=COLOURS, linewidths=2.6, capstyle="round", zorder=3.0)
    late.set_array(0.5 * (time[:-1] + time[1:]))
    late.set_clim(float(time[0]), float(time[-1]))
    axes.add_collection(late)
    bar = axes.get_figure().colorbar(late, ax=axes, shrink=0.75, pad=0.02)  # type: ignore[union-attr]
    bar.set_label(QUANTITIES["time"].label, color=INK)


def _draw_instants(axes: Axes, rig: Rig, trajectory: Trajectory, begin: float) -> None:
    """Draw slide and mass at a few numbered instants, spread evenly within the emphasised part."""
    places = (np.arange(INSTANTS) + 0.5) / INSTANTS
    times = begin + places * (float(trajectory.time[-1]) - begin)
    there = trajectory.at(times)
    x, y = _place(there.angle, there.radial, there.tangential)
    moments = ", ".join(f"{moment:.3g}" for moment in times)
    axes.annotate(
        f"1 to {INSTANTS}: the slides at\n{moments} s",
        (0.015, 0.02),
        xycoords="axes fraction",
        fontsize="small",
        color=INK,
    )
    for index in range(INSTANTS):
        for rail in _rails(rig, float(there.radial[index]), float(there.tangential[index])):
            ends = _place(np.full(2, there.angle[index]), *rail)
            axes.plot(*ends, color=INK, linewidth=1.0, zorder=3.4)
        axes.plot(x[index], y[index], "o", color="white", markeredgecolor=INK, ms=13, zorder=3.6)
        axes.annotate(
            str(index + 1),
            (float(x[index]), float(y[index])),
            ha="center",
            va="center",
            fontsize=8,
            color=INK,
            zorder=3.8,
        )


def _finish(axes: Axes, rig: Rig, title: str) -> None:
    """Gravity, labels, equal scales."""
    reach = RIM * _reach(rig)[1]
    axes.annotate(
        "",
        (-1.12 * reach, 0.72 * reach),
        (-1.12 * reach, 1.08 * reach),
        arrowprops={"arrowstyle": "-|>", "color": INK, "linewidth": 1.4},
    )
    axes.annotate("gravity", (-1.08 * reach, 0.9 * reach), va="center", color=INK)
    axes.set_xlim(-1.2 * reach, 1.2 * reach)
    axes.set_ylim(-1.2 * reach, 1.2 * reach)
    axes.set_aspect("equal")
    axes.set_xlabel("to the right of the axle [m]", color=INK)
    axes.set_ylabel("above the axle [m]", color=INK)
    axes.set_title(title, loc="left", fontsize="medium", color=INK)
    axes.legend(loc="lower right", frameon=False, fontsize="small")
