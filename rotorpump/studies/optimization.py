# SPDX-License-Identifier: BSD-3-Clause
"""Find the best motion under the drives' limits, and have it checked."""

from __future__ import annotations

import warnings

from rotorpump.errors import InputError, SolveError, SolveWarning
from rotorpump.measures import check_measure, measure
from rotorpump.quantities import choice, instance, positive
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.progress import Watcher
from rotorpump.solution.solution import Solution
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.routes import Wanted
from rotorpump.studies.solvability import check_solvable
from rotorpump.studies.work import Work
from rotorpump.tasks import Task


def optimize(
    rig: Rig,
    task: Task,
    *,
    objective: str | None = None,
    accuracy: float = 1e-4,
    guess: Trajectory | LawRun | Solution | None = None,
    on_failure: str = "raise",
    progress: Watcher | None = None,
) -> Solution:
    """Find the best motion under the limits of the drives, and check it independently.

    Parameters
    ----------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.
    accuracy : float, optional
        Largest relative error of the motion over an interval of the mesh.
    guess : Trajectory, LawRun or Solution, optional
        A motion to start from, before those of the practical law.
    on_failure : {"raise", "return"}, optional
        What to do with a result that is no solution.
    progress : callable, optional
        Takes a `Progress` now and then.

    Returns
    -------
    Solution
        The best local optimum that was found; ``verified`` says whether it passed all checks.

    Raises
    ------
    InputError
        If an argument is out of range, or the task cannot begin on this rig.
    SolveError
        If there is no solution; it carries the Solution as it is.
    """
    instance("rig", rig, Rig)
    wanted = measure(task, objective)
    check_measure(rig, wanted)
    if positive("accuracy", accuracy) >= 0.1:
        raise InputError("accuracy", "must be less than 0.1", accuracy)
    choice("on_failure", on_failure, ("raise", "return"))
    check_solvable(rig, task, wanted)
    solution = Work(Wanted(rig, task, wanted), accuracy, progress).run(_motion(guess))
    if not solution.success and on_failure == "raise":
        raise SolveError(solution.message, solution)
    if solution.status is Status.ACCEPTABLE:
        warnings.warn(f"{wanted.name}: {solution.status.value}", SolveWarning, stacklevel=2)
    return solution


def _motion(guess: object) -> Trajectory | None:
    """Return the motion that the user gives to start from.

    Raises
    ------
    InputError
        If it is no motion.
    """
    if guess is None:
        return None
    motion = guess if isinstance(guess, Trajectory) else getattr(guess, "trajectory", None)
    if not isinstance(motion, Trajectory):
        raise InputError("guess", "must be a Trajectory, or have one", type(guess).__name__)
    if not motion.duration > 0.0:
        raise InputError("guess", "must take some time", motion.duration)
    return motion
