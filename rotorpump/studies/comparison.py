# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law, the practical law and the best motion under the drive's limits, side by side."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import Any

from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.practical import run_practical
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.progress import Progress, Watcher
from rotorpump.solution.solution import Solution
from rotorpump.studies.optimization import optimize
from rotorpump.tasks import Measure, Task, measure

IDEAL_STEP = "no limits"
SPEED_STEP = "speed limit only"
OPTIMAL_STEP = "speed and force limits"
"""Rungs of the ladder from the ideal law to all limits of the drive."""


@dataclass(frozen=True, eq=False)
class Comparison:
    """Three answers to one task: what the ideal law claims, and what the limits allow.

    Parameters
    ----------
    rig, task : Rig, Task
        What was asked.
    ideal, practical : LawRun
        The instantaneous law, and the practical law within the limits of the drive.
    optimal : Solution
        The best motion within the limits of the drive.
    speed_limited : Solution, optional
        The best motion within the speed limit alone, if the gap was to be attributed and this took
        a solve.
    attributed : bool, optional
        Whether the gap was to be attributed to the limits.
    """

    rig: Rig
    task: Task
    ideal: LawRun
    practical: LawRun
    optimal: Solution
    speed_limited: Solution | None = None
    attributed: bool = False

    @property
    def measure(self) -> Measure:
        """What is compared."""
        return measure(self.task, self.optimal.objective.name)

    @property
    def optimal_value(self) -> float:
        """Value of the best motion in the unit of the objective; not a number without one."""
        return _value(self.optimal)

    @property
    def overstatement(self) -> float:
        """What the ideal claims, divided by what the limits allow.

        For a time, what the limits allow divided by what the ideal claims: above 1 always means
        that the ideal is too rosy. Not a number where either has no value, infinite where the
        ideal is.
        """
        return self._ratio(self.ideal.objective.value, self.optimal_value)

    def share_of_ideal(self, value: float) -> float:
        """Return how much of what the ideal claims a value of the objective is; 1 is all of it."""
        return self._ratio(value, self.ideal.objective.value)

    @property
    def attribution(self) -> tuple[tuple[str, float], ...]:
        """The objective along the ladder of limits: (step, value), from none to all of them.

        The middle step, the speed limit alone, is there only if the gap was to be attributed.
        """
        first = (IDEAL_STEP, self.ideal.objective.value)
        last = (OPTIMAL_STEP, self.optimal_value)
        if not self.attributed:
            return first, last
        return first, (SPEED_STEP, self._speed_limited_value()), last

    @property
    def solutions(self) -> tuple[Solution, ...]:
        """Everything that was solved for, the best motion under all limits first."""
        if self.speed_limited is None:
            return (self.optimal,)
        return self.optimal, self.speed_limited

    def __str__(self) -> str:
        from rotorpump.studies.comparison_table import tabulate  # noqa: PLC0415

        return tabulate(self)

    def plot(self, axes: Any = None) -> Any:
        """Draw the three motions against time; return the Matplotlib axes."""
        from rotorpump.plotting.compare import plot_comparison  # noqa: PLC0415

        return plot_comparison(self, axes)

    def _ratio(self, rosy: float, sober: float) -> float:
        """``rosy`` by ``sober``, or the inverse where less is better."""
        above, below = (rosy, sober) if self.measure.more_is_better else (sober, rosy)
        if math.isnan(above) or not below > 0.0:
            return math.nan
        return above / below

    def _speed_limited_value(self) -> float:
        """Best value under the speed limit alone; without such a limit that is the ideal."""
        if self.speed_limited is not None:
            return _value(self.speed_limited)
        if math.isinf(self.rig.radial.speed):
            return self.ideal.objective.value
        return self.optimal_value if math.isinf(self.rig.radial.force) else math.nan


def compare(
    rig: Rig,
    task: Task,
    *,
    objective: str | None = None,
    accuracy: float = 1e-4,
    attribute: bool = False,
    on_failure: str = "raise",
    progress: Watcher | None = None,
) -> Comparison:
    """Set the ideal law, the practical law and the best motion under the limits side by side.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.
    accuracy : float, optional
        Relative accuracy of the best motion.
    attribute : bool, optional
        Also find the best motion under the speed limit alone, which tells the cost of the two
        limits apart; takes one more solve.
    on_failure : {"raise", "return"}, optional
        What to do if there is no best motion.
    progress : callable, optional
        Takes a `Progress` now and then.

    Returns
    -------
    Comparison
        The three motions.

    Raises
    ------
    InputError
        If the task cannot begin on this rig, or has no such objective.
    SolveError
        If there is no best motion, unless ``on_failure`` is "return".
    """
    wanted = measure(task, objective).name
    ideal = run_ideal(rig, task, objective=wanted)
    _tell(progress, "ideal law", ideal)
    practical = run_practical(rig, task, objective=wanted)
    _tell(progress, "practical law", practical)
    optimal = optimize(
        rig,
        task,
        objective=wanted,
        accuracy=accuracy,
        on_failure=on_failure,
        progress=progress,
    )
    speed_limited = None
    slide = rig.radial
    if attribute and optimal.success and not (math.isinf(slide.speed) or math.isinf(slide.force)):
        speed_limited = optimize(
            replace(rig, radial=replace(slide, force=math.inf)),
            task,
            objective=wanted,
            accuracy=accuracy,
            on_failure="return",
            progress=progress,
        )
    return Comparison(rig, task, ideal, practical, optimal, speed_limited, attribute)


def _tell(progress: Watcher | None, stage: str, run: LawRun) -> None:
    if progress is not None:
        progress(Progress(stage, 0, run.objective.value))


def _value(solution: Solution) -> float:
    return solution.objective.value if solution.success else math.nan
