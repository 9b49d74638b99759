# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law, the practical law and the best motion under the drives' limits, side by side."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.practical import run_practical
from rotorpump.measures import Measure, check_measure, measure
from rotorpump.physics.control import EFFORTS
from rotorpump.quantities import instance
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.progress import Progress, Watcher
from rotorpump.solution.solution import Solution
from rotorpump.studies.optimization import optimize
from rotorpump.studies.solvability import check_solvable
from rotorpump.tasks import Task

IDEAL_STEP = "no limits"
SPEED_STEP = "speed limits only"
OPTIMAL_STEP = "all limits"
"""Rungs of the ladder from the ideal law to all limits of the drives."""


@dataclass(frozen=True, eq=False)
class Comparison:
    """Three answers to one task: what the ideal law claims, and what the limits allow.

    Parameters
    ----------
    rig, task : Rig, Task
        What was asked.
    ideal, practical : LawRun
        The instantaneous law, and the practical law within the limits of the drives.
    optimal : Solution
        The best motion within the limits of the drives.
    speed_limited : Solution, optional
        The best motion within the speed limits alone, if the gap was to be attributed and this
        took a solve.
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

        The middle step, the speed limits alone, is there only if the gap was to be attributed.
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
        """Best value under the speed limits alone; without such a limit that is the ideal."""
        if self.speed_limited is not None:
            return _value(self.speed_limited)
        if all(math.isinf(slide.top_speed) for slide in self.rig.slides):
            return self.ideal.objective.value
        forceful = any(slide.forceful for slide in self.rig.slides)
        return math.nan if forceful else self.optimal_value


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
        Also find the best motion under the speed limits alone, which tells their cost apart from
        that of the other limits; takes one more solve.
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
    instance("rig", rig, Rig)
    asked = measure(task, objective)
    check_measure(rig, asked)
    check_solvable(rig, task, asked)
    wanted = asked.name
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
    looser = with_speed_limits_alone(rig)
    if attribute and optimal.success and looser is not None and wanted not in EFFORTS:
        speed_limited = optimize(
            looser,
            task,
            objective=wanted,
            accuracy=accuracy,
            on_failure="return",
            progress=progress,
        )
    return Comparison(rig, task, ideal, practical, optimal, speed_limited, attribute)


def with_speed_limits_alone(rig: Rig) -> Rig | None:
    """Return the rig without any limit but those of speed.

    None if there is nothing to take away, a slide would have no limit at all, or friction needs
    finite forces.
    """
    speeds = [slide.top_speed for slide in rig.slides]
    forceful = any(slide.forceful for slide in rig.slides)
    if not forceful or any(map(math.isinf, speeds)) or rig.friction.load_arm > 0.0:
        return None
    return rig.with_slides(lambda slide: Slide(slide.stroke, speed=slide.top_speed))


def _tell(progress: Watcher | None, stage: str, run: LawRun) -> None:
    if progress is not None:
        progress(Progress(stage, 0, run.objective.value))


def _value(solution: Solution) -> float:
    return solution.objective.value if solution.success else math.nan
