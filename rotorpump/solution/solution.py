# SPDX-License-Identifier: BSD-3-Clause
"""What an optimization gives back."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.objective import Objective
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solution.usage import DriveUse
from rotorpump.tasks import Task


@dataclass(frozen=True)
class LimitUse:
    """How a limit of a drive was used.

    Parameters
    ----------
    name : str
        The axis and the limit: "radial speed", "tangential force", "radial high stop" and so on.
    value : float
        The limit, in ``unit``.
    unit : str
        SI unit of the limit.
    active_share : float
        Share of the time within one percent of the limit, 0 to 1.
    price : float
        Improvement of the objective per unit of a looser limit, from the multipliers.
    """

    name: str
    value: float
    unit: str
    active_share: float
    price: float


@dataclass(frozen=True)
class Statistics:
    """What the solve cost.

    Parameters
    ----------
    iterations : int
        Iterations of the solver over all solves.
    seconds : float
        Wall time [s].
    intervals : int
        Collocation intervals of the final mesh.
    refinements : int
        Solves on a finer mesh or a tighter relaxation after the first.
    starts : int
        Starting motions tried.
    spread : float
        Relative distance between the best and the worst optimum of the starts that solved.
    """

    iterations: int
    seconds: float
    intervals: int
    refinements: int
    starts: int
    spread: float


@dataclass(frozen=True)
class MeshSummary:
    """The final mesh: how many intervals each arc has, and the number of points in each."""

    intervals: tuple[int, ...]
    degree: int


@dataclass(frozen=True, eq=False)
class Solution:
    """The best motion that was found, or what there is of one.

    Parameters
    ----------
    rig, task : Rig, Task
        What was asked.
    status : Status
        How the solve ended.
    message : str
        The outcome in one sentence.
    objective : Objective
        What the motion reaches.
    trajectory : Trajectory or None
        The motion; None if there is none.
    limits : tuple of LimitUse
        How each limit of the drives was used.
    drives : tuple of DriveUse
        What the motion asks of each drive.
    mesh : MeshSummary or None
        The final mesh.
    statistics : Statistics
        What the solve cost.
    checks : tuple of Check
        Outcome of the independent checks; empty before they have run.
    verified : bool
        Whether all checks passed; set by the checking stage only.
    """

    rig: Rig
    task: Task
    status: Status
    message: str
    objective: Objective
    trajectory: Trajectory | None
    limits: tuple[LimitUse, ...] = ()
    drives: tuple[DriveUse, ...] = ()
    mesh: MeshSummary | None = None
    statistics: Statistics = field(default_factory=lambda: Statistics(0, 0.0, 0, 0, 0, 0.0))
    checks: tuple[Check, ...] = ()
    verified: bool = False

    @property
    def success(self) -> bool:
        """Whether there is a solution; says nothing about the checks."""
        return self.status.success

    def summary(self) -> str:
        """Outcome, limits and checks as lines of text."""
        from rotorpump.solution.summary import summarize  # noqa: PLC0415

        return summarize(self)

    def save(self, folder: str | Path) -> tuple[Path, ...]:
        """Write ``solution.json`` and ``trajectory.csv`` into ``folder``; return their paths."""
        from rotorpump.solution.storage import save_solution  # noqa: PLC0415

        return save_solution(self, Path(folder))

    def plot(self, axes: Any = None) -> Any:
        """Draw energy, position and force against time; return the Matplotlib axes."""
        from rotorpump.plotting.profiles import plot_profiles  # noqa: PLC0415

        return plot_profiles(self, axes)
