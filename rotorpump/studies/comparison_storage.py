# SPDX-License-Identifier: BSD-3-Clause
"""A comparison as JSON, and its files."""

from __future__ import annotations

from pathlib import Path

from rotorpump.solution.files import prepare_folder, write_text
from rotorpump.solution.storage import Document, json_text, number, save_trajectory
from rotorpump.solution.wording import task_word
from rotorpump.studies.comparison import Comparison


def comparison_document(comparison: Comparison) -> Document:
    """Return a comparison as what JSON can hold, values in the unit of the objective.

    Returns
    -------
    dict
        With task, objective, ideal, practical, optimal, overstatement, attribution; None for what
        is not a finite number.
    """
    measure = comparison.measure
    return {
        "task": task_word(comparison.task),
        "objective": {"name": measure.name, "unit": measure.unit},
        "ideal": {"value": number(comparison.ideal.objective.value)},
        "practical": {"value": number(comparison.practical.objective.value)},
        "optimal": {
            "value": number(comparison.optimal_value),
            "verified": comparison.optimal.verified,
        },
        "overstatement": number(comparison.overstatement),
        "attribution": [
            {"step": step, "value": number(value)} for step, value in comparison.attribution
        ],
    }


def save_comparison(comparison: Comparison, folder: str | Path) -> tuple[Path, ...]:
    """Write ``compare.json`` and ``trajectory.csv`` of the best motion, each whole or not at all.

    Parameters
    ----------
    comparison : Comparison
        The comparison. Without a best motion there is no ``trajectory.csv``, and one that an
        earlier comparison left is removed.
    folder : str or Path
        Where to write; created if need be.

    Returns
    -------
    tuple of Path
        The files written.

    Raises
    ------
    InputError
        If the folder or a file cannot be written.
    """
    document = comparison_document(comparison)
    place = prepare_folder(folder)
    report = place / "compare.json"
    write_text(report, json_text(document))
    return report, *save_trajectory(comparison.optimal.trajectory, place)
