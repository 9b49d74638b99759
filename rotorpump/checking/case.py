# SPDX-License-Identifier: BSD-3-Clause
"""What a motion is checked against: rig, task, and what it is said to be best at."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.physics.control import force_driven
from rotorpump.physics.simulation import Simulator
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Rotate, Task


@dataclass(frozen=True)
class Case:
    """A rig, its task, and the name of the objective.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str
        Name of the objective that the motion was optimized for.
    """

    rig: Rig
    task: Task
    objective: str

    @property
    def load_torque(self) -> float:
        """Torque that a load takes from the wheel [N m]."""
        return self.task.load_torque if isinstance(self.task, Rotate) else 0.0

    @property
    def forced(self) -> tuple[str, ...]:
        """Axes along which forces move the mass: all of them, or none."""
        return self.rig.driven if force_driven(self.rig, self.objective) else ()

    @property
    def told(self) -> tuple[str, ...]:
        """Axes along which the motion is the control, and forces may hold impulses."""
        return () if self.forced else self.rig.driven

    def simulator(self) -> Simulator:
        """Return a plain simulation of the rig with its load."""
        return Simulator.of(self.rig, self.load_torque)
