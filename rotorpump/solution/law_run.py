# SPDX-License-Identifier: BSD-3-Clause
"""What running a switching law gives."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory


@dataclass(frozen=True, eq=False)
class LawRun:
    """A simulated motion under a switching law.

    Parameters
    ----------
    law : str
        "ideal" or "practical".
    objective : Objective
        What the law reaches on the task; not a number if it does not reach the goal.
    trajectory : Trajectory
        The motion.
    reached : bool
        Whether the goal of the task was reached.
    message : str
        What a reader should know about the run.
    leads : tuple of float, optional
        The two leads of the practical law, before the lowest and before the turning point.
    """

    law: str
    objective: Objective
    trajectory: Trajectory
    reached: bool = True
    message: str = ""
    leads: tuple[float, float] | None = None
