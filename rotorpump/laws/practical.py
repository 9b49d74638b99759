# SPDX-License-Identifier: BSD-3-Clause
"""The practical law on a task, its leads found by search."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from functools import lru_cache, partial

import numpy as np

from rotorpump.laws.lead import ROWS, LeadRun, Leads
from rotorpump.laws.rotation_trials import MOST_TURNS, try_rotation
from rotorpump.laws.trials import Trial, try_pump, try_spin_up
from rotorpump.measures import check_measure, measure
from rotorpump.physics.beginning import check_beginning
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_forces, momentum_rate, wheel_acceleration
from rotorpump.physics.equations import wheel_speed as speed_of
from rotorpump.rig.rig import AXES, Rig
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Pump, Rotate, SpinUp, Task

GRID = (0.1, 0.3, 0.5, 0.7, 0.9, 1.1, 1.3)
"""Leads that are tried first, in both places."""

ROUNDS = 3
"""Halvings of the step in the search around the best of the grid."""

ROTATION_SPEEDS = (1.2, 2.0, 3.5)
"""Starting speeds of a rotation, in units of the least that carries the wheel over the top."""

FORCE_SHARES = (1.0, 0.6, 0.35, 0.2)
"""Shares of the drives' forces that are tried where a continuous force limits their mean."""


@lru_cache(maxsize=1)
def rehearse(
    rig: Rig,
    task: Task,
    *,
    objective: str | None = None,
    rounds: int = ROUNDS,
    coarse: bool = False,
) -> tuple[Trial, ...]:
    """Run the law over the grid of leads, then closer around the best; the best trial is first.

    Parameters
    ----------
    rig, task : Rig, Task
        What is to be done.
    objective : str, optional
        Name of the objective; the default one of the task if not given.
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
        If the task cannot begin on this rig, has no such objective, or the rig lacks what it needs.
    """
    attempts = _attempts(rig, task, objective)
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
    return trial.within_limits, trial.reached, trial.merit


def _attempts(rig: Rig, task: Task, objective: str | None) -> list[Callable[[Leads], Trial]]:
    """Return what runs the law on the task with given leads, one for each way to do it."""
    check_measure(rig, measure(task, objective))
    check_beginning(rig, task)
    limited = any(math.isfinite(slide.continuous_force) for slide in rig.slides)
    shares = FORCE_SHARES if limited else FORCE_SHARES[:1]
    if isinstance(task, Rotate):
        place = rig.lowest_place
        weight = 4.0 * rig.gravity * math.hypot(*rig.static_moment(*place))
        least = math.sqrt(weight / rig.inertia(*place))
        return [
            partial(try_rotation, rig, factor * least, task=task, objective=objective, share=share)
            for factor in ROTATION_SPEEDS
            for share in shares
        ]
    if isinstance(task, Pump):
        return [partial(try_pump, rig, task, objective=objective, share=s) for s in shares]
    return [partial(try_spin_up, rig, task, objective=objective, share=s) for s in shares]


def run_practical(rig: Rig, task: Task, *, objective: str | None = None) -> LawRun:
    """Run the practical law on a task with the best leads found.

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
        With what the law reaches, see `rotorpump.measures`; costs of a rotation are those of a
        turn. Not a number, with the reason in ``message``, if out of reach.

    Raises
    ------
    InputError
        If the task cannot begin on this rig, has no such objective, or the rig lacks what it needs.
    """
    trials = rehearse(rig, task, objective=objective)
    return best_run(rig, task, trials, objective=objective)


def best_run(
    rig: Rig, task: Task, trials: Sequence[Trial], *, objective: str | None = None
) -> LawRun:
    """Return the best of rehearsed trials as a run of the law."""
    wanted = measure(task, objective)
    best = trials[0]
    load = task.load_torque if isinstance(task, Rotate) else 0.0
    return LawRun(
        "practical",
        Objective(wanted.name, best.value, wanted.unit),
        sampled_trajectory(rig, best.run, load),
        best.reached,
        "; ".join(_remarks(task, best, len(trials))),
        (best.run.leads.bottom, best.run.leads.turn),
    )


def _remarks(task: Task, best: Trial, count: int) -> list[str]:
    """Words on a run of the law, none if there is nothing to say."""
    if math.isnan(best.value):
        return [f"{_shortfall(task, best)} with any of the {count} pairs of leads tried"]
    remarks = []
    if isinstance(task, Rotate) and task.mean_speed is not None:
        remarks.append(
            f"the practical law turns at {best.mean_speed:.6g} rad/s on average, which it cannot"
            f" choose; {task.mean_speed:.6g} rad/s is asked for"
        )
    if best.slams:
        remarks.append("the drive cannot always stop the mass: an end stop has to catch it")
    if best.overheats:
        remarks.append("the continuous force is exceeded")
    return remarks


def _shortfall(task: Task, best: Trial) -> str:
    """Words on what a run without a value lacks."""
    if isinstance(task, Rotate):
        momentum = task.direction * best.run.states[1]
        if momentum.min() < 0.0:
            return "the rotation dies down"
        return f"the rotation is not steady after {MOST_TURNS} turns"
    if isinstance(task, SpinUp) and task.deadline is not None:
        return f"the goal is not met within {task.deadline:.6g} s"
    return "the goal is not met"


def sampled_trajectory(rig: Rig, run: LeadRun, load_torque: float = 0.0) -> Trajectory:
    """Return a run of the law as a trajectory, one interval per controller step."""
    drives = np.zeros((2, run.states.shape[1]))
    if run.forces.shape[1]:
        drives = np.hstack((run.forces[:, :1], run.forces))
    nodes = np.arange(run.states.shape[1])
    return trajectory_of(
        rig,
        run.time,
        run.states[0],
        run.states[1],
        run.slides,
        (drives[0], drives[1]),
        nodes,
        nodes[[0, -1]],
        contacts=_contacts(rig, run, drives, load_torque),
        load_torque=load_torque,
    )


def _contacts(
    rig: Rig, run: LeadRun, drives: np.ndarray, load_torque: float
) -> tuple[np.ndarray, np.ndarray]:
    """Whole forces on the mass: the drive's less the rubbing, or what holds a seated mass [N]."""
    constants = Constants.of(rig, load_torque)
    angle, momentum, *_ = run.states
    speed = speed_of(constants, momentum, run.slides)
    rate = momentum_rate(np, constants, angle, speed, run.slides, np.sign(speed))
    wheel = wheel_acceleration(constants, rate, speed, run.slides, 0.0, 0.0)
    holding = contact_forces(np, constants, angle, speed, wheel, run.slides, 0.0, 0.0)
    contacts = []
    for index, axis in enumerate(AXES):
        contact = drives[index]
        if axis in rig.driven:
            position, slide_speed = (run.states[row] for row in ROWS[axis])
            low, high = rig.stroke(axis)
            seated = (slide_speed == 0.0) & ((position >= high) | (position <= low))
            rubbed = contact - rig.slide(axis).rubbing * np.sign(slide_speed)
            contact = np.where(seated, holding[index], rubbed)
        contacts.append(contact)
    return contacts[0], contacts[1]
