# SPDX-License-Identifier: BSD-3-Clause
"""Do the same thing in the least time, with the least work, the least heat, the least of both."""

from __future__ import annotations

import math
import sys
from dataclasses import replace

from solves import Table, Timed, print_findings, timed_solve

from rotorpump.measures import COSTS
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.solution.usage import total_effort
from rotorpump.solution.wording import share, task_words
from rotorpump.tasks import Rotate, SpinUp, Task

RIG = Rig(
    wheel=Wheel(inertia=0.22, mass=3.1),
    mass=1.15,
    radial=Slide(stroke=(0.15, 0.35), speed=0.8, force=35.0, motor_constant=6.0),
    friction=AxleFriction(viscous=0.03, coulomb=0.02),
)
"""A rig of our own invention."""

SPIN_UP = SpinUp(energy=6.0, start_angle=0.7)

LATER = 1.3
"""Deadline, in least times."""

SLOWER = (0.6, 0.9)
"""Given mean speeds, in highest mean speeds."""

EFFORTS = [cost.name for cost in COSTS]

NOISE = 1e-3
"""Share by which a best value may be beaten: local optima of meshes of relative accuracy 1e-4."""

MET = 1e-6
"""Largest relative distance from a given mean speed, or beyond a deadline."""

COLUMNS = {
    "least": "<10",
    "time": ">9",
    "work": ">9",
    "heat": ">9",
    "work+heat": ">9",
    "verified": "<8",
    "seconds": ">7",
}


Solves = dict[str, Timed]
"""Motions that do the same, by what each does best."""


def least_efforts(task: Task) -> Solves:
    """Solve a task for each effort."""
    return {name: timed_solve(RIG, task, name) for name in EFFORTS}


def figures_of(solve: Timed) -> dict[str, float]:
    """Time [s] and efforts [J] of a motion; not numbers where there is no solution."""
    trajectory = solve.solution.trajectory
    if trajectory is None or not solve.solution.success:
        return dict.fromkeys(("time", *EFFORTS), math.nan)
    efforts = {name: total_effort(RIG, trajectory, name) for name in EFFORTS}
    return {"time": trajectory.duration, **efforts}


def show(task: Task, solves: Solves, problems: list[str]) -> bool:
    """Print the table of a task; return whether all is well with it."""
    print(task_words(task))
    table = Table(COLUMNS)
    table.head()
    for objective, solve in solves.items():
        cells = [f"{value:.5g}" for value in figures_of(solve).values()]
        table.row(objective, *cells, solve.verdict, f"{solve.seconds:.2f}")
        solve.explain()
    good = sum(solve.good for solve in solves.values())
    found = problems + beaten(solves)
    print_findings(f"{good} of {len(solves)} verified; surprises", found)
    print(flush=True)
    return good == len(solves) and not found


def beaten(solves: Solves) -> list[str]:
    """Say which motion is better than another at what the other should do best."""
    figures = {name: figures_of(solve) for name, solve in solves.items() if solve.good}
    return [
        f"least {best} takes {share(own[best] / others[best] - 1.0)} more {best} than least {other}"
        for best, own in figures.items()
        for other, others in figures.items()
        if own[best] > others[best] * (1.0 + NOISE)
    ]


def spin_up() -> bool:
    """Reach an energy, at leisure and in a hurry; return whether all is well."""
    fastest = timed_solve(RIG, SPIN_UP)
    free = {"time": fastest, **least_efforts(SPIN_UP)}
    good = show(SPIN_UP, free, [])
    if not fastest.good:
        return False
    deadline = LATER * figures_of(fastest)["time"]
    hurried = replace(SPIN_UP, deadline=deadline)
    held = least_efforts(hurried)
    problems = []
    for name, solve in held.items():
        figures = figures_of(solve)
        if figures["time"] > deadline * (1.0 + MET):
            problems.append(f"least {name} is late")
        saved = figures_of(free[name])[name] / figures[name] - 1.0
        if saved > NOISE:
            problems.append(f"without the deadline, least {name} takes {share(saved)} more")
    return show(hurried, held, problems) and good


def rotate() -> bool:
    """Turn at given mean speeds; return whether all is well."""
    fastest = timed_solve(RIG, Rotate())
    print(f"{task_words(Rotate())}: {fastest.value}, verified: {fastest.verdict}\n", flush=True)
    fastest.explain()
    if not fastest.good:
        return False
    return all([turn_at(factor * fastest.solution.objective.value) for factor in SLOWER])


def turn_at(mean_speed: float) -> bool:
    """Turn at a given mean speed [rad/s]; return whether all is well."""
    task = Rotate(mean_speed=mean_speed)
    solves = least_efforts(task)
    problems = []
    for name, solve in solves.items():
        off = 2.0 * math.pi / figures_of(solve)["time"] / mean_speed - 1.0
        if abs(off) > MET:
            problems.append(f"least {name} is {off:.1e} off the mean speed")
    return show(task, solves, problems)


def main() -> int:
    """Compare efforts; return 0 if all is verified and in order, 1 otherwise."""
    results = [spin_up(), rotate()]
    return 0 if all(results) else 1


if __name__ == "__main__":
    sys.exit(main())
