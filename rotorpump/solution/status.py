# SPDX-License-Identifier: BSD-3-Clause
"""How a solve ended; the value of each status is advice to the user."""

from __future__ import annotations

from enum import Enum


class Status(Enum):
    """How a solve ended."""

    SOLVED = "solved to the requested tolerance"
    ACCEPTABLE = "solved to a weaker tolerance than requested; refine or try another guess"
    INFEASIBLE = "the task cannot be done by this rig; the message says what is missing"
    LIMIT_REACHED = "out of iterations or time; the best iterate is kept"
    INTERRUPTED = "interrupted by the user; the best iterate is kept"
    FAILED = "the solver gave up; try another guess, or a looser accuracy"

    @property
    def success(self) -> bool:
        """Whether the result is a solution."""
        return self in (Status.SOLVED, Status.ACCEPTABLE)
