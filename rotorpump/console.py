# SPDX-License-Identifier: BSD-3-Clause
"""What goes to the terminal: results to stdout, everything else to stderr."""

from __future__ import annotations

import io
import math
import os
import shutil
import sys
import time
import warnings
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TextIO

from rotorpump.errors import InputError
from rotorpump.solution.progress import Progress, Watcher

INTERVAL = 0.1
"""Shortest time between two updates of the progress line [s]."""


class ProgressLine:
    """One line that is written over and over.

    Parameters
    ----------
    stream : file
        Where to write.
    """

    def __init__(self, stream: TextIO) -> None:
        self._stream = stream
        self._shown = 0
        self._next = -math.inf

    def __call__(self, progress: Progress) -> None:
        """Show how far the computation has come, unless it was shown a moment ago."""
        now = time.monotonic()
        if now < self._next:
            return
        self._next = now + INTERVAL
        text = words(progress)[: shutil.get_terminal_size().columns - 1]
        self._write(f"\r{text.ljust(self._shown)}")
        self._shown = len(text)

    def clear(self) -> None:
        """Wipe the line."""
        if self._shown:
            self._write(f"\r{' ' * self._shown}\r")
            self._shown = 0

    def _write(self, text: str) -> None:
        self._stream.write(text)
        self._stream.flush()


def words(progress: Progress) -> str:
    """Return stage, iteration, value and best value so far in one line."""
    parts = [progress.stage]
    if progress.iteration:
        parts.append(f"iteration {progress.iteration}")
    if math.isfinite(progress.value):
        parts.append(f"{progress.value:.6g}")
    if progress.best is not None:
        parts.append(f"best so far {progress.best:.6g}")
    return "  ".join(parts)


@contextmanager
def watching() -> Iterator[Watcher | None]:
    """Give what shows progress on stderr if that is a terminal; warnings become lines there."""
    line = ProgressLine(sys.stderr) if sys.stderr.isatty() else None

    def show(message: Warning | str, *_: object, **__: object) -> None:
        if line is not None:
            line.clear()
        complain(f"warning: {message}")

    with warnings.catch_warnings():
        warnings.simplefilter("always", UserWarning)
        warnings.showwarning = show
        try:
            yield line
        finally:
            if line is not None:
                line.clear()


def complain(text: str) -> None:
    """Write a line to stderr."""
    print(text, file=sys.stderr)


def say(text: str) -> None:
    """Write a result to stdout; a reader that has gone away is no error.

    Raises
    ------
    InputError
        If stdout cannot be written for another reason, such as a full disk.
    """
    # a terminal that lacks a character shows its number instead
    if isinstance(sys.stdout, io.TextIOWrapper):
        sys.stdout.reconfigure(errors="backslashreplace")
    try:
        print(text)
        sys.stdout.flush()
    except OSError as error:
        # what is still buffered would raise again when the interpreter closes
        devnull = os.open(os.devnull, os.O_WRONLY)
        os.dup2(devnull, sys.stdout.fileno())
        os.close(devnull)
        if not isinstance(error, BrokenPipeError):
            raise InputError("stdout", f"must be writable ({error.strerror})", text[:40]) from error
