# SPDX-License-Identifier: BSD-3-Clause
"""Ways from a starting motion to a local optimum.

Where the end stops may bear load, an optimum is a pattern of resting intervals and, given the
pattern, a smooth program. The direct route takes the pattern from the starting motion; the
relaxed route first lets a relaxed complementarity find it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from rotorpump.rig.rig import Rig
from rotorpump.solution.status import Status
from rotorpump.solution.trajectory import Trajectory
from rotorpump.solving.assignment import assign, can_rest, reached_value
from rotorpump.solving.ipopt import Monitor, Outcome, Settings, run_ipopt
from rotorpump.solving.seeds import Seed
from rotorpump.tasks import Task
from rotorpump.transcription.mesh import FREE, INNER, OUTER, Mesh
from rotorpump.transcription.problem import Problem
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import node_marks, recover_trajectory

Array = NDArray[np.float64]

PER_ARC = 6
PER_HALF_TURN = 16
"""Intervals of the first mesh, in each arc of a motion in time and of a steady rotation."""

RELAXATION = 1e-2
"""First relaxation of the end stops, as a share of force limit times stroke."""

SEAT = 2e-3
CREEP = 2e-2
"""Gap (in strokes) and speed (in typical speeds) below which the mass counts as resting."""

RELAXED_ITERATIONS = 150
MOST_ITERATIONS = 300
"""Iterations of one solve, relaxed or not; a start that takes more is rarely worth it."""

PATTERNS = 2
"""Corrections of the pattern of resting intervals at most."""


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


def take_direct(rig: Rig, task: Task, seed: Seed, monitor: Monitor | None) -> Candidate:
    """Solve with the resting intervals of the starting motion."""
    return solve_posed(task, assign(rig, task, seed), seed, monitor)


def solve_posed(task: Task, problem: Problem, seed: Seed, monitor: Monitor | None) -> Candidate:
    """Solve a problem from a seed, with the resting intervals of the seed."""
    rig = problem.rig
    mesh = _first_mesh(problem, flexible=True)
    program = Program(problem, mesh)
    start = program.start_from(seed.guess, seed.ends)
    if can_rest(rig):
        program = Program(problem, mesh.with_rests(find_rests(program, start), flexible=True))
        start = program.variable_bounds.clip(start)
    return _settle(task, program, start, Settings(iterations=MOST_ITERATIONS), monitor, 0)


def relax(
    rig: Rig, task: Task, seed: Seed, monitor: Monitor | None, *, finer: float = 1.0
) -> Candidate:
    """Solve with relaxed end stops, on equal intervals: quick, and a little too rosy."""
    problem = assign(rig, task, seed, relaxed=True)
    program = Program(problem, _first_mesh(problem, flexible=False, finer=finer), RELAXATION)
    start = program.start_from(seed.guess, seed.ends)
    settings = Settings(tolerance=1e-4, iterations=RELAXED_ITERATIONS)
    outcome = run_ipopt(program, start, settings, monitor=monitor)
    return candidate_of(task, program, outcome, outcome.iterations)


def settle_relaxed(task: Task, relaxed: Candidate, monitor: Monitor | None) -> Candidate:
    """Take the resting intervals from a relaxed solution, and solve with these."""
    program, variables = relaxed.program, relaxed.outcome.variables
    problem = program.problem
    rests = find_rests(program, variables)
    mesh = program.mesh.settled(node_marks(program, variables)).with_rests(rests, flexible=True)
    strict = Program(replace(problem, form=replace(problem.form, relaxed=False)), mesh)
    start = strict.variable_bounds.clip(variables)
    settings = Settings(barrier=1e-2, iterations=MOST_ITERATIONS)
    return _settle(task, strict, start, settings, monitor, relaxed.iterations)


def _first_mesh(problem: Problem, *, flexible: bool, finer: float = 1.0) -> Mesh:
    intervals = round(finer * (PER_HALF_TURN if problem.start is None else PER_ARC))
    return Mesh.uniform(len(problem.chain), intervals, flexible=flexible)


def _settle(
    task: Task,
    program: Program,
    start: Array,
    settings: Settings,
    monitor: Monitor | None,
    spent: int,
) -> Candidate:
    """Solve, and correct the pattern of resting intervals while that helps."""
    outcome = run_ipopt(program, start, settings, monitor=monitor)
    best = candidate_of(task, program, outcome, spent + outcome.iterations)
    if not can_rest(program.problem.rig):
        return best
    for _ in range(PATTERNS):
        if not best.solved:
            return best
        variables = best.outcome.variables
        rests = find_rests(best.program, variables)
        if np.array_equal(rests, best.program.mesh.rests):
            return best
        mesh = best.program.mesh.with_rests(rests, flexible=True)
        again = Program(program.problem, mesh)
        start = again.variable_bounds.clip(variables)
        outcome = run_ipopt(again, start, Settings(barrier=1e-2), monitor=monitor)
        spent = best.iterations + outcome.iterations
        fresh = candidate_of(task, again, outcome, spent)
        if outcome.status is Status.INTERRUPTED:
            return fresh
        if not fresh.solved or outcome.objective >= best.outcome.objective:
            return replace(best, iterations=spent)
        best = fresh
    return best


def candidate_of(task: Task, program: Program, outcome: Outcome, iterations: int) -> Candidate:
    """Recover the motion of an outcome."""
    trajectory = recover_trajectory(program, outcome.variables)
    return Candidate(program, outcome, trajectory, reached_value(task, trajectory), iterations)


def find_rests(program: Program, z: Array) -> NDArray[np.intp]:
    """Intervals throughout which the mass rests on an end stop, shape (intervals,)."""
    node = program.layout.node
    position, speed = z[node[:, 3]], np.abs(z[node[:, 4]])
    still = (speed[:-1] < CREEP) & (speed[1:] < CREEP)
    outside = still & (position[:-1] > 1.0 - SEAT) & (position[1:] > 1.0 - SEAT)
    inside = still & (position[:-1] < SEAT) & (position[1:] < SEAT)
    rests = np.where(outside, OUTER, np.where(inside, INNER, FREE))
    if program.problem.start is not None and position[0] not in (0.0, 1.0):
        rests[0] = FREE
    return rests.astype(np.intp)
