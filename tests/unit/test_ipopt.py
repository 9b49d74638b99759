# SPDX-License-Identifier: BSD-3-Clause
"""The solver behind its function: status table, callback, interruption, outside influences."""

from __future__ import annotations

import math
import signal
import threading

import numpy as np
import pytest
from posed_programs import rig_on

from rotorpump.laws.lead import Leads
from rotorpump.laws.trials import try_pump
from rotorpump.measures import measure
from rotorpump.solution.status import Status
from rotorpump.solving import ipopt
from rotorpump.solving.assignment import assign
from rotorpump.solving.interruption import heed_interrupts, interrupted
from rotorpump.solving.ipopt import STATUSES, Multipliers, Settings, run_ipopt
from rotorpump.solving.seeds import guess_of, seed_of
from rotorpump.tasks import Pump
from rotorpump.transcription.mesh import Mesh
from rotorpump.transcription.program import Program

RIG = rig_on(1)
TASK = Pump(duration=1.6, start_angle=0.6)

# IPOPT's ApplicationReturnStatus, as its documentation lists it (from memory).
WORDS = {
    "Solve_Succeeded": Status.SOLVED,
    "Solved_To_Acceptable_Level": Status.ACCEPTABLE,
    "Feasible_Point_Found": Status.SOLVED,
    "Infeasible_Problem_Detected": Status.INFEASIBLE,
    "Maximum_Iterations_Exceeded": Status.LIMIT_REACHED,
    "Maximum_CpuTime_Exceeded": Status.LIMIT_REACHED,
    "Maximum_WallTime_Exceeded": Status.LIMIT_REACHED,
    "User_Requested_Stop": Status.INTERRUPTED,
    "Search_Direction_Becomes_Too_Small": Status.FAILED,
    "Diverging_Iterates": Status.FAILED,
    "Restoration_Failed": Status.FAILED,
    "Error_In_Step_Computation": Status.FAILED,
    "Not_Enough_Degrees_Of_Freedom": Status.FAILED,
    "Invalid_Problem_Definition": Status.FAILED,
    "Invalid_Option": Status.FAILED,
    "Invalid_Number_Detected": Status.FAILED,
    "Unrecoverable_Exception": Status.FAILED,
    "NonIpopt_Exception_Thrown": Status.FAILED,
    "Insufficient_Memory": Status.FAILED,
    "Internal_Error": Status.FAILED,
    "a word that nobody has thought of": Status.FAILED,
}


@pytest.fixture(scope="module")
def posed():
    """A small program and a start: pumping for a little more than a swing, three arcs."""
    seed = seed_of(TASK, guess_of(RIG, try_pump(RIG, TASK, Leads(0.5, 0.5)).run))
    problem = assign(RIG, TASK, measure(TASK), seed)
    program = Program(problem, Mesh.uniform(len(problem.chain), 4, 1, flexible=True))
    return program, program.start_from(seed.guess, seed.ends)


@pytest.fixture(scope="module")
def solved(posed):
    return run_ipopt(*posed, Settings())


@pytest.mark.parametrize("word", WORDS)
def test_every_word_has_its_status(word, posed, monkeypatch):
    assert STATUSES.get(word, Status.FAILED) is WORDS[word]
    # and run_ipopt goes by the table, whatever numbers come with the word
    monkeypatch.setattr(ipopt.casadi, "nlpsol", lambda *_: _Told(posed[0], word))
    outcome = run_ipopt(*posed, Settings())
    assert (outcome.status, outcome.word) == (WORDS[word], word)


class _Told:
    """In place of the solver: ends at once, with a given word."""

    def __init__(self, program: Program, word: str) -> None:
        self._sizes = program.layout.variables, program.row_bounds.lower.size
        self._word = word

    def __call__(self, x0, **_):
        variables, rows = self._sizes
        return {"x": x0, "f": 0.0, "lam_x": np.zeros(variables), "lam_g": np.zeros(rows)}

    def stats(self):
        return {"return_status": self._word, "success": True}


def test_small_program_is_solved(posed, solved):
    program, start = posed
    assert solved.status is Status.SOLVED
    assert solved.word == "Solve_Succeeded"
    assert 0 < solved.iterations < 150
    bounds, rows = program.variable_bounds, program.row_bounds
    z = solved.variables
    assert z.shape == start.shape
    assert np.all(z >= bounds.lower)
    assert np.all(z <= bounds.upper)
    values = np.array(program.functions.derivatives["jac_g"](z, program.parameters)[0]).ravel()
    assert np.all(values >= rows.lower - 1e-6)
    assert np.all(values <= rows.upper + 1e-6)
    objective, gradient = program.functions.derivatives["grad_f"](z, program.parameters)
    assert solved.objective == pytest.approx(float(objective))
    # stationary: gradient of the Lagrangian, which the outcome's multipliers complete
    jacobian = program.functions.derivatives["jac_g"](z, program.parameters)[1]
    slope = np.array(gradient).ravel() + solved.variable_multipliers
    slope += np.array(jacobian.T @ solved.row_multipliers).ravel()
    free = bounds.lower < bounds.upper
    assert np.abs(slope[free]).max() < 1e-5


def test_monitor_is_told_every_iteration(posed, solved):
    news = []
    outcome = run_ipopt(*posed, Settings(), monitor=lambda *told: news.append(told))
    assert [iteration for iteration, _ in news] == list(range(outcome.iterations + 1))
    assert news[-1][1] == pytest.approx(outcome.objective, rel=1e-6)
    assert outcome.iterations == solved.iterations
    assert np.array_equal(outcome.variables, solved.variables)


def test_iterations_are_limited(posed):
    outcome = run_ipopt(*posed, Settings(iterations=3))
    assert outcome.status is Status.LIMIT_REACHED
    assert outcome.iterations == 3
    assert np.isfinite(outcome.variables).all()


def test_warm_start_takes_fewer_iterations(posed, solved):
    multipliers = Multipliers(solved.variable_multipliers, solved.row_multipliers)
    again = run_ipopt(posed[0], solved.variables, Settings(barrier=1e-6), multipliers=multipliers)
    assert again.status is Status.SOLVED
    assert again.objective == pytest.approx(solved.objective, rel=1e-5)
    assert again.iterations < 0.5 * solved.iterations


class MonitorError(Exception):
    pass


@pytest.mark.parametrize("error", [MonitorError("enough"), KeyboardInterrupt(), SystemExit(3)])
def test_exception_of_the_monitor_stops_the_run_and_is_raised(posed, error):
    seen = []

    def monitor(iteration, _):
        seen.append(iteration)
        if iteration == 2:
            raise error

    with pytest.raises(type(error)) as caught:
        run_ipopt(*posed, Settings(), monitor=monitor)
    assert caught.value is error
    assert seen == [0, 1, 2]


def interrupt_at(iteration, times=1):
    def monitor(now, _):
        if now == iteration:
            for _ in range(times):
                signal.raise_signal(signal.SIGINT)

    return monitor


def test_interrupt_ends_the_run_and_keeps_the_iterate(posed):
    before = signal.getsignal(signal.SIGINT)
    outcome = run_ipopt(*posed, Settings(), monitor=interrupt_at(2))
    assert outcome.status is Status.INTERRUPTED
    assert outcome.word == "User_Requested_Stop"
    assert outcome.iterations == 2
    assert np.isfinite(outcome.variables).all()
    assert signal.getsignal(signal.SIGINT) is before
    # the request is spent: the next run is not stopped by it
    assert run_ipopt(*posed, Settings()).status is Status.SOLVED


def test_interrupt_from_outside(posed):
    # As a terminal does it: the signal comes at any time, from elsewhere.
    timer = threading.Timer(0.0, signal.raise_signal, (signal.SIGINT,))

    def monitor(iteration, _):
        if iteration == 1:
            timer.start()
            timer.join()

    outcome = run_ipopt(*posed, Settings(), monitor=monitor)
    assert outcome.status is Status.INTERRUPTED
    assert outcome.iterations <= 3


def test_second_interrupt_acts_as_usual(posed):
    with pytest.raises(KeyboardInterrupt):
        run_ipopt(*posed, Settings(), monitor=interrupt_at(1, times=2))


def test_block_gives_the_handler_back():
    before = signal.getsignal(signal.SIGINT)
    with heed_interrupts():
        assert not interrupted()
        signal.raise_signal(signal.SIGINT)
        assert interrupted()
        with pytest.raises(KeyboardInterrupt):
            signal.raise_signal(signal.SIGINT)
    assert signal.getsignal(signal.SIGINT) is before
    with heed_interrupts():
        assert not interrupted()


def test_other_threads_keep_their_hands_off_signals(posed):
    before, found = signal.getsignal(signal.SIGINT), []

    def work():
        with heed_interrupts():
            found.append(signal.getsignal(signal.SIGINT) is before)
            found.append(run_ipopt(*posed, Settings()).status)

    thread = threading.Thread(target=work)
    thread.start()
    thread.join()
    assert found == [True, Status.SOLVED]


def test_missing_linear_solver_is_a_failure(posed, monkeypatch):
    # A choice that IPOPT knows and cannot honour: its library is not there.
    usual = ipopt._options
    missing = {"linear_solver": "ma57", "hsllib": "no-such-library"}
    monkeypatch.setattr(ipopt, "_options", lambda *a, **k: usual(*a, **k) | missing)
    outcome = run_ipopt(*posed, Settings())
    assert outcome.status is Status.FAILED
    assert not outcome.status.success
    assert outcome.word == "Invalid_Option"
    assert math.isnan(outcome.objective)
    assert outcome.iterations == 0


def test_unknown_linear_solver_is_not_silent(posed, monkeypatch):
    usual = ipopt._options
    monkeypatch.setattr(
        ipopt, "_options", lambda *a, **k: usual(*a, **k) | {"linear_solver": "nonsense"}
    )
    with pytest.raises(RuntimeError, match="Invalid options"):
        run_ipopt(*posed, Settings())


@pytest.mark.parametrize("word", ["nonsense", "ma57"])
def test_environment_does_not_change_the_result(posed, solved, monkeypatch, word):
    monkeypatch.setenv("IPOPT_DEFAULT_LINEAR_SOLVER", word)
    outcome = run_ipopt(*posed, Settings())
    assert (outcome.word, outcome.iterations) == (solved.word, solved.iterations)
    assert np.array_equal(outcome.variables, solved.variables)


def test_stray_option_file_does_not_change_the_result(posed, solved, monkeypatch, tmp_path):
    (tmp_path / "ipopt.opt").write_text("max_iter 1\nmu_strategy adaptive\n", encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    outcome = run_ipopt(*posed, Settings())
    assert (outcome.word, outcome.iterations) == (solved.word, solved.iterations)
    assert np.array_equal(outcome.variables, solved.variables)


def test_stray_option_file_would_matter(posed, monkeypatch, tmp_path):
    # The test above can fail: without the option that names no file, IPOPT reads it.
    (tmp_path / "ipopt.opt").write_text("max_iter 1\n", encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    usual = ipopt._options

    def careless(*a, **k):
        return {
            name: value
            for name, value in usual(*a, **k).items()
            if name not in {"option_file_name", "max_iter"}
        }

    monkeypatch.setattr(ipopt, "_options", careless)
    assert run_ipopt(*posed, Settings()).word == "Maximum_Iterations_Exceeded"


def test_quiet_run_prints_nothing(posed, capfd):
    run_ipopt(*posed, Settings(iterations=3))
    assert capfd.readouterr() == ("", "")
    run_ipopt(*posed, Settings(iterations=3, verbose=True))
    assert "Number of Iterations" in capfd.readouterr().out
