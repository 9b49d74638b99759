# SPDX-License-Identifier: BSD-3-Clause
"""Ctrl-C while a best motion is being sought."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys

import pytest
from bench_rigs import BENCH, TO_SPEED, save_rig

import rotorpump as rp

LONG = rp.Pump(duration=20.0, start_angle=0.2)

LAUNCHER = """
import signal, sys
# a child of a shell's background job inherits that Ctrl-C is ignored
signal.signal(signal.SIGINT, signal.default_int_handler)
from rotorpump.cli import main
sys.exit(main(sys.argv[1:]))
"""

PATIENCE = 120.0
"""Seconds after which a process counts as hanging."""


def once_something_is_found(progress):
    """Do what Ctrl-C does, in a run after one that has found an optimum."""
    if progress.best is not None and progress.iteration > 2:
        raise KeyboardInterrupt


def in_refinement(progress):
    """Do what Ctrl-C does while a found optimum is refined."""
    if progress.stage == "refinement" and progress.iteration > 2:
        raise KeyboardInterrupt


def read_until(terminal, words):
    """Read what a process shows until these words appear."""
    shown = b""
    while words not in shown:
        chunk = os.read(terminal, 4096)
        assert chunk, shown
        shown += chunk
    return shown


@pytest.mark.skipif(os.name != "posix", reason="signals to another process and pty are POSIX")
def test_ctrl_c_during_a_solve_saves_what_there_is(tmp_path):
    import pty

    rig = save_rig(tmp_path, BENCH, LONG)
    # progress is shown on a terminal only; it tells when the solver is at work
    watched, shown = pty.openpty()
    process = subprocess.Popen(
        [sys.executable, "-c", LAUNCHER, "optimize", rig, "--out", "results"],
        cwd=tmp_path,
        stdout=subprocess.PIPE,
        stderr=shown,
        start_new_session=True,
    )
    try:
        os.close(shown)
        read_until(watched, b"iteration 2")
        process.send_signal(signal.SIGINT)
        read_until(watched, b"rotorpump: interrupted")
        printed, _ = process.communicate(timeout=PATIENCE)
    finally:
        process.kill()
        process.wait()
        os.close(watched)
    assert process.returncode == 130
    assert b"INTERRUPTED" in printed
    document = json.loads((tmp_path / "results" / "solution.json").read_text(encoding="utf-8"))
    assert document["status"] == "INTERRUPTED"
    assert document["success"] is False
    assert document["verified"] is False


def test_a_search_that_is_interrupted_gives_what_it_has_found():
    with pytest.raises(rp.SolveError) as caught:
        rp.optimize(BENCH, TO_SPEED, progress=once_something_is_found)
    solution = caught.value.solution
    assert solution.status is rp.Status.INTERRUPTED
    assert not solution.success
    assert not solution.verified
    assert solution.trajectory is not None
    assert solution.objective.value == pytest.approx(solution.trajectory.duration)


def test_an_optimum_that_is_being_refined_is_kept():
    try:
        # so accurate a motion takes a refinement
        solution = rp.optimize(
            BENCH, TO_SPEED, accuracy=1e-6, on_failure="return", progress=in_refinement
        )
    except KeyboardInterrupt:
        # it would end the whole test run
        pytest.fail("KeyboardInterrupt reached the caller, and the optimum is lost")
    assert solution.status is rp.Status.INTERRUPTED
    assert solution.trajectory is not None
