# SPDX-License-Identifier: BSD-3-Clause
"""What the search keeps of its runs, and when it ends."""

from __future__ import annotations

import math
from types import SimpleNamespace

import pytest
from posed_programs import rig_on

from rotorpump.measures import measure
from rotorpump.solution.status import Status
from rotorpump.solving import search as subject
from rotorpump.solving.routes import Candidate, Wanted
from rotorpump.solving.search import Search
from rotorpump.tasks import Pump, Rotate, SpinUp

PUMP = Pump(duration=4.0, start_angle=0.5)
SPIN_UP = SpinUp(energy=5.0, start_angle=0.5)


def run(value: float, status: Status = Status.SOLVED, iterations: int = 10) -> Candidate:
    """A run that ended like this; nothing else of it is looked at."""
    return Candidate(None, SimpleNamespace(status=status), None, value, iterations)


def search_with(*values: float, task=PUMP) -> Search:
    found = Search(Wanted(rig_on(), task, measure(task)))
    for value in values:
        found.add(run(value))
    return found


def test_an_empty_search_has_found_nothing():
    found = search_with()
    assert (found.runs, found.iterations, found.agreeing) == (0, 0, 0)
    assert math.isnan(found.spread)
    assert found.best_effort() is None
    assert not found.finished


@pytest.mark.parametrize(("task", "best"), [(PUMP, 7.0), (Rotate(), 7.0), (SPIN_UP, 3.0)])
def test_the_best_comes_first(task, best):
    found = search_with(5.0, 7.0, 3.0, task=task)
    values = [candidate.value for candidate in found.candidates]
    assert values == sorted(values, reverse=best == 7.0)
    assert values[0] == best
    assert found.best_effort() is found.candidates[0]


@pytest.mark.parametrize(("task", "spread"), [(PUMP, 0.5), (SPIN_UP, 1.0)])
def test_the_spread_is_relative_to_the_best(task, spread):
    assert search_with(8.0, 6.0, 4.0, task=task).spread == pytest.approx(spread)
    assert search_with(8.0).spread == 0.0


@pytest.mark.parametrize("task", [PUMP, SPIN_UP])
def test_runs_agree_that_found_the_best_value(task):
    best = 2.0
    worse = -1.0 if task is PUMP else 1.0
    near = best * (1.0 + 0.5 * worse * subject.AGREEMENT)
    far = best * (1.0 + 2.0 * worse * subject.AGREEMENT)
    assert search_with(best, task=task).agreeing == 1
    assert search_with(best, near, task=task).agreeing == 2
    assert search_with(far, best, near, far, task=task).agreeing == 2


def test_a_better_optimum_has_to_be_confirmed_anew():
    found = search_with(2.0, 2.0)
    assert found.agreeing == 2
    found.add(run(3.0))
    assert found.agreeing == 1


def test_runs_that_did_not_solve_are_counted_apart():
    found = search_with(2.0)
    found.add(run(9.0, Status.INFEASIBLE, iterations=40))
    found.add(run(9.5, Status.LIMIT_REACHED, iterations=50))
    assert (found.runs, found.iterations, found.agreeing) == (3, 100, 1)
    assert found.spread == 0.0
    assert found.best_effort().value == 2.0
    assert [candidate.value for candidate in found.unsolved] == [9.0, 9.5]


def test_an_acceptable_run_counts_as_solved():
    found = search_with()
    found.add(run(2.0, Status.ACCEPTABLE))
    assert found.agreeing == 1


def test_without_an_optimum_the_last_run_is_shown():
    found = search_with()
    for value in (1.0, 2.0):
        found.add(run(value, Status.FAILED))
    assert found.best_effort().value == 2.0
    assert not found.finished


@pytest.mark.parametrize("task", [PUMP, SPIN_UP, Rotate()])
def test_it_ends_when_enough_runs_agree(task):
    least = subject.LEAST_RUNS[type(task)]
    assert not search_with(*[2.0] * (least - 1), task=task).finished
    assert search_with(*[2.0] * least, task=task).finished


def test_it_goes_on_while_the_best_stands_alone():
    lonely = (3.0, *[2.0] * (subject.EFFORT[1].runs - 2))
    found = search_with(*lonely)
    assert not found.finished
    found.add(run(2.0, Status.FAILED))
    assert found.runs == subject.EFFORT[1].runs
    assert found.finished


def test_it_ends_when_the_iterations_are_spent():
    found = search_with(2.0)
    found.add(run(1.0, Status.FAILED, iterations=subject.EFFORT[1].iterations))
    assert found.finished


def test_it_ends_when_the_user_stops_it():
    found = search_with(2.0)
    found.add(run(5.0, Status.INTERRUPTED))
    assert found.interrupted
    assert found.finished
    assert found.best_effort().value == 2.0


@pytest.mark.parametrize(("claim", "goes_on"), [(1.0 + 2.0, True), (1.0 + 0.5, False)])
def test_a_scout_that_claims_clearly_more_is_settled_first(claim, goes_on):
    found = search_with(*[2.0] * subject.LEAST_RUNS[Pump])
    scout = run(2.0 * (1.0 + (claim - 1.0) * subject.PROMISE))
    found.scouts.append((scout, None))
    assert found.finished is not goes_on
    found.scouts.clear()
    assert found.finished


def test_the_iterations_of_scouts_count():
    found = search_with(2.0)
    found.scouts.append((run(9.0, iterations=subject.EFFORT[1].iterations), None))
    assert found.finished
