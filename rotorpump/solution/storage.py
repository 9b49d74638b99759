# SPDX-License-Identifier: BSD-3-Clause
"""Results as JSON and CSV.

Everything is in SI units. What is not a finite number is null in JSON, which knows no other.
"""

from __future__ import annotations

import csv
import json
import math
from pathlib import Path
from typing import Any

from rotorpump.errors import InputError
from rotorpump.quantities import QUANTITIES, positive
from rotorpump.solution.files import prepare_folder, replacing, write_text
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.solution.solution import Solution
from rotorpump.solution.trajectory import Trajectory

Document = dict[str, Any]

HIGHEST_RATE = 1e5
"""Highest rate of samples [Hz], so that a slip of the finger does not fill the memory."""


def sample_rate(field: str, value: object) -> float:
    """Return a rate of samples [Hz]; it must be above zero and at most 100 kHz.

    Raises
    ------
    InputError
        If it is not.
    """
    rate = positive(field, value)
    if rate > HIGHEST_RATE:
        raise InputError(field, f"must not be above {HIGHEST_RATE:.0f} Hz", value)
    return rate


def solution_document(solution: Solution, sample: float | None = None) -> Document:
    """Return a solution as what JSON can hold.

    Parameters
    ----------
    solution : Solution
        The solution, successful or not.
    sample : float, optional
        Rate of uniform samples of the trajectory [Hz]; its nodes by default.

    Returns
    -------
    dict
        With status, success, verified, message, objective, trajectory (a list for each quantity,
        or None if there is none), checks, limits, drives, statistics.

    Raises
    ------
    InputError
        If the rate is not positive, or above 100 kHz.
    """
    statistics = solution.statistics
    return {
        "status": solution.status.name,
        "success": solution.success,
        "verified": solution.verified,
        "message": solution.message,
        "objective": _objective(solution.objective),
        "trajectory": trajectory_document(sampled(solution.trajectory, sample)),
        "checks": [
            {
                "name": check.name,
                "value": number(check.value),
                "tolerance": number(check.tolerance),
                "passed": check.passed,
            }
            for check in solution.checks
        ],
        "limits": [
            {
                "name": limit.name,
                "value": number(limit.value),
                "unit": limit.unit,
                "active_share": number(limit.active_share),
                "price": number(limit.price),
            }
            for limit in solution.limits
        ],
        "drives": [
            {
                "axis": use.axis,
                "peak_force": number(use.peak_force),
                "rms_force": number(use.rms_force),
                "peak_power": number(use.peak_power),
                "work": number(use.work),
                "heat": number(use.heat),
            }
            for use in solution.drives
        ],
        "statistics": {
            "iterations": statistics.iterations,
            "seconds": number(statistics.seconds),
            "intervals": statistics.intervals,
            "refinements": statistics.refinements,
        },
    }


def law_document(run: LawRun, sample: float | None = None) -> Document:
    """Return the run of a law as what JSON can hold.

    Parameters
    ----------
    run : LawRun
        The run.
    sample : float, optional
        Rate of uniform samples of the trajectory [Hz]; its nodes by default.

    Raises
    ------
    InputError
        If the rate is not positive, or above 100 kHz.
    """
    return {
        "law": run.law,
        "reached": run.reached,
        "message": run.message,
        "leads": None if run.leads is None else [number(lead) for lead in run.leads],
        "objective": _objective(run.objective),
        "trajectory": trajectory_document(sampled(run.trajectory, sample)),
    }


def trajectory_document(trajectory: Trajectory | None) -> dict[str, list[float | None]] | None:
    """Return a list for each quantity, time first."""
    if trajectory is None:
        return None
    return {
        name: [number(value) for value in column.tolist()]
        for name, column in trajectory.columns().items()
    }


def sampled(trajectory: Trajectory | None, rate: float | None) -> Trajectory | None:
    """Return uniform samples at ``rate`` [Hz], or the trajectory itself without a rate."""
    if trajectory is None or rate is None:
        return trajectory
    return trajectory.sample(sample_rate("sample", rate))


def number(value: float) -> float | None:
    """Return a finite number as it is, anything else as None."""
    return float(value) if math.isfinite(value) else None


def json_text(document: Document) -> str:
    """Return a document as JSON text with one line for each key, the same for the same document."""
    lines = [
        f"  {json.dumps(key)}: {json.dumps(value, allow_nan=False)}"
        for key, value in document.items()
    ]
    return "{\n" + ",\n".join(lines) + "\n}\n"


def save_solution(
    solution: Solution, folder: str | Path, sample: float | None = None
) -> tuple[Path, ...]:
    """Write ``solution.json`` and ``trajectory.csv``, each whole or not at all.

    Parameters
    ----------
    solution : Solution
        The solution, successful or not. Without a trajectory there is no ``trajectory.csv``, and
        one that an earlier solution left is removed.
    folder : str or Path
        Where to write; created if need be.
    sample : float, optional
        Rate of uniform samples [Hz]; the nodes by default.

    Returns
    -------
    tuple of Path
        The files written.

    Raises
    ------
    InputError
        If the folder or a file cannot be written, or the rate is not positive or above 100 kHz.
    """
    document = solution_document(solution, sample)
    place = prepare_folder(folder)
    report = place / "solution.json"
    write_text(report, json_text(document))
    return report, *save_trajectory(sampled(solution.trajectory, sample), place)


def save_trajectory(trajectory: Trajectory | None, folder: Path) -> tuple[Path, ...]:
    """Write ``trajectory.csv``, or remove an earlier one if there is no trajectory now.

    Raises
    ------
    InputError
        If the file cannot be written.
    """
    table = folder / "trajectory.csv"
    if trajectory is None:
        table.unlink(missing_ok=True)
        return ()
    write_csv(trajectory, table)
    return (table,)


def write_csv(trajectory: Trajectory, path: str | Path) -> None:
    """Write the nodes of a trajectory as comma-separated values.

    One column for each quantity, headed by its name and SI unit; every number has all its digits.

    Raises
    ------
    InputError
        If the file cannot be written.
    """
    columns = trajectory.columns()
    rows = zip(*(column.tolist() for column in columns.values()), strict=True)
    with (
        replacing(Path(path)) as part,
        part.open("w", encoding="utf-8", newline="") as file,
    ):
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow([QUANTITIES[name].heading for name in columns])
        writer.writerows([[repr(value) for value in row] for row in rows])


def _objective(objective: Objective) -> Document:
    return {
        "name": objective.name,
        "value": number(objective.value),
        "unit": objective.unit,
    }
