# SPDX-License-Identifier: BSD-3-Clause
"""JSON and CSV of results."""

from __future__ import annotations

import csv
import json
import math
from dataclasses import replace

import numpy as np
import pytest
from made_results import MISSED, PASSED, STATISTICS, made_law, made_solution, unsolved

from rotorpump.errors import InputError
from rotorpump.quantities import QUANTITIES
from rotorpump.solution.status import Status
from rotorpump.solution.storage import (
    json_text,
    law_document,
    save_solution,
    solution_document,
    write_csv,
)


def test_json_has_the_keys_that_scripts_rely_on():
    solution = made_solution(checks=(PASSED, MISSED), verified=False)
    document = json.loads(json_text(solution_document(solution)))
    assert list(document) == [
        "status",
        "success",
        "verified",
        "message",
        "objective",
        "trajectory",
        "checks",
        "limits",
        "drives",
        "statistics",
    ]
    assert document["status"] == "SOLVED"
    assert document["success"] is True
    assert document["verified"] is False
    assert document["message"] == "an optimum"
    energy = solution.objective.value
    assert document["objective"] == {"name": "energy", "value": energy, "unit": "J"}
    assert document["checks"] == [
        {"name": "replay", "value": 2e-6, "tolerance": 1e-3, "passed": True},
        {"name": "audit", "value": 3e-2, "tolerance": 1e-3, "passed": False},
    ]
    assert document["limits"] == [
        {"name": "radial speed", "value": 0.8, "unit": "m/s", "active_share": 0.25, "price": 1.5},
        {"name": "radial force", "value": 40.0, "unit": "N", "active_share": 0.125, "price": None},
    ]
    assert document["drives"] == [
        {
            "axis": "radial",
            "peak_force": 40.0,
            "rms_force": 22.5,
            "peak_power": 18.0,
            "work": 9.5,
            "heat": None,
        }
    ]
    assert document["statistics"] == {
        "iterations": 95,
        "seconds": 1.25,
        "intervals": 60,
        "refinements": 3,
    }


def test_json_holds_the_nodes_to_the_last_digit():
    solution = made_solution()
    columns = json.loads(json_text(solution_document(solution)))["trajectory"]
    assert list(columns) == list(solution.trajectory.quantities())
    for name, column in columns.items():
        assert np.array_equal(column, getattr(solution.trajectory, name))


def test_json_holds_uniform_samples_instead():
    solution = made_solution()
    columns = solution_document(solution, sample=50)["trajectory"]
    assert np.diff(columns["time"]) == pytest.approx(0.02)
    wanted = solution.trajectory.sample(50.0).radial
    assert columns["radial"] == wanted.tolist()


def test_json_is_the_same_for_the_same_result_but_for_the_time_it_took():
    once = made_solution()
    again = made_solution(statistics=replace(STATISTICS, seconds=9.0))
    first, second = (
        json_text(solution_document(solution)).splitlines() for solution in (once, again)
    )
    different = [old for old, new in zip(first, second, strict=True) if old != new]
    assert len(different) == 1
    assert "seconds" in different[0]


def test_json_has_null_for_what_is_no_number_and_no_trajectory():
    document = solution_document(unsolved(Status.INFEASIBLE))
    assert document["status"] == "INFEASIBLE"
    assert document["success"] is False
    assert document["objective"]["value"] is None
    assert document["trajectory"] is None
    assert '"value": null' in json_text(document)


def test_json_has_null_for_an_infinite_node():
    solution = made_solution()
    force = solution.trajectory.radial_force.copy()
    force[3] = math.inf
    spoiled = replace(solution, trajectory=replace(solution.trajectory, radial_force=force))
    column = json.loads(json_text(solution_document(spoiled)))["trajectory"]["radial_force"]
    assert column[3] is None
    assert column[4] == force[4]


@pytest.mark.parametrize("rate", [0.0, -5.0, math.nan, math.inf, 2e5, True])
def test_a_rate_that_makes_no_sense_is_refused(rate):
    with pytest.raises(InputError, match=r"^sample: must"):
        solution_document(made_solution(), sample=rate)


def test_a_law_as_json():
    document = law_document(made_law("practical", 3.5, leads=(0.5, 0.25), message="slow"))
    assert document["law"] == "practical"
    assert document["leads"] == [0.5, 0.25]
    assert document["objective"]["value"] == 3.5
    assert document["message"] == "slow"
    lost = law_document(made_law("ideal", math.nan))
    assert lost["reached"] is False
    assert lost["objective"]["value"] is None
    assert lost["leads"] is None
    json_text(lost)


def test_csv_has_units_and_every_digit(tmp_path):
    trajectory = made_solution().trajectory
    path = tmp_path / "motion.csv"
    write_csv(trajectory, path)
    assert b"\r" not in path.read_bytes()
    with path.open(encoding="utf-8", newline="") as file:
        heading, *rows = csv.reader(file)
    assert heading[:3] == ["time [s]", "angle [rad]", "speed [rad/s]"]
    assert heading == [QUANTITIES[name].heading for name in trajectory.quantities()]
    values = np.array(rows, dtype=float).T
    for name, column in zip(trajectory.quantities(), values, strict=True):
        assert np.array_equal(column, getattr(trajectory, name))


def test_saving_makes_the_folder_and_leaves_two_files(tmp_path):
    folder = tmp_path / "deep" / "results"
    written = made_solution().save(folder)
    assert written == (folder / "solution.json", folder / "trajectory.csv")
    assert sorted(folder.iterdir()) == sorted(written)
    assert json.loads(written[0].read_text(encoding="utf-8"))["success"] is True


def test_samples_are_saved_in_both_files(tmp_path):
    report, table = save_solution(made_solution(), tmp_path, sample=10.0)
    count = len(json.loads(report.read_text(encoding="utf-8"))["trajectory"]["time"])
    assert len(table.read_text(encoding="utf-8").splitlines()) == count + 1


def test_a_motion_of_an_earlier_run_does_not_survive_a_failed_one(tmp_path):
    made_solution().save(tmp_path)
    unsolved(Status.FAILED).save(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["solution.json"]


def test_a_bad_rate_leaves_no_folder(tmp_path):
    with pytest.raises(InputError, match="sample"):
        save_solution(made_solution(), tmp_path / "new", sample=-1.0)
    assert list(tmp_path.iterdir()) == []
