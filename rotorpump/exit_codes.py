# SPDX-License-Identifier: BSD-3-Clause
"""Exit codes of the command line."""

from __future__ import annotations

from collections.abc import Sequence

from rotorpump.solution.solution import Solution
from rotorpump.solution.status import Status

DONE = 0
WRONG_INPUT = 2
NO_SOLUTION = 3
CHECK_FAILED = 4
INTERRUPTED = 130


def exit_code(solutions: Sequence[Solution]) -> int:
    """Return the exit code for what was solved: done only if all of it is solved and verified."""
    if any(solution.status is Status.INTERRUPTED for solution in solutions):
        return INTERRUPTED
    if not all(solution.success for solution in solutions):
        return NO_SOLUTION
    return DONE if all(solution.verified for solution in solutions) else CHECK_FAILED
