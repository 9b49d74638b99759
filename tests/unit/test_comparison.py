# SPDX-License-Identifier: BSD-3-Clause
"""The comparison: what is run, overstatement, ladder of limits, table, files."""

from __future__ import annotations

import json
import math
from dataclasses import replace

import pytest
from made_results import (
    MISSED,
    made_comparison,
    made_law,
    made_solution,
    timed_comparison,
    unsolved,
)
from simulated_motion import example_rig

from rotorpump.errors import InputError, SolveError
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.slide import Slide
from rotorpump.solution.objective import Objective
from rotorpump.solution.status import Status
from rotorpump.studies import comparison as module
from rotorpump.studies.comparison import compare, with_speed_limits_alone
from rotorpump.studies.comparison_storage import comparison_document, save_comparison
from rotorpump.tasks import Pump, SpinUp

TASK = Pump(duration=8.0, start_angle=0.3)
FORCED = Slide(stroke=(0.2, 0.4), force=40.0)


class Solver:
    """Stands in for the optimizer; more force than the rig has brings 2 J more."""

    def __init__(self, failing=()):
        self.failing = failing
        self.rigs = []
        self.options = []

    def __call__(self, rig, task, **options):
        self.rigs.append(rig)
        self.options.append(options)
        if len(self.rigs) in self.failing:
            solution = unsolved(Status.FAILED)
            if options["on_failure"] == "raise":
                raise SolveError(solution.message, solution)
            return solution
        value = 6.0 if math.isinf(rig.radial.force) else 4.0
        return made_solution(rig=rig, task=task, objective=Objective("energy", value, "J"))


@pytest.fixture
def solver(monkeypatch):
    stand_in = Solver()
    replace_all(monkeypatch, stand_in)
    return stand_in


def replace_all(monkeypatch, solver):
    monkeypatch.setattr(module, "optimize", solver)
    monkeypatch.setattr(module, "run_ideal", lambda *_, objective: made_law("ideal", 12.0))
    monkeypatch.setattr(module, "run_practical", lambda *_, objective: made_law("practical", 3.0))


def test_runs_both_laws_and_one_solve(solver):
    rig = example_rig()
    found = compare(rig, TASK, accuracy=1e-3)
    assert (found.rig, found.task) == (rig, TASK)
    assert found.ideal.law == "ideal"
    assert found.practical.law == "practical"
    assert found.optimal.objective.value == 4.0
    assert solver.rigs == [rig]
    assert solver.options[0]["accuracy"] == 1e-3
    assert solver.options[0]["objective"] == "energy"
    assert found.overstatement == 3.0
    assert found.attribution == (("no limits", 12.0), ("all limits", 4.0))
    assert found.solutions == (found.optimal,)


def test_attribution_frees_the_force_alone(solver):
    rig = example_rig()
    found = compare(rig, TASK, attribute=True)
    assert solver.rigs == [rig, replace(rig, radial=replace(rig.radial, force=math.inf))]
    assert found.attribution == (
        ("no limits", 12.0),
        ("speed limits only", 6.0),
        ("all limits", 4.0),
    )
    assert len(found.solutions) == 2


@pytest.mark.parametrize(
    ("slide", "middle"),
    [
        (FORCED, 12.0),
        (Slide(stroke=(0.2, 0.4), speed=0.8), 6.0),
    ],
)
def test_a_limit_that_is_not_there_takes_no_second_solve(solver, slide, middle):
    found = compare(example_rig(radial=slide), TASK, attribute=True)
    assert len(solver.rigs) == 1
    assert found.attribution[1] == ("speed limits only", middle)


def test_what_is_left_of_the_limits_of_both_slides():
    radial = Slide((0.2, 0.4), speed=0.8, force=40.0, power=20.0, rubbing=1.0, end_stops="avoid")
    aside = Slide((-0.1, 0.1), stall_force=30.0, no_load_speed=1.5, motor_constant=8.0)
    looser = with_speed_limits_alone(example_rig(radial=radial, tangential=aside))
    assert looser.radial == Slide((0.2, 0.4), speed=0.8)
    assert looser.tangential == Slide((-0.1, 0.1), speed=1.5)
    # a slide without any limit has no best motion, nor has friction by infinite forces
    assert with_speed_limits_alone(example_rig(radial=radial, tangential=FORCED)) is None
    by_load = AxleFriction(0.05, load=0.002, journal_radius=0.01)
    assert with_speed_limits_alone(example_rig(friction=by_load)) is None


def test_what_costs_force_is_not_attributed_to_speed(solver):
    spin_up = SpinUp(start_angle=0.3, energy=5.0)
    found = compare(example_rig(), spin_up, objective="work", attribute=True)
    assert len(solver.rigs) == 1
    assert math.isnan(found.attribution[1][1])


def test_a_failed_solve_raises_or_is_returned(monkeypatch):
    replace_all(monkeypatch, Solver(failing={1}))
    with pytest.raises(SolveError):
        compare(example_rig(), TASK)
    failing = Solver(failing={1})
    replace_all(monkeypatch, failing)
    found = compare(example_rig(), TASK, attribute=True, on_failure="return")
    assert len(failing.rigs) == 1
    assert math.isnan(found.overstatement)
    assert [step for step, _ in found.attribution] == [
        "no limits",
        "speed limits only",
        "all limits",
    ]
    assert math.isnan(found.attribution[1][1])


def test_a_failed_middle_step_does_not_cost_the_comparison(monkeypatch):
    replace_all(monkeypatch, Solver(failing={2}))
    found = compare(example_rig(), TASK, attribute=True)
    assert found.overstatement == 3.0
    assert math.isnan(found.attribution[1][1])
    assert "(FAILED): the mass is too light" in str(found)


def test_progress_tells_the_laws(solver):
    told = []
    compare(example_rig(), TASK, progress=told.append)
    assert [(entry.stage, entry.value) for entry in told] == [
        ("ideal law", 12.0),
        ("practical law", 3.0),
    ]
    assert solver.options[0]["progress"] is not None


def test_an_objective_that_the_task_has_not_is_refused(solver):
    with pytest.raises(InputError, match=r"objective: must be one of 'energy', .*received 'time'"):
        compare(example_rig(), TASK, objective="time")
    assert solver.rigs == []


def test_overstatement_is_above_one_when_the_ideal_is_too_rosy():
    assert made_comparison(ideal=12.0).overstatement == 3.0
    assert timed_comparison(ideal=5.0, optimal=8.0).overstatement == 1.6


def test_share_of_ideal_is_below_one_for_times_too():
    assert made_comparison(ideal=12.0).share_of_ideal(3.0) == 0.25
    assert timed_comparison(ideal=5.0, optimal=8.0).share_of_ideal(10.0) == 0.5


@pytest.mark.parametrize(
    "comparison",
    [
        made_comparison(ideal=math.nan),
        made_comparison(optimal=unsolved(Status.FAILED)),
        # what an iterate reaches is no value of an optimum
        made_comparison(optimal=made_solution(status=Status.LIMIT_REACHED)),
        made_comparison(optimal=made_solution(objective=Objective("energy", 0.0, "J"))),
        timed_comparison(ideal=0.0, optimal=0.0),
    ],
)
def test_overstatement_is_no_number_without_both_values(comparison):
    assert math.isnan(comparison.overstatement)
    assert comparison_document(comparison)["overstatement"] is None
    assert "overstatement of the ideal law: -" in str(comparison)


def test_an_unbounded_ideal_overstates_without_bound():
    comparison = made_comparison(ideal=math.inf)
    assert comparison.overstatement == math.inf
    assert comparison_document(comparison)["ideal"]["value"] is None


def test_the_table():
    rows = str(made_comparison()).splitlines()
    table = {row.split("  ")[0]: row.split() for row in rows}
    assert table["ideal law"] == ["ideal", "law", "12", "J", "100.0", "%"]
    assert table["practical law"] == ["practical", "law", "3", "J", "25.0", "%"]
    assert table["optimal"] == ["optimal", "4", "J", "33.3", "%"]
    assert "overstatement of the ideal law: 3" in rows
    limit = table["radial speed"]
    assert limit == ["radial", "speed", "0.8", "m/s", "25.0", "%", "1.5", "J", "per", "m/s"]
    drive = table["radial"]
    assert drive == ["radial", "40", "N", "22.5", "N", "18", "W", "9.5", "J", "-"]
    assert "verified: 1 independent checks passed" in rows
    assert "practical law: leads 0.5 before the lowest, 0.25 before the turning point" in rows
    assert str(made_comparison()).isascii()


def test_the_table_tells_what_failed_and_what_the_laws_have_to_say():
    optimal = made_solution(checks=(MISSED,), verified=False)
    ideal = made_law("ideal", math.nan, message="the law saturates")
    text = str(replace(made_comparison(optimal=optimal), ideal=ideal))
    assert "NOT VERIFIED: 1 of 1 independent checks failed" in text
    assert str(MISSED) in text
    assert "ideal law: the law saturates" in text
    failed = str(made_comparison(optimal=unsolved(Status.INFEASIBLE)))
    assert "NO SOLUTION: INFEASIBLE: the mass is too light" in failed


def test_the_table_says_so_when_the_best_motion_beats_the_law():
    text = str(made_comparison(ideal=3.5))
    assert "below 1: the law is best per half swing and turn" in text
    assert "below 1" not in str(made_comparison(ideal=12.0))
    both = example_rig(tangential=FORCED)
    assert "below 1: with both slides no instant" in str(made_comparison(ideal=3.5, rig=both))


def test_the_table_shares_the_gap_out():
    between = made_solution(objective=Objective("energy", 6.0, "J"))
    text = str(made_comparison(speed_limited=between, attributed=True))
    rows = [line.split() for line in text.splitlines()]
    assert ["no", "limits", "12", "J", "-"] in rows
    assert ["speed", "limits", "only", "6", "J", "75.0", "%"] in rows
    assert ["all", "limits", "4", "J", "25.0", "%"] in rows


def test_json_has_the_keys_that_scripts_rely_on():
    assert comparison_document(made_comparison()) == {
        "task": "pump",
        "objective": {"name": "energy", "unit": "J"},
        "ideal": {"value": 12.0},
        "practical": {"value": 3.0},
        "optimal": {"value": 4.0, "verified": True},
        "overstatement": 3.0,
        "attribution": [
            {"step": "no limits", "value": 12.0},
            {"step": "all limits", "value": 4.0},
        ],
    }
    assert comparison_document(timed_comparison(5.0, 8.0))["task"] == "spin-up"


def test_files(tmp_path):
    written = save_comparison(made_comparison(), tmp_path / "new")
    assert [path.name for path in written] == ["compare.json", "trajectory.csv"]
    assert json.loads(written[0].read_text(encoding="utf-8"))["overstatement"] == 3.0
    failed = made_comparison(optimal=unsolved(Status.FAILED))
    assert len(save_comparison(failed, tmp_path / "new")) == 1
    assert [path.name for path in (tmp_path / "new").iterdir()] == ["compare.json"]
