# SPDX-License-Identifier: BSD-3-Clause
"""Results put together by hand, for tests of what comes after the solver."""

from __future__ import annotations

import math
from dataclasses import replace

from simulated_motion import pumping

from rotorpump.solution.check import Check
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.solution.solution import LimitUse, MeshSummary, Solution, Statistics
from rotorpump.solution.status import Status
from rotorpump.solution.usage import DriveUse
from rotorpump.studies.comparison import Comparison
from rotorpump.tasks import SpinUp

PASSED = Check("replay", 2e-6, 1e-3, "1")
MISSED = Check("audit", 3e-2, 1e-3, "1", "over the whole motion")
STATISTICS = Statistics(95, 1.25, 60, 3, 4, 2e-5)


def made_solution(**changes) -> Solution:
    rig, task, trajectory, objective = pumping()
    solution = Solution(
        rig=rig,
        task=task,
        status=Status.SOLVED,
        message="an optimum",
        objective=objective,
        trajectory=trajectory,
        limits=(
            LimitUse("radial speed", 0.8, "m/s", 0.25, 1.5),
            LimitUse("radial force", 40.0, "N", 0.125, math.nan),
        ),
        drives=(DriveUse("radial", 40.0, 22.5, 18.0, 9.5, math.nan),),
        mesh=MeshSummary((30, 30), 3),
        statistics=STATISTICS,
        checks=(PASSED,),
        verified=True,
    )
    return replace(solution, **changes)


def unsolved(status: Status, **changes) -> Solution:
    nothing = {
        "status": status,
        "message": "the mass is too light",
        "objective": Objective("energy", math.nan, "J"),
        "trajectory": None,
        "limits": (),
        "drives": (),
        "checks": (),
        "verified": False,
    }
    return made_solution(**(nothing | changes))


def made_law(law: str, value: float, **changes) -> LawRun:
    _, _, trajectory, objective = pumping()
    return replace(
        LawRun(law, replace(objective, value=value), trajectory, not math.isnan(value)), **changes
    )


def made_comparison(ideal: float = 12.0, practical: float = 3.0, **changes) -> Comparison:
    solution = made_solution(objective=Objective("energy", 4.0, "J"))
    parts = {
        "rig": solution.rig,
        "task": solution.task,
        "ideal": made_law("ideal", ideal),
        "practical": made_law("practical", practical, leads=(0.5, 0.25)),
        "optimal": solution,
    }
    return Comparison(**(parts | changes))


def timed_comparison(ideal: float, optimal: float) -> Comparison:
    """A comparison of times, of which less is better."""
    comparison = made_comparison()
    time = Objective("time", optimal, "s")
    return replace(
        comparison,
        task=SpinUp(start_angle=0.3, energy=5.0),
        ideal=replace(comparison.ideal, objective=replace(time, value=ideal)),
        practical=replace(comparison.practical, objective=replace(time, value=9.0)),
        optimal=replace(comparison.optimal, objective=time),
    )
