# SPDX-License-Identifier: BSD-3-Clause
"""What a mass-shifting wheel can reach under real drive limits, beside the instantaneous ideal.

Describe a `Rig` and a task (`Pump`, `SpinUp`, `Rotate`); `compare` sets the ideal law, the
practical law and the best motion side by side, `optimize` finds the best motion alone. All numbers
are in SI units.
"""

from __future__ import annotations

from rotorpump.errors import InputError, SolveError, SolveWarning
from rotorpump.laws.instantaneous import run_ideal
from rotorpump.laws.practical import run_practical
from rotorpump.rig.bearings import bearing_friction
from rotorpump.rig.example import example_rig
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.rigfile import read_rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.solution import Solution
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.studies.comparison import Comparison, compare
from rotorpump.studies.optimization import optimize
from rotorpump.tasks import Pump, Rotate, SpinUp
from rotorpump.version import installed_version

__version__ = installed_version()

__all__ = [
    "AxleFriction",
    "Comparison",
    "InputError",
    "LawRun",
    "Pump",
    "Rig",
    "Rotate",
    "Slide",
    "Solution",
    "SolveError",
    "SolveWarning",
    "SpinUp",
    "Status",
    "Trajectory",
    "Wheel",
    "__version__",
    "bearing_friction",
    "compare",
    "example_rig",
    "optimize",
    "read_rig",
    "run_ideal",
    "run_practical",
]
