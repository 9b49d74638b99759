# SPDX-License-Identifier: BSD-3-Clause
"""Pictures as PNG files."""

from __future__ import annotations

from pathlib import Path

from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from rotorpump.plotting.compare import plot_comparison
from rotorpump.plotting.motion import plot_motion
from rotorpump.plotting.profiles import plot_profiles
from rotorpump.solution.files import replacing
from rotorpump.solution.solution import Solution
from rotorpump.studies.comparison import Comparison

RESOLUTION = 130
"""Dots per inch."""


def save_comparison_pictures(comparison: Comparison, folder: Path) -> tuple[Path, ...]:
    """Write ``compare.png``, and ``motion.png`` and ``profiles.png`` of the best motion.

    Parameters
    ----------
    comparison : Comparison
        The comparison.
    folder : Path
        Where to write; it exists.

    Returns
    -------
    tuple of Path
        The files written.

    Raises
    ------
    InputError
        If a file cannot be written.
    """
    overview = folder / "compare.png"
    save_picture(plot_comparison(comparison)[0], overview)
    return overview, *save_solution_pictures(comparison.optimal, folder)


def save_solution_pictures(solution: Solution, folder: Path) -> tuple[Path, ...]:
    """Write ``motion.png`` and ``profiles.png``; without a trajectory, remove earlier ones.

    Raises
    ------
    InputError
        If a file cannot be written.
    """
    motion, profiles = folder / "motion.png", folder / "profiles.png"
    if solution.trajectory is None:
        for stale in (motion, profiles):
            stale.unlink(missing_ok=True)
        return ()
    save_picture(plot_motion(solution), motion)
    save_picture(plot_profiles(solution)[0], profiles)
    return motion, profiles


def save_picture(axes: Axes, path: Path) -> None:
    """Write the figure in which ``axes`` stand as PNG, whole or not at all.

    Raises
    ------
    InputError
        If the file cannot be written.
    """
    figure = axes.get_figure(root=True)
    if not isinstance(figure, Figure):
        raise TypeError("axes must stand in a figure")
    FigureCanvasAgg(figure)
    with replacing(path) as part:
        figure.savefig(part, format="png", dpi=RESOLUTION, metadata={"Software": None})
