# SPDX-License-Identifier: BSD-3-Clause
"""Search for the best local optimum.

Motions with different sequences of events lead to different optima. So every sequence that the
practical law shows is scouted by a quick relaxed solve; the promising ones are settled first, and
solves that take the law's motion as it is come in between, until the best optimum is confirmed.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from functools import partial
from itertools import zip_longest

from rotorpump.solution.status import Status
from rotorpump.solving.assignment import can_scout, gain
from rotorpump.solving.ipopt import Monitor
from rotorpump.solving.news import Reporter
from rotorpump.solving.routes import Candidate, Wanted, relax, settle_relaxed, take_direct
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Pump, Rotate, SpinUp
from rotorpump.transcription.arcs import signature
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.recovery import node_marks

AGREEMENT = 1e-2
"""Relative distance within which two local optima on a first mesh count as the same."""

PROMISE = 2e-2
"""Relative advantage of a scout over the best optimum above which it has to be settled."""

ROTATIONS = 2
"""Steady rotations that are scouted; they have but one sequence of events."""

WIDE, FINER = 0.1, 1.6
"""Spread above which the best optima are looked at again, on a so much finer mesh."""

LEAST_RUNS = {Pump: 4, SpinUp: 4, Rotate: 3}
"""Settled runs at least."""


@dataclass(frozen=True)
class Effort:
    """What a search may spend.

    Parameters
    ----------
    scouted : int
        Sequences of events that are scouted at most.
    runs : int
        Settled runs at most.
    iterations : int
        Iterations of all runs at most.
    again : int
        Optima that are looked at again at most.
    """

    scouted: int
    runs: int
    iterations: int
    again: int


PERSEVERANCE = 3
"""Factor on the effort as long as nothing has solved."""

EFFORT = {1: Effort(9, 14, 3000, 2), 2: Effort(6, 8, 2000, 0)}
"""By number of slides: an iteration takes some four times as long with two of them."""


@dataclass(eq=False)
class Search:
    """What the runs from all seeds gave.

    Parameters
    ----------
    wanted : Wanted
        What was asked.
    candidates : list of Candidate
        Solved runs, the best first.
    unsolved : list of Candidate
        Runs that did not solve, in the order in which they were made.
    scouts : list of (Candidate, Seed)
        Relaxed solutions that are not settled yet, and where they came from.
    interrupted : bool
        Whether the user stopped the search.
    """

    wanted: Wanted
    candidates: list[Candidate] = field(default_factory=list)
    unsolved: list[Candidate] = field(default_factory=list)
    scouts: list[tuple[Candidate, Seed]] = field(default_factory=list)
    interrupted: bool = False

    @property
    def effort(self) -> Effort:
        """What the search may spend."""
        return EFFORT[len(self.wanted.rig.driven)]

    @property
    def runs(self) -> int:
        """Runs made."""
        return len(self.candidates) + len(self.unsolved)

    @property
    def iterations(self) -> int:
        """Iterations of all runs."""
        everything = (*self.candidates, *self.unsolved, *(scout for scout, _ in self.scouts))
        return sum(candidate.iterations for candidate in everything)

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
        best = self.candidates[0].value
        return abs(gain(self.wanted.measure, candidate.value, best)) < AGREEMENT

    def add(self, candidate: Candidate) -> None:
        """Take in the outcome of a run."""
        if candidate.outcome.status is Status.INTERRUPTED:
            self.interrupted = True
        if candidate.solved:
            self.candidates.append(candidate)
            more = self.wanted.measure.more_is_better
            self.candidates.sort(key=lambda c: -c.value if more else c.value)
        else:
            self.unsolved.append(candidate)

    @property
    def finished(self) -> bool:
        """Whether the best optimum is confirmed, or the effort spent."""
        # without any optimum it is too early to give up
        most = 1 if self.candidates else PERSEVERANCE
        spent = self.runs >= most * self.effort.runs
        if self.interrupted or spent or self.iterations >= most * self.effort.iterations:
            return True
        enough = self.runs >= LEAST_RUNS[type(self.wanted.task)] and self.agreeing >= 2
        return enough and not self._promising

    @property
    def _promising(self) -> bool:
        """Whether a scout that is not settled yet claims more than the best optimum."""
        best = self.candidates[0].value
        return any(
            _usable(scout) and gain(self.wanted.measure, scout.value, best) > PROMISE
            for scout, _ in self.scouts
        )

    def best_effort(self) -> Candidate | None:
        """Return the best local optimum, or else where the last run ended."""
        if self.candidates:
            return self.candidates[0]
        return self.unsolved[-1] if self.unsolved else None


def search(wanted: Wanted, seeds: list[Seed], reporter: Reporter) -> Search:
    """Run seeds until the best optimum is confirmed or the effort spent.

    Ctrl-C ends the search; what was found by then is kept.
    """
    found = Search(wanted)
    scouting = can_scout(wanted.rig, wanted.measure)
    try:
        if scouting:
            _scout(found, _distinct(found, seeds), reporter)
        direct = [partial(take_direct, wanted, seed) for seed in seeds]
        settled = [partial(_settle_scout, found, scout) for scout in list(found.scouts)]
        queue = [run for pair in zip_longest(settled, direct) for run in pair if run is not None]
        for number, run in enumerate(queue, 1):
            if found.finished:
                break
            best = found.candidates[0].value if found.candidates else None
            found.add(run(reporter.monitor(f"run {number}", best)))
        if scouting and found.spread > WIDE and not found.interrupted:
            _look_again(found, reporter)
    except KeyboardInterrupt:
        found.interrupted = True
    return found


def _distinct(found: Search, seeds: list[Seed]) -> list[Seed]:
    """Pick the first seed of each sequence of events; rotations have but one, so some of them."""
    if isinstance(found.wanted.task, Rotate):
        return seeds[:ROTATIONS]
    distinct = list({seed.word: seed for seed in reversed(seeds)}.values())[::-1]
    return distinct[: found.effort.scouted]


def _scout(found: Search, seeds: list[Seed], reporter: Reporter) -> None:
    """Solve each seed with relaxed stops; the most promising first."""
    for number, seed in enumerate(seeds, 1):
        monitor = reporter.monitor(f"scout {number} of {len(seeds)}")
        scout = relax(found.wanted, seed, monitor)
        if scout.outcome.status is Status.INTERRUPTED:
            found.add(scout)
            return
        found.scouts.append((scout, seed))
    sign = -1.0 if found.wanted.measure.more_is_better else 1.0
    found.scouts.sort(key=lambda pair: (not _usable(pair[0]), sign * pair[0].value))


def _look_again(found: Search, reporter: Reporter) -> None:
    """Scout once more on a finer mesh, from the best optima of different sequences of events."""
    chains: dict[str, Candidate] = {}
    for candidate in found.candidates:
        chains.setdefault(signature(candidate.program.problem.chain), candidate)
    for number, candidate in enumerate(list(chains.values())[: found.effort.again], 1):
        monitor = reporter.monitor(f"second look {number}", found.candidates[0].value)
        marks = node_marks(candidate.program, candidate.outcome.variables)
        ends = [float(marks[k]) for k in candidate.program.mesh.edges[1:]]
        chain = candidate.program.problem.chain
        seed = Seed(Guess.from_trajectory(candidate.trajectory), chain, ends)
        scout = relax(found.wanted, seed, monitor, finer=FINER)
        if scout.outcome.status is not Status.INTERRUPTED:
            scout = settle_relaxed(found.wanted, scout, seed, monitor)
        found.add(scout)
        if found.interrupted:
            return


def _usable(scout: Candidate) -> bool:
    """Whether a scout's value means something; running out of iterations is no harm to that."""
    ended = scout.solved or scout.outcome.status is Status.LIMIT_REACHED
    return ended and not math.isnan(scout.value)


def _settle_scout(
    found: Search, scouted: tuple[Candidate, Seed], monitor: Monitor | None
) -> Candidate:
    found.scouts.remove(scouted)
    return settle_relaxed(found.wanted, *scouted, monitor)
