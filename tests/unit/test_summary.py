# SPDX-License-Identifier: BSD-3-Clause
"""The summary of a solution."""

from __future__ import annotations

import pytest
from made_results import MISSED, PASSED, made_solution, unsolved

from rotorpump.solution.status import Status
from rotorpump.tasks import Pump, Rotate, SpinUp


def test_the_summary_of_a_verified_solution():
    solution = made_solution()
    text = solution.summary()
    assert text.startswith("pump for ")
    assert f"energy: {solution.objective.value:.6g} J" in text
    assert "SOLVED: an optimum" in text
    assert "verified: 1 independent checks passed" in text
    assert "NOT" not in text
    speed, force = (
        next(line for line in text.splitlines() if line.startswith(name))
        for name in ("radial speed", "radial force")
    )
    assert speed.split()[1:] == ["speed", "0.8", "m/s", "25.0", "%", "1.5", "J", "per", "m/s"]
    assert force.split()[1:] == ["force", "40", "N", "12.5", "%", "-"]
    drives = text[text.index("drive  ") :].splitlines()
    assert " ".join(drives[0].split()) == "drive peak force rms force peak power work heat"
    assert drives[1].split() == ["radial", "40", "N", "22.5", "N", "18", "W", "9.5", "J", "-"]
    assert "95 iterations, 1.2 s, 60 intervals, 3 refinements; 4 starts" in text
    assert text.isascii()


def test_the_summary_tells_what_failed():
    text = made_solution(checks=(PASSED, MISSED), verified=False).summary()
    assert "NOT VERIFIED: 1 of 2 independent checks failed" in text
    assert str(MISSED) in text
    assert str(PASSED) not in text
    unchecked = made_solution(checks=(), verified=False).summary()
    assert "NOT VERIFIED: no independent check has run" in unchecked


def test_the_summary_of_no_solution():
    text = unsolved(Status.INFEASIBLE).summary()
    assert "energy: - (of the last iterate, which is no solution)" in text
    assert "INFEASIBLE: the mass is too light" in text
    assert "erified" not in text


@pytest.mark.parametrize(
    ("task", "words"),
    [
        (Pump(duration=8.0, start_angle=0.3), "pump for 8 s from 0.3 rad"),
        (
            SpinUp(start_angle=0.3, start_speed=1.0, energy=5.0),
            "spin up to 5 J from 0.3 rad and 1 rad/s",
        ),
        (SpinUp(start_angle=0.3, speed=6.0), "spin up to 6 rad/s from 0.3 rad"),
        (SpinUp(start_angle=-0.3, full_turn=True), "spin up to a full turn from -0.3 rad"),
        (
            SpinUp(start_angle=0.3, energy=5.0, deadline=9.0),
            "spin up to 5 J from 0.3 rad within 9 s",
        ),
        (Rotate(), "rotate steadily, one turn"),
        (
            Rotate(mean_speed=7.0, load_torque=0.2, direction=-1),
            "rotate steadily, one turn clockwise, at 7 rad/s, against 0.2 N m",
        ),
    ],
)
def test_tasks_in_words(task, words):
    assert made_solution(task=task).summary().splitlines()[0] == words
