# SPDX-License-Identifier: BSD-3-Clause
"""Hold one rig to each limit of its drive alone, then to all of them, and rub its rail."""

from __future__ import annotations

import math
import sys
from dataclasses import replace
from typing import Any

from quadrature import differences
from solves import Table, Timed, print_findings, shortfall, timed_solve

from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.solution.wording import share, task_words
from rotorpump.tasks import Pump, Rotate, Task

DRIVE = Slide(stroke=(0.14, 0.34), motor_constant=6.5)
RIG = Rig(
    wheel=Wheel(inertia=0.19, mass=2.6),
    mass=1.05,
    radial=DRIVE,
    friction=AxleFriction(viscous=0.05, coulomb=0.03),
)
"""A rig of our own invention, its drive still without limits."""

TASKS: tuple[Task, ...] = (Rotate(), Pump(duration=3.2, start_angle=0.7))

ALONE: dict[str, dict[str, Any]] = {
    "speed": {"speed": 0.7},
    "force": {"force": 40.0},
    "power": {"power": 15.0},
    "force rate": {"force_rate": 800.0},
    "continuous force": {"continuous_force": 18.0},
    "motor line": {"stall_force": 45.0, "no_load_speed": 1.1},
}
TOGETHER: dict[str, Any] = {
    name: value for limits in ALONE.values() for name, value in limits.items()
}
RUBBING = {"rubbing": 1.5}
CASES = {
    **ALONE,
    "force, rubbing": {**ALONE["force"], **RUBBING},
    "all": TOGETHER,
    "all, rubbing": {**TOGETHER, **RUBBING},
}
"""Fields of the slide by the name of their row."""

TIGHTER = [*(("all", name) for name in ALONE), ("force, rubbing", "force"), ("all, rubbing", "all")]
"""Pairs of rows; the second has fewer limits, or less to overcome, so it must not be worse."""

NOISE = 1e-3
"""Share by which a looser case may be worse: local optima of meshes of relative accuracy 1e-4."""

SAMPLED = {"peak_force": 1e-3, "peak_power": 1e-3}
SUMMED = 1e-5
"""Relative difference between the report on the drives and the quadrature: of peaks, of sums."""

COLUMNS = {
    "limits": "<16",
    "value": ">13",
    "verified": "<8",
    "seconds": ">7",
    "off": ">7",
    "at the limit, share of time": "<40",
}


def active(solve: Timed) -> str:
    """Return the limits that are reached, with their shares of the time."""
    uses = [use for use in solve.solution.limits if use.active_share > 0.0]
    return ", ".join(
        f"{use.name.removeprefix('radial ')} {share(use.active_share)}" for use in uses
    )


def measure_all(task: Task) -> dict[str, Timed]:
    """Solve one task under all limits; print its table."""
    print(task_words(task))
    table = Table(COLUMNS)
    table.head()
    solves = {}
    for name, fields in CASES.items():
        solve = timed_solve(replace(RIG, radial=replace(DRIVE, **fields)), task)
        off = max(differences(solve.solution).values(), default=math.nan)
        table.row(
            name, solve.value, solve.verdict, f"{solve.seconds:.2f}", f"{off:.0e}", active(solve)
        )
        solve.explain()
        solves[name] = solve
    return solves


def misjudged(solves: dict[str, Timed]) -> list[str]:
    """Rows whose report on the drives is not what the quadrature says."""
    return [
        f"{row}: {axis} {name} by {off:.1e}"
        for row, solve in solves.items()
        if solve.solution.success
        for (axis, name), off in differences(solve.solution).items()
        if not off <= SAMPLED.get(name, SUMMED)
    ]


def unordered(task: Task, solves: dict[str, Timed]) -> list[str]:
    """Pairs of rows of which the looser one is worse."""
    found = []
    for tight, loose in TIGHTER:
        pair = [solves[name].solution for name in (tight, loose)]
        if not all(solution.success for solution in pair):
            continue
        lost = shortfall(task, pair[1].objective.value, pair[0].objective.value)
        if lost > NOISE:
            found.append(f"{loose!r} is {share(lost)} worse than {tight!r}")
    return found


def hold(task: Task) -> bool:
    """Solve one task under all limits; return whether all is well."""
    solves = measure_all(task)
    good = sum(solve.good for solve in solves.values())
    print(f"{good} of {len(solves)} verified")
    wrong, order = misjudged(solves), unordered(task, solves)
    print_findings("reports on the drives other than the quadrature", wrong)
    print_findings(f"of {len(TIGHTER)} pairs, the looser one worse", order)
    print(flush=True)
    return good == len(solves) and not wrong and not order


def main() -> int:
    """Hold the rig to its limits; return 0 if all is verified and in order, 1 otherwise."""
    results = [hold(task) for task in TASKS]
    return 0 if all(results) else 1


if __name__ == "__main__":
    sys.exit(main())
