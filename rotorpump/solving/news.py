# SPDX-License-Identifier: BSD-3-Clause
"""News from the solver's iterations, in the units of the task."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.measures import COSTS, Measure
from rotorpump.rig.rig import Rig
from rotorpump.solution.progress import Progress, Watcher
from rotorpump.solving.ipopt import Monitor
from rotorpump.tasks import Pump, Rotate, Task
from rotorpump.transcription.scaling import Scales


@dataclass(frozen=True)
class Reporter:
    """Turns scaled objectives into news for a watcher.

    Parameters
    ----------
    rig, task, measure : Rig, Task, Measure
        What is being solved, and for what.
    watcher : callable or None
        What takes the news, if anyone does.
    """

    rig: Rig
    task: Task
    measure: Measure
    watcher: Watcher | None

    def tell(self, stage: str) -> None:
        """Announce a stage that has no iterations."""
        if self.watcher is not None:
            self.watcher(Progress(stage, 0, math.nan))

    def monitor(self, stage: str, best: float | None = None) -> Monitor | None:
        """Return what a run of the solver calls in each iteration."""
        watcher = self.watcher
        if watcher is None:
            return None

        def report(iteration: int, objective: float) -> None:
            watcher(Progress(stage, iteration, self._value(objective), best))

        return report

    def _value(self, objective: float) -> float:
        scales, name = Scales.of(self.rig), self.measure.name
        if self.measure in COSTS:
            return float(objective * scales.energy)
        if isinstance(self.task, Pump):
            units = {"energy": scales.energy, "momentum": scales.momentum, "speed": 1 / scales.time}
            size = -objective if name == "energy" else math.sqrt(max(-objective, 0.0))
            return float(size * units[name])
        seconds = float(objective * scales.time)
        if isinstance(self.task, Rotate):
            speed = 2.0 * math.pi / seconds if seconds > 0.0 else math.nan
            return self.task.load_torque * speed if name == "load power" else speed
        return seconds
