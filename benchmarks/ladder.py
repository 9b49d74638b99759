# SPDX-License-Identifier: BSD-3-Clause
"""Raise the limits of the drive step by step, and see the optimum come near the ideal law."""

from __future__ import annotations

import math
import sys
from collections.abc import Iterator
from dataclasses import replace

from solves import Table, timed_solve

import rotorpump
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Rotate, SpinUp, Task

FACTORS = (1, 2, 4, 8, 16, 32, 64)
COLUMNS = {
    "limits": "<11",
    "speed m/s": ">9",
    "force N": ">7",
    "optimum": ">13",
    "optimum/ideal": ">13",
    "verified": "<8",
    "seconds": ">7",
}

CASES: dict[str, tuple[Rig, Task]] = {
    "rotate": (
        Rig(
            wheel=Wheel(inertia=0.21, mass=3.4),
            mass=0.9,
            radial=Slide(stroke=(0.15, 0.33), speed=0.9, force=60.0),
            friction=AxleFriction(viscous=0.05),
        ),
        Rotate(),
    ),
    "spin-up": (
        Rig(
            wheel=Wheel(inertia=0.24, mass=3.8),
            mass=1.3,
            radial=Slide(stroke=(0.17, 0.36), speed=0.45, force=28.0),
            friction=AxleFriction(viscous=0.03),
        ),
        SpinUp(full_turn=True, start_angle=0.6),
    ),
}
"""Two rigs of our own invention, with what they are to do."""


def rungs(slide: Slide) -> Iterator[tuple[str, Slide]]:
    """Slides with looser and looser limits, then with one of the two limits alone."""
    for factor in FACTORS:
        yield f"x{factor}", replace(slide, speed=factor * slide.speed, force=factor * slide.force)
    yield "force alone", replace(slide, speed=math.inf)
    yield "speed alone", replace(slide, force=math.inf)


def climb(name: str, rig: Rig, task: Task) -> bool:
    """Print the ladder of one case; return whether every optimum on it is verified."""
    ideal = rotorpump.run_ideal(rig, task)
    print(f"{name}: ideal law {ideal.objective}")
    table = Table(COLUMNS)
    table.head()
    good = True
    for limits, slide in rungs(rig.slide("radial")):
        solve = timed_solve(replace(rig, radial=slide), task)
        table.row(
            limits,
            f"{slide.speed:g}",
            f"{slide.force:g}",
            solve.value,
            f"{solve.solution.objective.value / ideal.objective.value:.4f}",
            solve.verdict,
            f"{solve.seconds:.2f}",
        )
        solve.explain()
        good = good and solve.good
    print()
    return good


def main() -> int:
    """Climb both ladders; return 0 if every rung is solved and verified, 1 otherwise."""
    results = [climb(name, rig, task) for name, (rig, task) in CASES.items()]
    return 0 if all(results) else 1


if __name__ == "__main__":
    sys.exit(main())
