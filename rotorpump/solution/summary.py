# SPDX-License-Identifier: BSD-3-Clause
"""A solution as lines of text."""

from __future__ import annotations

from rotorpump.solution.solution import Solution, Statistics
from rotorpump.solution.wording import drive_lines, limit_lines, quantity, task_words, verdict_lines


def summarize(solution: Solution) -> str:
    """Return outcome, limits, checks and effort as lines of text.

    Parameters
    ----------
    solution : Solution
        The solution, successful or not.
    """
    objective = solution.objective
    value = quantity(objective.value, objective.unit)
    what = f"{objective.name}: {value}"
    if not solution.success:
        what += " (of the last iterate, which is no solution)"
    lines = [
        task_words(solution.task),
        what,
        f"{solution.status.name}: {solution.message}",
    ]
    if solution.success:
        lines += verdict_lines(solution)
    for table in (limit_lines(solution.limits, objective.unit), drive_lines(solution.drives)):
        if table:
            lines += ["", *table]
    return "\n".join([*lines, "", effort(solution.statistics)])


def effort(statistics: Statistics) -> str:
    """Return what a solve cost in words."""
    words = (
        f"{statistics.iterations} iterations, {statistics.seconds:.1f} s,"
        f" {statistics.intervals} intervals, {statistics.refinements} refinements"
    )
    if statistics.starts > 1:
        words += (
            f"; {statistics.starts} starts, their optima within"
            f" {100.0 * statistics.spread:.2g} % of each other"
        )
    return words
