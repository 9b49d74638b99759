# SPDX-License-Identifier: BSD-3-Clause
"""The terminal: the progress line, warnings, and a stdout that cannot be written."""

from __future__ import annotations

import io
import os
import subprocess
import sys
import warnings

import pytest

from rotorpump.console import ProgressLine, watching
from rotorpump.solution.progress import Progress


class Terminal(io.StringIO):
    def isatty(self):
        return True


def test_progress_is_one_line_on_a_terminal_that_is_wiped_in_the_end(monkeypatch):
    terminal = Terminal()
    monkeypatch.setattr(sys, "stderr", terminal)
    with watching() as progress:
        progress(Progress("coarse mesh", 12, 3.25, 4.5))
        warnings.warn("careful", UserWarning, stacklevel=1)
    text = terminal.getvalue()
    assert "\rcoarse mesh  iteration 12  3.25  best so far 4.5" in text
    assert "\rwarning: careful\n" in text
    assert text.split("\r")[-1] == "warning: careful\n"
    assert text.split("\r")[-2].strip() == ""


def test_progress_is_not_shown_elsewhere(monkeypatch):
    monkeypatch.setattr(sys, "stderr", io.StringIO())
    with watching() as progress:
        assert progress is None


def test_progress_does_not_flood_the_terminal(monkeypatch):
    terminal = Terminal()
    line = ProgressLine(terminal)
    clock = iter([0.0, 0.01, 0.02, 1.0])
    monkeypatch.setattr("rotorpump.console.time.monotonic", lambda: next(clock))
    for iteration in range(1, 5):
        line(Progress("solve", iteration, float("nan")))
    assert terminal.getvalue() == "\rsolve  iteration 1\rsolve  iteration 4"


def run_python(code: str, **options) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-c", code], stderr=subprocess.PIPE, text=True, check=False, **options
    )


@pytest.mark.skipif(sys.platform == "win32", reason="pipes as on POSIX")
def test_a_reader_that_goes_away_is_no_error():
    read, write = os.pipe()
    os.close(read)
    code = "from rotorpump.console import say; say('x' * 100000); say('more')"
    done = run_python(code, stdout=write)
    os.close(write)
    assert (done.returncode, done.stderr) == (0, "")


@pytest.mark.skipif(sys.platform != "linux", reason="/dev/full")
def test_a_full_disk_behind_stdout_is_told():
    code = (
        "from rotorpump.console import say\n"
        "from rotorpump.errors import InputError\n"
        "try: say('x')\n"
        "except InputError as error: raise SystemExit(str(error))"
    )
    with open("/dev/full", "w", encoding="utf-8") as full:
        done = run_python(code, stdout=full)
    assert done.stderr == "stdout: must be writable (No space left on device); received 'x'\n"
