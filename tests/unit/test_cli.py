# SPDX-License-Identifier: BSD-3-Clause
"""The command line: what goes where, exit codes, and what is refused in which words."""

from __future__ import annotations

import json
import subprocess
import sys
import warnings
from dataclasses import replace

import pytest
from made_results import MISSED, made_comparison, made_solution, unsolved

from rotorpump import cli, commands
from rotorpump.errors import InputError, RotorpumpError, SolveError, SolveWarning
from rotorpump.rig.example import example_rig
from rotorpump.rig.rigfile import read_rig
from rotorpump.solution.status import Status

TEXT = """
[wheel]
inertia = 0.25
mass = 3.0
[mass]
mass = 1.2
[radial]
stroke = [0.20, 0.40]
speed = 0.8
force = 40.0
[friction]
viscous = 0.05
[task]
kind = "pump"
duration = 8.0
start_angle = 0.3
"""


@pytest.fixture
def place(tmp_path, monkeypatch):
    """An empty working directory."""
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def answers(monkeypatch):
    """Let the studies give made-up results; gives the calls that were made."""
    calls = []

    def solve(rig, task, **options):
        calls.append((rig, task, options))
        return made_solution()

    def compare(rig, task, **options):
        calls.append((rig, task, options))
        return made_comparison()

    monkeypatch.setattr(commands, "optimize", solve)
    monkeypatch.setattr(commands, "compare", compare)
    return calls


def answer(monkeypatch, command, result):
    """Let one study give this result."""
    monkeypatch.setattr(commands, command, lambda *_, **__: result)


def refuse(monkeypatch, command, error):
    """Let one study raise."""

    def study(*_, **__):
        raise error

    monkeypatch.setattr(commands, command, study)


def test_compare_prints_the_table(place, answers, capsys):
    assert cli.main(["compare"]) == 0
    printed = capsys.readouterr()
    assert printed.out == f"{made_comparison()}\n"
    assert printed.err == ""
    assert list(place.iterdir()) == []
    (rig, task, options) = answers[0]
    assert (rig, task) == example_rig()
    assert options == {
        "objective": "energy",
        "accuracy": 1e-4,
        "attribute": False,
        "on_failure": "return",
        "progress": None,
    }


def test_optimize_prints_the_summary(place, answers, capsys):
    assert cli.main(["optimize", "--accuracy", "1e-3", "--objective", "energy"]) == 0
    printed = capsys.readouterr()
    assert printed.out == f"{made_solution().summary()}\n"
    assert printed.err == ""
    assert list(place.iterdir()) == []
    assert answers[0][2]["accuracy"] == 1e-3


@pytest.mark.parametrize("command", ["compare", "optimize"])
def test_the_rig_file_is_what_is_solved(place, answers, command):
    (place / "rig.toml").write_text(TEXT, encoding="utf-8")
    assert cli.main([command, "rig.toml"]) == 0
    assert answers[0][:2] == read_rig("rig.toml")


def test_attribution_is_asked_for(place, answers):
    assert cli.main(["compare", "--attribute"]) == 0
    assert answers[0][2]["attribute"] is True


def test_compare_writes_its_files(place, answers, capsys):
    assert cli.main(["compare", "--out", "new/results"]) == 0
    written = place / "new" / "results"
    names = ["compare.json", "compare.png", "motion.png", "profiles.png", "trajectory.csv"]
    assert sorted(path.name for path in written.iterdir()) == names
    printed = capsys.readouterr()
    assert "overstatement" in printed.out
    assert printed.err.count("wrote ") == len(names)


def test_optimize_writes_its_files(place, answers):
    assert cli.main(["optimize", "--out", "results", "--sample", "20"]) == 0
    names = ["motion.png", "profiles.png", "solution.json", "trajectory.csv"]
    assert sorted(path.name for path in (place / "results").iterdir()) == names
    document = json.loads((place / "results" / "solution.json").read_text(encoding="utf-8"))
    assert document["trajectory"]["time"][:3] == pytest.approx([0.0, 0.05, 0.1])


@pytest.mark.parametrize(("command", "key"), [("compare", "overstatement"), ("optimize", "checks")])
def test_json_on_stdout_is_alone_there(place, answers, capsys, command, key):
    assert cli.main([command, "--json", "-"]) == 0
    printed = capsys.readouterr()
    assert key in json.loads(printed.out)
    assert printed.err == ""
    assert list(place.iterdir()) == []


def test_json_in_a_file_comes_with_the_table(place, answers, capsys):
    assert cli.main(["compare", "--json", "x.json"]) == 0
    assert json.loads((place / "x.json").read_text(encoding="utf-8"))["task"] == "pump"
    assert capsys.readouterr().out.startswith("pump for ")
    assert [path.name for path in place.iterdir()] == ["x.json"]


def test_json_may_lie_in_the_folder_that_is_yet_to_be_made(place, answers):
    assert cli.main(["optimize", "--out", "new", "--json", "new/x.json"]) == 0
    whole = (place / "new" / "x.json").read_text(encoding="utf-8")
    assert whole == (place / "new" / "solution.json").read_text(encoding="utf-8")


@pytest.mark.parametrize("arguments", [["-h"], ["compare", "-h"], ["optimize", "--help"]])
def test_help_tells_units_and_exit_codes(capsys, arguments):
    assert cli.main(arguments) == 0
    text = capsys.readouterr().out
    assert "inertia [kg m2]" in text
    assert "130 interrupted" in text


def test_version(capsys):
    assert cli.main(["--version"]) == 0
    assert capsys.readouterr().out.startswith("rotorpump 0")


@pytest.mark.parametrize(
    "case",
    [
        (Status.INFEASIBLE, 3, "rotorpump: no solution: INFEASIBLE: the mass is too light"),
        (Status.LIMIT_REACHED, 3, "rotorpump: no solution: LIMIT_REACHED: the mass is too light"),
        (Status.FAILED, 3, "rotorpump: no solution: FAILED: the mass is too light"),
        (Status.INTERRUPTED, 130, "rotorpump: interrupted: the mass is too light"),
    ],
)
def test_no_solution_is_told_and_still_written(place, monkeypatch, capsys, case):
    status, code, words = case
    solution = unsolved(status)
    answer(monkeypatch, "optimize", solution)
    answer(monkeypatch, "compare", made_comparison(optimal=solution))
    assert cli.main(["optimize", "--out", "results", "--json", "x.json"]) == code
    assert words in capsys.readouterr().err.splitlines()
    for path in (place / "x.json", place / "results" / "solution.json"):
        assert json.loads(path.read_text(encoding="utf-8"))["status"] == status.name
    assert cli.main(["compare", "--out", "both"]) == code
    assert words in capsys.readouterr().err.splitlines()
    pictures = [] if status is Status.INTERRUPTED else ["compare.png"]
    written = sorted(path.name for path in (place / "both").iterdir())
    assert written == ["compare.json", *pictures]


def test_what_there_is_of_an_interrupted_motion_is_saved(place, monkeypatch):
    answer(monkeypatch, "optimize", made_solution(status=Status.INTERRUPTED, verified=False))
    assert cli.main(["optimize", "--out", "results"]) == 130
    assert (place / "results" / "trajectory.csv").exists()


def test_a_failed_check_is_told(place, monkeypatch, capsys):
    solution = made_solution(checks=(MISSED,), verified=False)
    answer(monkeypatch, "optimize", solution)
    answer(monkeypatch, "compare", made_comparison(optimal=solution))
    for command in ("optimize", "compare"):
        assert cli.main([command]) == 4
        printed = capsys.readouterr()
        assert "NOT VERIFIED" in printed.out
        assert str(MISSED) in printed.err


def test_the_middle_step_has_to_be_solved_and_verified_too(place, monkeypatch):
    whole = made_comparison(speed_limited=made_solution(), attributed=True)
    for between, code in (
        (made_solution(), 0),
        (made_solution(verified=False), 4),
        (unsolved(Status.FAILED), 3),
        (unsolved(Status.INTERRUPTED), 130),
    ):
        answer(monkeypatch, "compare", replace(whole, speed_limited=between))
        assert cli.main(["compare", "--attribute"]) == code


@pytest.mark.parametrize(
    "case",
    [
        (KeyboardInterrupt(), 130, "rotorpump: interrupted"),
        (RotorpumpError("no motion"), 3, "rotorpump: no solution: no motion"),
        (SolveError("stuck", unsolved(Status.FAILED)), 3, "rotorpump: no solution: stuck"),
        (SolveError("stop", unsolved(Status.INTERRUPTED)), 130, "rotorpump: no solution: stop"),
    ],
)
def test_errors_end_in_one_line(place, monkeypatch, capsys, case):
    error, code, words = case
    refuse(monkeypatch, "compare", error)
    assert cli.main(["compare", "--out", "results"]) == code
    printed = capsys.readouterr()
    assert printed.out == ""
    assert printed.err == f"{words}\n"
    assert list(place.iterdir()) == []


def test_a_slip_of_ours_is_not_hidden(place, monkeypatch):
    refuse(monkeypatch, "compare", ZeroDivisionError())
    with pytest.raises(ZeroDivisionError):
        cli.main(["compare"])


def test_the_result_is_printed_even_if_it_cannot_be_saved(place, monkeypatch, answers, capsys):
    def fill_the_disk(*_):
        raise InputError("file", "must be writable (disk full)", "results")

    monkeypatch.setattr(commands, "save_comparison", fill_the_disk)
    assert cli.main(["compare", "--out", "results"]) == 2
    printed = capsys.readouterr()
    assert "overstatement" in printed.out
    assert "disk full" in printed.err


def test_warnings_become_lines_on_stderr(place, monkeypatch, capsys):
    def solve(*_, **__):
        warnings.warn("weaker than asked for", SolveWarning, stacklevel=2)
        return made_solution(status=Status.ACCEPTABLE)

    monkeypatch.setattr(commands, "optimize", solve)
    assert cli.main(["optimize", "--json", "-"]) == 0
    printed = capsys.readouterr()
    assert printed.err == "warning: weaker than asked for\n"
    assert json.loads(printed.out)["status"] == "ACCEPTABLE"


def test_matplotlib_is_not_loaded_unless_pictures_are_asked_for():
    code = "import sys, rotorpump.cli; sys.exit('matplotlib' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, check=False)
    assert (done.returncode, done.stderr) == (0, b"")


def test_the_example_is_a_sound_rig():
    rig, task = example_rig()
    task.check(rig)
    assert rig.radial.stroke == (0.16, 0.38)
    assert task.duration == 7.0
