# SPDX-License-Identifier: BSD-3-Clause
"""News from a running computation."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True)
class Progress:
    """How far a computation has come.

    Parameters
    ----------
    stage : str
        What is being done.
    iteration : int
        Iterations of this stage so far.
    value : float
        Present value of the objective, in its SI unit; not a number if there is none yet.
    best : float, optional
        Best value of the objective so far, in its SI unit.
    """

    stage: str
    iteration: int
    value: float
    best: float | None = None


Watcher = Callable[[Progress], None]
"""What takes the news."""
