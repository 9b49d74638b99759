# SPDX-License-Identifier: BSD-3-Clause
"""Search for the best local optimum: seeds and routes are tried until the best is confirmed."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

from rotorpump.rig.rig import Rig
from rotorpump.solution.status import Status
from rotorpump.solving.assignment import gain
from rotorpump.solving.news import Reporter
from rotorpump.solving.routes import Candidate, routes_for
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Task, measure

AGREEMENT = 5e-3
"""Relative distance within which two local optima count as the same."""

LEAST_RUNS = 3
MOST_RUNS = 14
MOST_ITERATIONS = 3000
"""Runs (a seed on a route) that are made at least and at most, and iterations of all of them."""


@dataclass(eq=False)
class Search:
    """What the runs from all seeds gave.

    Parameters
    ----------
    rig, task : Rig, Task
        What was asked.
    candidates : list of Candidate
        Solved runs, the best first.
    unsolved : list of Candidate
        Runs that did not solve, in the order in which they were made.
    interrupted : bool
        Whether the user stopped the search.
    """

    rig: Rig
    task: Task
    candidates: list[Candidate] = field(default_factory=list)
    unsolved: list[Candidate] = field(default_factory=list)
    interrupted: bool = False

    @property
    def runs(self) -> int:
        """Runs made."""
        return len(self.candidates) + len(self.unsolved)

    @property
    def iterations(self) -> int:
        """Iterations of all runs."""
        return sum(c.iterations for c in (*self.candidates, *self.unsolved))

    @property
    def spread(self) -> float:
        """Relative distance between the best and the worst local optimum."""
        if not self.candidates:
            return math.nan
        best, worst = self.candidates[0].value, self.candidates[-1].value
        return abs(best - worst) / max(abs(best), 1e-300)

    @property
    def agreeing(self) -> int:
        """Runs that found the best local optimum."""
        return sum(self._agrees(c) for c in self.candidates)

    def _agrees(self, candidate: Candidate) -> bool:
        return abs(gain(measure(self.task), candidate.value, self.candidates[0].value)) < AGREEMENT

    def add(self, candidate: Candidate) -> None:
        """Take in the outcome of a run."""
        if candidate.outcome.status is Status.INTERRUPTED:
            self.interrupted = True
        if candidate.solved:
            self.candidates.append(candidate)
            more = measure(self.task).more_is_better
            self.candidates.sort(key=lambda c: -c.value if more else c.value)
        else:
            self.unsolved.append(candidate)

    @property
    def finished(self) -> bool:
        """Whether the best optimum is confirmed, or the effort spent."""
        spent = self.runs >= MOST_RUNS or self.iterations >= MOST_ITERATIONS
        return self.interrupted or spent or (self.runs >= LEAST_RUNS and self.agreeing >= 2)

    def best_effort(self) -> Candidate | None:
        """Return the best local optimum, or else where the last run ended."""
        if self.candidates:
            return self.candidates[0]
        return self.unsolved[-1] if self.unsolved else None


def search(rig: Rig, task: Task, seeds: list[Seed], reporter: Reporter) -> Search:
    """Run the seeds on all routes, one after the other, until the best optimum is confirmed.

    Ctrl-C ends the search; what was found by then is kept.
    """
    found = Search(rig, task)
    try:
        for number, seed in enumerate(seeds, 1):
            for route in routes_for(rig):
                best = found.candidates[0].value if found.candidates else None
                stage = f"start {number} of {len(seeds)}"
                found.add(route(rig, task, seed, reporter.monitor(stage, best)))
                if found.finished:
                    return found
    except KeyboardInterrupt:
        found.interrupted = True
    return found
