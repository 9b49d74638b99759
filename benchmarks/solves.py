# SPDX-License-Identifier: BSD-3-Clause
"""What the benchmarks share: solves with their time, and tables printed row by row."""

from __future__ import annotations

import time
from dataclasses import dataclass

import rotorpump
from rotorpump.measures import measure
from rotorpump.rig.rig import Rig
from rotorpump.solution.solution import Solution
from rotorpump.solution.wording import verdict_lines
from rotorpump.tasks import Task


@dataclass(frozen=True, eq=False)
class Timed:
    """A solution, and the wall-clock time that it took [s]."""

    solution: Solution
    seconds: float

    @property
    def good(self) -> bool:
        """Whether it is a solution and passed every check."""
        return self.solution.success and self.solution.verified

    @property
    def value(self) -> str:
        """The objective with its unit, or the status where there is no solution."""
        solution = self.solution
        if not solution.success:
            return solution.status.name
        return f"{solution.objective.value:.6g} {solution.objective.unit}"

    @property
    def verdict(self) -> str:
        """Whether it is verified, in a word."""
        return "yes" if self.solution.verified else "NO"

    def explain(self) -> None:
        """Print why it is no solution, or which checks failed; nothing where all is well."""
        if not self.solution.success:
            print(f"  {self.solution.message}", flush=True)
        elif not self.solution.verified:
            print(*verdict_lines(self.solution), sep="\n", flush=True)


def timed_solve(rig: Rig, task: Task, objective: str | None = None) -> Timed:
    """Optimize with default settings."""
    began = time.perf_counter()
    solution = rotorpump.optimize(rig, task, objective=objective, on_failure="return")
    return Timed(solution, time.perf_counter() - began)


def shortfall(task: Task, value: float, other: float, objective: str | None = None) -> float:
    """Share by which a value of the objective is worse than another; negative if better."""
    share = value / other - 1.0
    return -share if measure(task, objective).more_is_better else share


def print_findings(words: str, found: list[str]) -> None:
    """Print what was looked for, and in one line each what was found."""
    print(f"{words}: {len(found) or 'none'}", *found, sep="\n  ", flush=True)


class Table:
    """A table that is printed row by row, as the results come.

    Parameters
    ----------
    columns : dict of str to str
        Alignment and width of each column by its heading, as in "<12".
    """

    def __init__(self, columns: dict[str, str]) -> None:
        self._layout = columns

    def head(self) -> None:
        """Print the headings."""
        self.row(*self._layout)

    def row(self, *cells: str) -> None:
        """Print one row."""
        pairs = zip(cells, self._layout.values(), strict=True)
        print("  ".join(f"{cell:{layout}}" for cell, layout in pairs).rstrip(), flush=True)
