# SPDX-License-Identifier: BSD-3-Clause
"""Ways from a starting motion to a local optimum.

Where the end stops may bear load, an optimum is a pattern of resting intervals and, given the
pattern, a smooth program. The direct route takes the pattern from the starting motion; the
relaxed route first lets a relaxed complementarity find it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from rotorpump.measures import Measure
from rotorpump.rig.rig import Rig
from rotorpump.solution.reached import reached_value
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.assignment import assign, can_rest
from rotorpump.solving.ipopt import Monitor, Outcome, Settings, run_ipopt
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Task
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.mesh import FREE, HIGH, LOW, Marks, Mesh
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import node_marks, recover_trajectory

Array = NDArray[np.float64]

PER_ARC = 6
PER_HALF_TURN = 16
"""Intervals of the first mesh, in each arc of a motion in time and of a steady rotation."""

RATED = 2.5
"""Factor on these where forces change at a limited rate: a move then has twice as many phases."""

RELAXATION = 1e-2
TIGHTER = (1e-3, 1e-4)
"""First relaxation of the end stops, as a share of force limit times stroke, and the next ones."""

SEAT = 2e-3
CREEP = 2e-2
"""Gap (in strokes) and speed (in typical speeds) below which the mass counts as resting."""

RELAXED_ITERATIONS = 150
MOST_ITERATIONS = 300
"""Iterations of one solve, relaxed or not; a start that takes more is rarely worth it."""

PATTERNS = 2
"""Corrections of the pattern of resting intervals at most."""


@dataclass(frozen=True)
class Wanted:
    """What is asked: the rig, the task, and the objective."""

    rig: Rig
    task: Task
    measure: Measure


@dataclass(frozen=True, eq=False)
class Candidate:
    """A local optimum, or the iterate at which its solve ended.

    Parameters
    ----------
    program : Program
        The program it solves.
    outcome : Outcome
        What the solver gave.
    trajectory : Trajectory
        The motion.
    value : float
        What the motion reaches, in the unit of the task's objective.
    iterations : int
        Iterations spent on the way.
    """

    program: Program
    outcome: Outcome
    trajectory: Trajectory
    value: float
    iterations: int

    @property
    def solved(self) -> bool:
        """Whether the solver says so."""
        return self.outcome.status.success


def take_direct(wanted: Wanted, seed: Seed, monitor: Monitor | None) -> Candidate:
    """Solve with the resting intervals of the starting motion."""
    problem = assign(wanted.rig, wanted.task, wanted.measure, seed)
    return solve_posed(wanted, problem, seed, monitor)


def solve_posed(wanted: Wanted, problem: Problem, seed: Seed, monitor: Monitor | None) -> Candidate:
    """Solve a problem from a seed, with the resting intervals of the seed."""
    mesh = _first_mesh(problem, flexible=True)
    program = Program(problem, mesh)
    start = program.start_from(seed.guess, seed.ends)
    if can_rest(problem.rig, problem) or any(axis.rubs for axis in problem.form.axes):
        program = Program(problem, with_pattern_of(program, start, mesh))
        start = program.variable_bounds.clip(start)
    return _settle(wanted, program, start, Settings(iterations=MOST_ITERATIONS), monitor, 0)


def relax(wanted: Wanted, seed: Seed, monitor: Monitor | None, *, finer: float = 1.0) -> Candidate:
    """Solve with relaxed end stops, on equal intervals: quick, and a little too rosy.

    Limits on the rates of the forces are left out.
    """
    rig = wanted.rig.with_slides(lambda slide: replace(slide, force_rate=math.inf))
    problem = assign(rig, wanted.task, wanted.measure, seed, relaxed=True)
    program = Program(problem, _first_mesh(problem, flexible=False, finer=finer), RELAXATION)
    start = program.start_from(seed.guess, seed.ends)
    settings = Settings(tolerance=1e-4, iterations=RELAXED_ITERATIONS)
    outcome = run_ipopt(program, start, settings, monitor=monitor)
    return candidate_of(wanted, program, outcome, outcome.iterations)


def settle_relaxed(
    wanted: Wanted, relaxed: Candidate, seed: Seed, monitor: Monitor | None
) -> Candidate:
    """Tighten a relaxed solution, take the resting intervals from it, and solve with these."""
    relaxed = _tighten(wanted, relaxed, monitor)
    if relaxed.outcome.status is Status.INTERRUPTED:
        return relaxed
    program, variables = relaxed.program, relaxed.outcome.variables
    posed = assign(wanted.rig, wanted.task, wanted.measure, seed)
    marks = node_marks(program, variables)
    ends = [float(marks[k]) for k in program.mesh.edges[1:]]
    guess = Guess.from_trajectory(relaxed.trajectory)
    if posed.form.rated:
        found = solve_posed(wanted, posed, Seed(guess, seed.chain, ends), monitor)
        return replace(found, iterations=relaxed.iterations + found.iterations)
    strict = Program(posed, with_pattern_of(program, variables, program.mesh.settled(marks)))
    if posed.form.sums:
        start = strict.start_from(guess, ends)
    else:
        start = strict.variable_bounds.clip(variables)
    settings = Settings(barrier=1e-2, iterations=MOST_ITERATIONS)
    return _settle(wanted, strict, start, settings, monitor, relaxed.iterations)


def _tighten(wanted: Wanted, relaxed: Candidate, monitor: Monitor | None) -> Candidate:
    """Relax the end stops less and less, as long as that solves.

    With one slide, the first relaxation shows the pattern well enough.
    """
    if len(relaxed.program.problem.form.axes) == 1:
        return relaxed
    settings = Settings(barrier=1e-2, tolerance=1e-4, iterations=RELAXED_ITERATIONS)
    for relaxation in TIGHTER:
        program = replace(relaxed.program, relaxation=relaxation)
        outcome = run_ipopt(program, relaxed.outcome.variables, settings, monitor=monitor)
        spent = relaxed.iterations + outcome.iterations
        if not outcome.status.success and outcome.status is not Status.INTERRUPTED:
            return replace(relaxed, iterations=spent)
        relaxed = candidate_of(wanted, program, outcome, spent)
        if outcome.status is Status.INTERRUPTED:
            break
    return relaxed


def _first_mesh(problem: Problem, *, flexible: bool, finer: float = 1.0) -> Mesh:
    finer *= RATED if problem.form.rated else 1.0
    intervals = round(finer * (PER_HALF_TURN if problem.start is None else PER_ARC))
    axes = len(problem.form.axes)
    return Mesh.uniform(len(problem.chain), intervals, axes, flexible=flexible)


def _settle(
    wanted: Wanted,
    program: Program,
    start: Array,
    settings: Settings,
    monitor: Monitor | None,
    spent: int,
) -> Candidate:
    """Solve, and correct the pattern of resting intervals while that helps."""
    outcome = run_ipopt(program, start, settings, monitor=monitor)
    best = candidate_of(wanted, program, outcome, spent + outcome.iterations)
    for _ in range(PATTERNS):
        if not best.solved:
            return best
        variables, mesh = best.outcome.variables, best.program.mesh
        fresh_mesh = with_pattern_of(best.program, variables, mesh)
        if _same_pattern(fresh_mesh, mesh):
            return best
        again = Program(program.problem, fresh_mesh)
        start = again.variable_bounds.clip(variables)
        outcome = run_ipopt(again, start, Settings(barrier=1e-2), monitor=monitor)
        spent = best.iterations + outcome.iterations
        fresh = candidate_of(wanted, again, outcome, spent)
        if outcome.status is Status.INTERRUPTED:
            return fresh
        if not fresh.solved:
            return replace(best, iterations=spent)
        # a mass that floats in front of its stop saves the force that presses it on
        floats = bool(program.problem.form.sums)
        if outcome.objective >= best.outcome.objective and not floats:
            return replace(best, iterations=spent)
        best = fresh
    return best


def candidate_of(wanted: Wanted, program: Program, outcome: Outcome, iterations: int) -> Candidate:
    """Recover the motion of an outcome."""
    trajectory = recover_trajectory(program, outcome.variables)
    value = math.nan
    if outcome.status.success or bool(np.all(np.diff(trajectory.time) >= 0.0)):
        # in what is left of a failed solve, time may run back
        value = reached_value(wanted.rig, wanted.task, wanted.measure, trajectory)
    return Candidate(program, outcome, trajectory, value, iterations)


def _same_pattern(one: Mesh, other: Mesh) -> bool:
    return np.array_equal(one.rests, other.rests) and np.array_equal(one.signs, other.signs)


def with_pattern_of(program: Program, z: Array, mesh: Mesh) -> Mesh:
    """Return ``mesh`` with the pattern of resting intervals and directions that variables show."""
    rests, signs = mesh.rests.copy(), mesh.signs.copy()
    for k, axis in enumerate(program.problem.form.axes):
        if axis.forceful and program.problem.rig.slide(axis.name).bearing:
            rests[k] = find_rests(program, z, k)
        if axis.rubs:
            signs[k] = _find_signs(program, z, k)
    return mesh.with_pattern(rests, signs, flexible=True)


def find_rests(program: Program, z: Array, axis: int) -> Marks:
    """Intervals throughout which the mass rests on an end stop of an axis, shape (intervals,)."""
    name = program.problem.form.axes[axis].name
    position = z[program.layout.nodes(name)]
    speed = np.abs(z[program.layout.nodes(f"{name}_speed")])
    still = (speed[:-1] < CREEP) & (speed[1:] < CREEP)
    outside = still & (position[:-1] > 1.0 - SEAT) & (position[1:] > 1.0 - SEAT)
    inside = still & (position[:-1] < SEAT) & (position[1:] < SEAT)
    rests = np.where(outside, HIGH, np.where(inside, LOW, FREE))
    if program.problem.start is not None and position[0] not in (0.0, 1.0):
        rests[0] = FREE
    return rests.astype(np.intp)


def _find_signs(program: Program, z: Array, axis: int) -> Marks:
    """Direction in which the mass moves along an axis in each interval, shape (intervals,).

    An interval in which it does not move takes the direction of the next one that does: the mass
    is about to set out there.
    """
    name = program.problem.form.axes[axis].name
    moved = np.diff(z[program.layout.nodes(name)])
    signs = np.where(np.abs(moved) > SEAT, np.sign(moved), 0.0)
    following = 1.0
    for k in range(signs.size - 1, -1, -1):
        following = signs[k] or following
        signs[k] = following
    return signs.astype(np.intp)
