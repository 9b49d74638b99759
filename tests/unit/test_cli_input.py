# SPDX-License-Identifier: BSD-3-Clause
"""The command line: what is refused, in which words, before any work."""

from __future__ import annotations

import pytest

from rotorpump import cli, commands

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

SPIN_UP = TEXT.replace('"pump"', '"spin-up"').replace("duration = 8.0", "energy = 5\nspeed = 3.0")

BAD_RIGS = {
    "unknown key": (
        TEXT.replace("viscous", "viscos"),
        ("[friction]", "viscos", "is unknown here", "0.05"),
    ),
    "unknown table": (TEXT + "[motor]\npower = 5", ("motor", "is unknown here", "5")),
    "wrong type": (
        TEXT.replace("speed = 0.8", 'speed = "fast"'),
        ("[radial]", "speed", "must be a number", "'fast'"),
    ),
    "negative": (
        TEXT.replace("viscous = 0.05", "viscous = -0.05"),
        ("[friction]", "viscous", "must not be negative", "-0.05"),
    ),
    "zero": (
        TEXT.replace("mass = 1.2", "mass = 0"),
        ("[mass]", "mass", "must be greater than 0", "received 0"),
    ),
    "nan": (
        TEXT.replace("force = 40.0", "force = nan"),
        ("[radial]", "force", "must be greater than 0", "nan"),
    ),
    "inf": (
        TEXT.replace("duration = 8.0", "duration = inf"),
        ("[task]", "duration", "must be finite", "inf"),
    ),
    "reversed stroke": (
        TEXT.replace("[0.20, 0.40]", "[0.40, 0.20]"),
        ("[radial]", "stroke", "must satisfy lo < hi", "[0.4, 0.2]"),
    ),
    "missing key": (
        TEXT.replace("inertia = 0.25", ""),
        ("[wheel]", "inertia", "is required"),
    ),
    "missing table": (
        TEXT.replace("[friction]\nviscous = 0.05", ""),
        ("[friction]", "is a required table"),
    ),
    "broken TOML": (TEXT.replace("[mass]", "[mass"), ("must be valid TOML", "line 5")),
    "two goals": (
        SPIN_UP,
        ("[task]", "goal", "exactly one of energy, speed", "['energy', 'speed']"),
    ),
    "hangs still": (
        TEXT.replace("start_angle = 0.3", "start_angle = 0"),
        ("[task]", "start_angle", "must differ from 0", "0"),
    ),
}


@pytest.fixture
def place(tmp_path, monkeypatch):
    """An empty working directory."""
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def answers(monkeypatch):
    """The calls of the studies, none of which should be made."""
    calls = []
    for study in ("compare", "optimize"):
        monkeypatch.setattr(commands, study, lambda *call, **_: calls.append(call))
    return calls


@pytest.mark.parametrize("command", ["compare", "optimize"])
@pytest.mark.parametrize("case", BAD_RIGS)
def test_a_bad_rig_is_refused_in_one_line(place, answers, capsys, command, case):
    text, words = BAD_RIGS[case]
    (place / "rig.toml").write_text(text, encoding="utf-8")
    assert cli.main([command, "rig.toml", "--out", "results", "--json", "x.json"]) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert printed.err.startswith("rotorpump: rig.toml")
    assert printed.err.count("\n") == 1
    for word in words:
        assert word in printed.err
    assert answers == []
    assert [path.name for path in place.iterdir()] == ["rig.toml"]


@pytest.mark.parametrize("command", ["compare", "optimize"])
@pytest.mark.parametrize(
    "case",
    [
        (["none.toml"], "rig file: must exist; received 'none.toml'"),
        (["."], "rig file: must be a file, not a directory; received '.'"),
        (["--accuracy", "0"], "--accuracy: must be greater than 0; received 0.0"),
        (["--accuracy", "nan"], "--accuracy: must be finite; received nan"),
        (["--accuracy=-1e-4"], "--accuracy: must be greater than 0; received -0.0001"),
        (["--objective", "time"], "objective: must be one of 'energy', 'momentum', 'speed'; rec"),
        (["--objective", "heat"], "objective: must be one of 'energy', 'momentum', 'speed'; rec"),
        (["--out", "file"], "--out: must be a folder, and no part of its path a file"),
        (["--out", "file/below"], "--out: must be a folder, and no part of its path a file"),
        (["--out", ""], "--out: must be a path; received ''"),
        (["--json", "file/below.json"], "--json: must lie in a folder that exists"),
        (["--json", "missing/x.json"], "--json: must lie in a folder that exists"),
        (["--json", "."], "--json: must be a file, not a folder; received '.'"),
        (["--out", "new", "--json", "missing/x.json"], "--json: must lie in a folder that exists"),
    ],
)
def test_a_bad_argument_is_refused_before_any_work(place, answers, capsys, command, case):
    arguments, message = case
    (place / "file").write_text("mine", encoding="utf-8")
    assert cli.main([command, *arguments]) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert printed.err.startswith(f"rotorpump: {message}")
    assert printed.err.count("\n") == 1
    assert answers == []
    assert [path.name for path in place.iterdir()] == ["file"]
    assert (place / "file").read_text(encoding="utf-8") == "mine"


@pytest.mark.parametrize("rate", ["0", "-1", "nan", "inf", "1e9"])
def test_a_bad_rate_is_refused(place, answers, capsys, rate):
    assert cli.main(["optimize", f"--sample={rate}"]) == 2
    assert capsys.readouterr().err.startswith("rotorpump: --sample: must")
    assert answers == []


@pytest.mark.parametrize(
    "arguments",
    [
        [],
        ["fly"],
        ["compare", "--accuracy", "fine"],
        ["compare", "--acc", "1e-3"],
        ["compare", "--sample", "5"],
        ["optimize", "--attribute"],
        ["optimize", "one.toml", "two.toml"],
    ],
)
def test_what_cannot_be_parsed_is_refused(answers, capsys, arguments):
    assert cli.main(arguments) == 2
    printed = capsys.readouterr()
    assert printed.out == ""
    assert "error: " in printed.err
    assert answers == []
