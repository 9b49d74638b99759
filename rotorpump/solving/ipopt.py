# SPDX-License-Identifier: BSD-3-Clause
"""IPOPT behind one function: options, status table, progress, clean interruption.

This is the only file that calls the solver.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

import casadi
import numpy as np
from numpy.typing import NDArray

from rotorpump.solution.status import Status
from rotorpump.solving.interruption import heed_interrupts, interrupted
from rotorpump.transcription.program import Program

Array = NDArray[np.float64]

STATUSES: dict[str, Status] = {
    "Solve_Succeeded": Status.SOLVED,
    "Solved_To_Acceptable_Level": Status.ACCEPTABLE,
    "Feasible_Point_Found": Status.SOLVED,
    "Infeasible_Problem_Detected": Status.INFEASIBLE,
    "Maximum_Iterations_Exceeded": Status.LIMIT_REACHED,
    "Maximum_CpuTime_Exceeded": Status.LIMIT_REACHED,
    "Maximum_WallTime_Exceeded": Status.LIMIT_REACHED,
    "User_Requested_Stop": Status.INTERRUPTED,
}
"""IPOPT's own words (its ApplicationReturnStatus); every other word means FAILED."""


@dataclass(frozen=True)
class Settings:
    """How to run the solver.

    Parameters
    ----------
    barrier : float
        Initial barrier parameter.
    tolerance : float
        Convergence tolerance.
    iterations : int
        Iterations allowed.
    seconds : float
        Wall time allowed [s].
    verbose : bool
        Whether the solver may print.
    """

    barrier: float = 1.0
    tolerance: float = 1e-7
    iterations: int = 500
    seconds: float = 30.0
    verbose: bool = False


@dataclass(frozen=True, eq=False)
class Outcome:
    """What a run of the solver gave.

    Parameters
    ----------
    status : Status
        How it ended.
    word : str
        The solver's own word for it.
    variables : ndarray, shape (n,)
        Scaled variables.
    objective : float
        Scaled objective, minimised.
    variable_multipliers, row_multipliers : ndarray
        Multipliers of the variable bounds and of the rows.
    iterations : int
        Iterations used.
    seconds : float
        Wall time used [s].
    """

    status: Status
    word: str
    variables: Array
    objective: float
    variable_multipliers: Array
    row_multipliers: Array
    iterations: int
    seconds: float


Monitor = Callable[[int, float], None]


@dataclass(frozen=True)
class Multipliers:
    """Multipliers to start from."""

    variables: Array = field(default_factory=lambda: np.empty(0))
    rows: Array = field(default_factory=lambda: np.empty(0))


def run_ipopt(
    program: Program,
    start: Array,
    settings: Settings,
    *,
    multipliers: Multipliers | None = None,
    monitor: Monitor | None = None,
) -> Outcome:
    """Run IPOPT on a program from scaled starting variables.

    Parameters
    ----------
    program : Program
        The program.
    start : ndarray, shape (n,)
        Scaled starting variables.
    settings : Settings
        How to run.
    multipliers : Multipliers, optional
        Multipliers of an earlier run on the same mesh; makes the start a warm one.
    monitor : callable, optional
        Called with iteration and scaled objective; an exception it raises stops the run and is
        raised again.
    """
    functions = program.functions
    watcher = _Watcher(functions.program, monitor)
    options = _options(program, settings, warm=multipliers is not None)
    solver = casadi.nlpsol(
        "solver",
        "ipopt",
        functions.program,
        {
            "ipopt": options,
            "print_time": False,
            "calc_lam_p": False,
            # A trial point outside the functions' domain is the solver's business: it backs off.
            "show_eval_warnings": False,
            "iteration_callback": watcher,
            **functions.derivatives,
        },
    )
    given = (
        {}
        if multipliers is None
        else {
            "lam_x0": multipliers.variables,
            "lam_g0": multipliers.rows,
        }
    )
    began = time.perf_counter()
    with heed_interrupts():
        result = solver(
            x0=start,
            p=program.parameters,
            lbx=program.variable_bounds.lower,
            ubx=program.variable_bounds.upper,
            lbg=program.row_bounds.lower,
            ubg=program.row_bounds.upper,
            **given,
        )
        stopped = interrupted()
    if watcher.failure is not None:
        raise watcher.failure
    word = "User_Requested_Stop" if stopped else str(solver.stats()["return_status"])
    return Outcome(
        STATUSES.get(word, Status.FAILED),
        word,
        np.array(result["x"]).ravel(),
        float(result["f"]),
        np.array(result["lam_x"]).ravel(),
        np.array(result["lam_g"]).ravel(),
        max(watcher.iteration, 0),
        time.perf_counter() - began,
    )


def _options(program: Program, settings: Settings, *, warm: bool) -> dict[str, Any]:
    """IPOPT's options.

    The program is scaled already, so its own scaling is off. Linear solver and option file are
    named, so that neither an environment variable nor a stray file changes a solve.
    """
    options: dict[str, Any] = {
        "linear_solver": "mumps",
        "option_file_name": "",
        "nlp_scaling_method": "none",
        "obj_scaling_factor": program.objective_scale,
        "bound_relax_factor": 0.0,
        "mu_init": settings.barrier,
        "tol": settings.tolerance,
        "max_iter": settings.iterations,
        "max_wall_time": settings.seconds,
        "print_level": 5 if settings.verbose else 0,
        "sb": "yes",
    }
    if warm:
        options["warm_start_init_point"] = "yes"
    return options


class _Watcher(casadi.Callback):
    """Iteration callback: counts, reports, and stops the run when the user asks for it."""

    def __init__(self, program: dict[str, Any], monitor: Monitor | None) -> None:
        super().__init__()
        self._sizes = {
            "x": program["x"].numel(),
            "f": 1,
            "g": program["g"].numel(),
            "lam_x": program["x"].numel(),
            "lam_g": program["g"].numel(),
            "lam_p": program["p"].numel(),
        }
        self._monitor = monitor
        self.iteration = -1
        self.failure: BaseException | None = None
        self.construct("watcher", {})

    def get_n_in(self) -> int:
        """Count the callback's inputs, which are the solver's outputs."""
        return int(casadi.nlpsol_n_out())

    def get_n_out(self) -> int:
        """One output: whether to stop."""
        return 1

    def get_name_in(self, index: int) -> str:
        """Name of an input."""
        return str(casadi.nlpsol_out(index))

    def get_name_out(self, index: int) -> str:
        """Name of the output."""
        return "stop"

    def get_sparsity_in(self, index: int) -> Any:
        """Shape of an input."""
        return casadi.Sparsity.dense(self._sizes[casadi.nlpsol_out(index)], 1)

    def eval(self, arguments: Any) -> list[Any]:
        """Count an iteration; 1 asks the solver to stop."""
        self.iteration += 1
        try:
            if self._monitor is not None:
                self._monitor(self.iteration, float(arguments[1]))
        except BaseException as error:
            self.failure = error
            return [1]
        return [1 if interrupted() else 0]
