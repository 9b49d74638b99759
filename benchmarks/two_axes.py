# SPDX-License-Identifier: BSD-3-Clause
"""Rigs with two slides, and friction that depends on the axle's load; also at random."""

from __future__ import annotations

import argparse
import statistics
import sys
from collections.abc import Iterator

import numpy as np
from solves import Table, Timed, timed_solve

from rotorpump.rig.bearings import bearing_friction
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, Task

TWO = Rig(
    wheel=Wheel(inertia=0.26, mass=3.7),
    mass=1.2,
    radial=Slide(stroke=(0.17, 0.36), speed=0.5, force=30.0),
    tangential=Slide(stroke=(-0.12, 0.12), speed=0.4, force=20.0),
    friction=AxleFriction(viscous=0.05, coulomb=0.02),
)
LOADED = Rig(
    wheel=Wheel(inertia=0.26, mass=3.7),
    mass=1.2,
    radial=Slide(stroke=(0.17, 0.36), speed=0.5, force=30.0),
    friction=bearing_friction("deep groove ball", 0.030, viscous=0.05),
)
"""Two rigs of our own invention."""

CASES: dict[str, tuple[Rig, Task]] = {
    "pump, two axes": (TWO, Pump(duration=8.0, start_angle=0.3)),
    "rotate, two axes": (TWO, Rotate()),
    "pump, load": (LOADED, Pump(duration=6.0, start_angle=0.5)),
}

SEED = 20
COLUMNS = {
    "case": "<16",
    "value": ">15",
    "verified": "<8",
    "iterations": ">10",
    "starts": ">6",
    "intervals": ">9",
    "seconds": ">7",
}


def random_cases(count: int) -> Iterator[tuple[str, tuple[Rig, Task]]]:
    """Two-axis rigs at random, pumped and rotated in turn; the same in every run."""
    dice = np.random.default_rng(SEED)
    for number in range(1, count + 1):
        rig, pump = _random_rig(dice), _random_pump(dice)
        task: Task = pump if number % 2 else Rotate()
        yield f"{'pump' if number % 2 else 'rotate'} {number}", (rig, task)


def _random_rig(dice: np.random.Generator) -> Rig:
    """Draw a rig whose drives can lift the mass, on an axle that turns easily."""
    mass, inner = dice.uniform(0.5, 2.0), dice.uniform(0.10, 0.20)
    weight = 9.81 * mass
    outer = inner + dice.uniform(0.10, 0.25)
    middle, half = dice.uniform(-0.04, 0.04), dice.uniform(0.05, 0.15)
    return Rig(
        wheel=Wheel(
            inertia=mass * dice.uniform(0.10, 0.35),
            mass=dice.uniform(2.0, 6.0),
            unbalance=mass * dice.uniform(0.0, 0.03),
            unbalance_angle=dice.uniform(-np.pi, np.pi),
        ),
        mass=mass,
        radial=Slide(
            stroke=(inner, outer),
            speed=dice.uniform(0.3, 1.0),
            force=weight * dice.uniform(2.0, 5.0),
        ),
        tangential=Slide(
            stroke=(middle - half, middle + half),
            speed=dice.uniform(0.3, 1.0),
            force=weight * dice.uniform(1.5, 4.0),
        ),
        friction=AxleFriction(
            viscous=mass * dice.uniform(0.01, 0.05), coulomb=mass * dice.uniform(0.0, 0.04)
        ),
    )


def _random_pump(dice: np.random.Generator) -> Pump:
    angle = dice.choice([-1.0, 1.0]) * dice.uniform(0.3, 1.0)
    return Pump(duration=dice.uniform(3.0, 5.0), start_angle=float(angle))


def show(table: Table, name: str, rig: Rig, task: Task) -> Timed:
    """Solve one case, and print its row."""
    solve = timed_solve(rig, task)
    counts = solve.solution.statistics
    table.row(
        name,
        solve.value,
        solve.verdict,
        f"{counts.iterations}",
        f"{counts.starts}",
        f"{counts.intervals}",
        f"{solve.seconds:.2f}",
    )
    solve.explain()
    return solve


def main() -> int:
    """Solve all cases; return 0 if each is solved and verified, 1 otherwise."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0] if __doc__ else None)
    parser.add_argument(
        "--random",
        type=int,
        nargs="?",
        const=20,
        default=0,
        metavar="N",
        help="solve N rigs at random instead, 20 without a number",
    )
    count: int = parser.parse_args().random
    cases = random_cases(count) if count > 0 else iter(CASES.items())
    table = Table(COLUMNS)
    table.head()
    solves = [show(table, name, *case) for name, case in cases]
    solved = sum(solve.solution.success for solve in solves)
    print(f"{solved} of {len(solves)} solved, {sum(solve.good for solve in solves)} verified")
    print(f"median {statistics.median(solve.seconds for solve in solves):.2f} s")
    return 0 if all(solve.good for solve in solves) else 1


if __name__ == "__main__":
    sys.exit(main())
