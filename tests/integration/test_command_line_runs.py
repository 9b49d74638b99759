# SPDX-License-Identifier: BSD-3-Clause
"""The command line end to end, as a process of its own, with real solves."""

from __future__ import annotations

import csv
import json
import subprocess
import sys

import pytest
from bench_rigs import BENCH, ROTATE, TO_SPEED, save_rig, with_friction

COMPARE_KEYS = {
    "task",
    "objective",
    "ideal",
    "practical",
    "optimal",
    "overstatement",
    "attribution",
}
OPTIMIZE_KEYS = {
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
}
HEADINGS = [
    "time [s]",
    "angle [rad]",
    "speed [rad/s]",
    "momentum [kg m2/s]",
    "radial [m]",
    "radial_speed [m/s]",
    "radial_force [N]",
    "tangential [m]",
    "tangential_speed [m/s]",
    "tangential_force [N]",
    "energy [J]",
    "axle_load [N]",
]


def run(folder, *arguments):
    return subprocess.run(
        [sys.executable, "-m", "rotorpump", *arguments],
        cwd=folder,
        capture_output=True,
        encoding="utf-8",
        check=False,
    )


@pytest.fixture(scope="module")
def compared(tmp_path_factory):
    """A folder in which a rig has been compared, and the finished process."""
    folder = tmp_path_factory.mktemp("compared")
    rig = save_rig(folder, BENCH, TO_SPEED)
    return folder, run(folder, "compare", rig, "--out", "results", "--json", "report.json")


def test_compare_ends_well(compared):
    _, done = compared
    assert done.returncode == 0, done.stderr
    assert "Traceback" not in done.stderr
    assert "overstatement" in done.stdout


def test_compare_writes_every_file(compared):
    folder, done = compared
    names = {"compare.json", "compare.png", "motion.png", "profiles.png", "trajectory.csv"}
    assert {path.name for path in (folder / "results").iterdir()} == names
    for path in (folder / "results").glob("*.png"):
        # the eight bytes that open every file of this kind (ISO/IEC 15948, from memory)
        assert path.read_bytes()[:8] == b"\x89PNG\r\n\x1a\n"
        assert path.name in done.stderr


def test_the_keys_of_compare_are_fixed(compared):
    folder, _ = compared
    text = (folder / "report.json").read_text(encoding="utf-8")
    assert text == (folder / "results" / "compare.json").read_text(encoding="utf-8")
    document = json.loads(text)
    assert set(document) == COMPARE_KEYS
    assert document["task"] == "spin-up"
    assert document["objective"] == {"name": "time", "unit": "s"}
    assert set(document["ideal"]) == set(document["practical"]) == {"value"}
    assert set(document["optimal"]) == {"value", "verified"}
    assert document["optimal"]["verified"] is True
    assert [set(step) for step in document["attribution"]] == [{"step", "value"}] * 2
    ideal, optimal = document["ideal"]["value"], document["optimal"]["value"]
    assert document["overstatement"] == pytest.approx(optimal / ideal)


def test_the_table_has_headings_with_units(compared, solve):
    folder, _ = compared
    with (folder / "results" / "trajectory.csv").open(encoding="utf-8", newline="") as file:
        headings, *rows = list(csv.reader(file))
    assert headings == HEADINGS
    best = solve(BENCH, TO_SPEED)
    assert len(rows) == best.trajectory.time.size
    assert [float(entry) for entry in rows[-1]] == pytest.approx(
        [column[-1] for column in best.trajectory.columns().values()], rel=1e-9, abs=1e-12
    )


def test_a_rig_that_cannot_rotate_ends_with_no_solution(tmp_path):
    rig = save_rig(tmp_path, with_friction(BENCH, viscous=0.5), ROTATE)
    done = run(tmp_path, "compare", rig, "--json", "report.json")
    assert done.returncode == 3
    assert "Traceback" not in done.stderr
    assert "INFEASIBLE" in done.stderr
    assert "friction takes" in done.stdout
    document = json.loads((tmp_path / "report.json").read_text(encoding="utf-8"))
    assert set(document) == COMPARE_KEYS
    assert document["optimal"] == {"value": None, "verified": False}
    assert document["overstatement"] is None


def test_a_wrong_rig_ends_before_any_work(tmp_path):
    rig = save_rig(tmp_path, BENCH, TO_SPEED)
    (tmp_path / "rig.toml").write_text(
        (tmp_path / "rig.toml")
        .read_text(encoding="utf-8")
        .replace("inertia = 0.18", "inertia = 0"),
        encoding="utf-8",
    )
    done = run(tmp_path, "optimize", rig, "--out", "results")
    assert done.returncode == 2
    assert "Traceback" not in done.stderr
    assert "inertia" in done.stderr
    assert done.stdout == ""
    assert not (tmp_path / "results").exists()


def test_two_runs_give_the_same_document(tmp_path):
    rig = save_rig(tmp_path, BENCH, ROTATE)
    texts = []
    for _ in range(2):
        done = run(tmp_path, "optimize", rig, "--json", "-")
        assert done.returncode == 0, done.stderr
        assert done.stderr == ""
        document = json.loads(done.stdout)
        assert set(document) == OPTIMIZE_KEYS
        assert list(document["trajectory"]) == [name.split(" ")[0] for name in HEADINGS]
        assert set(document["statistics"]) == {
            "iterations",
            "seconds",
            "intervals",
            "refinements",
        }
        assert document["statistics"].pop("seconds") > 0.0
        texts.append(json.dumps(document))
    assert texts[0] == texts[1]
