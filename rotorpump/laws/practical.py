# SPDX-License-Identifier: BSD-3-Clause
"""The practical law on a task, its leads found by search."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from functools import lru_cache, partial

import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.lead import LeadRun, Leads
from rotorpump.laws.trials import Trial, try_pump, try_rotation, try_spin_up
from rotorpump.physics.beginning import check_beginning
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_force, wheel_speed
from rotorpump.rig.rig import Rig
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Pump, Rotate, Task, measure

Array = NDArray[np.float64]

GRID = (0.1, 0.3, 0.5, 0.7, 0.9, 1.1, 1.3)
"""Leads that are tried first, in both places."""

ROUNDS = 3
"""Halvings of the step in the search around the best of the grid."""

ROTATION_SPEEDS = (1.2, 2.0, 3.5)
"""Starting speeds of a rotation, in units of the least that carries the wheel over the top."""


@lru_cache(maxsize=1)
def rehearse(
    rig: Rig, task: Task, *, rounds: int = ROUNDS, coarse: bool = False
) -> tuple[Trial, ...]:
    """Run the law over the grid of leads, then closer around the best; the best trial is first.

    Parameters
    ----------
    rig, task : Rig, Task
        What is to be done.
    rounds : int, optional
        Halvings of the step in the search around the best of the grid.
    coarse : bool, optional
        Whether a third of the leads in each place is enough (always so for a rotation).

    Notes
    -----
    The last rehearsal is kept: a comparison needs it for the law itself and for the optimum.

    Raises
    ------
    InputError
        If the task cannot begin on this rig.
    """
    attempts = _attempts(rig, task)
    grid = GRID[::3] if coarse or isinstance(task, Rotate) else GRID
    trials = [attempt(Leads(a, b)) for a in grid for b in grid for attempt in attempts]
    which = max(range(len(trials)), key=lambda k: _rank(trials[k])) % len(attempts)
    reach = (grid[1] - grid[0]) / 2.0
    for _ in range(rounds):
        best = max(trials, key=_rank).run.leads
        for da, db in ((reach, 0.0), (-reach, 0.0), (0.0, reach), (0.0, -reach)):
            nearby = Leads(max(best.bottom + da, 0.0), max(best.turn + db, 0.0))
            trials.append(attempts[which](nearby))
        reach /= 2.0
    return tuple(sorted(trials, key=_rank, reverse=True))


def _rank(trial: Trial) -> tuple[bool, bool, float]:
    """Order of preference, the best largest."""
    return not trial.slams, trial.reached, trial.merit


def _attempts(rig: Rig, task: Task) -> list[Callable[[Leads], Trial]]:
    """Return what runs the law on the task with given leads, one for each way to begin."""
    if isinstance(task, Rotate):
        constants = Constants.of(rig)
        weight = 4.0 * constants.mass * constants.gravity * constants.outer
        least = math.sqrt(weight / rig.inertia(constants.outer))
        speeds = [factor * least for factor in ROTATION_SPEEDS]
        return [partial(try_rotation, rig, speed) for speed in speeds]
    check_beginning(rig, task)
    if isinstance(task, Pump):
        return [lambda leads: try_pump(rig, task, leads)]
    return [lambda leads: try_spin_up(rig, task, leads)]


def run_practical(rig: Rig, task: Task, *, objective: str | None = None) -> LawRun:
    """Run the practical law with the best leads that a search finds.

    Parameters
    ----------
    rig : Rig
        The rig with its limits.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.

    Returns
    -------
    LawRun
        Pump: energy above rest at the end [J]. SpinUp: time to the goal [s]. Rotate: mean speed of
        the last turn [rad/s]. Not a number, with the reason in ``message``, if out of reach.

    Raises
    ------
    InputError
        If the task cannot begin on this rig, or has no such objective.
    """
    wanted = measure(task, objective)
    return best_run(rig, task, rehearse(rig, task), objective=wanted.name)


def best_run(
    rig: Rig, task: Task, trials: Sequence[Trial], *, objective: str | None = None
) -> LawRun:
    """Return the best of rehearsed trials as a run of the law."""
    wanted = measure(task, objective)
    best = trials[0]
    message = ""
    if not best.reached:
        lost = "the rotation dies down" if isinstance(task, Rotate) else "the goal is not met"
        message = f"{lost} with any of the {len(trials)} pairs of leads tried"
    elif best.slams:
        message = "the drive cannot always stop the mass: an end stop has to catch it"
    return LawRun(
        "practical",
        Objective(wanted.name, best.value, wanted.unit),
        sampled_trajectory(rig, best.run),
        best.reached,
        message,
        (best.run.leads.bottom, best.run.leads.turn),
    )


def sampled_trajectory(rig: Rig, run: LeadRun) -> Trajectory:
    """Return a run of the law as a trajectory, one interval per controller step."""
    angle, momentum, radial, radial_speed = run.states
    drive = np.concatenate((run.forces[:1], run.forces)) if run.forces.size else np.zeros(1)
    constants = Constants.of(rig)
    speed = wheel_speed(constants, momentum, radial)
    inner, outer = rig.radial.stroke
    seated = (radial_speed == 0.0) & ((radial >= outer) | (radial <= inner))
    resting = contact_force(np, constants, angle, speed, radial, 0.0)
    nodes = np.arange(angle.size)
    return trajectory_of(
        rig,
        run.time,
        angle,
        momentum,
        radial,
        radial_speed,
        drive,
        nodes,
        nodes[[0, -1]],
        contact=np.where(seated, resting, drive),
    )
