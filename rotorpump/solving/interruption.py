# SPDX-License-Identifier: BSD-3-Clause
"""Ctrl-C during a solve: remembered by a signal handler, asked for between iterations.

The solver's compiled loop never sees a KeyboardInterrupt; without this, Ctrl-C would wait for
the end of the solve.
"""

from __future__ import annotations

import signal
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from types import FrameType

_asked = threading.Event()


def interrupted() -> bool:
    """Whether the user has asked to stop since `heed_interrupts` was entered."""
    return _asked.is_set()


@contextmanager
def heed_interrupts() -> Iterator[None]:
    """Turn Ctrl-C into a request to stop, for the duration of the block.

    Outside the main thread, where signals cannot be handled, it changes nothing. A second Ctrl-C
    acts as usual.
    """
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    _asked.clear()
    before = signal.getsignal(signal.SIGINT)

    def remember(number: int, frame: FrameType | None) -> None:
        if _asked.is_set() and callable(before):
            before(number, frame)
        _asked.set()

    signal.signal(signal.SIGINT, remember)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
