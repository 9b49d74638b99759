# SPDX-License-Identifier: BSD-3-Clause
"""Mesh refinement: where a solution is not accurate enough, its intervals are divided."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_force, momentum_rate, wheel_speed
from rotorpump.solution.status import Status
from rotorpump.solving.ipopt import Monitor, Settings, run_ipopt
from rotorpump.solving.routes import Candidate, candidate_of
from rotorpump.tasks import Task
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.mesh import FREE
from rotorpump.transcription.path import FORCE_LIMITED
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import motion_within, node_marks

Array = NDArray[np.float64]

SUBSTEPS = 8
"""Steps of the classical Runge-Kutta method that an interval is integrated with."""

GROWTH = 5.0
"""Factor by which an error of the slide's speed may grow in the rest of an arc, e to the π/2."""

MOST_ITERATIONS = 250
"""Iterations of a solve on a finer mesh."""

MOST_PIECES = 4
"""Pieces that an interval is divided into at most at once."""

ROUNDS = 3
"""Refinements at most."""


def interval_errors(program: Program, z: Array) -> Array:
    """Estimate the error of each interval, relative, shape (intervals,).

    The larger of two: how far angle and momentum at its end are from an integration of the
    equations over it, and how much speed the interpolated drive force would miss over it.
    """
    rig, scales = program.problem.rig, program.scales
    constants = Constants.of(rig)
    layout = program.layout
    duration = np.diff(z[layout.node[:, 0]])[:, None] * scales.time
    direction = program.directions[:, None]
    path = motion_within(program, z)
    angle = z[layout.node[:-1, 1]][:, None]
    momentum = z[layout.node[:-1, 2]][:, None] * scales.momentum
    step = duration / SUBSTEPS

    def rates(elapsed: Array, angle: Array, momentum: Array) -> tuple[Array, Array]:
        radial = path.position(elapsed)
        speed = wheel_speed(constants, momentum, radial)
        return speed, momentum_rate(np, constants, angle, speed, radial, direction)

    forces = []
    for k in range(SUBSTEPS):
        now = k * step
        first = rates(now, angle, momentum)
        second = rates(now + step / 2, angle + step / 2 * first[0], momentum + step / 2 * first[1])
        third = rates(now + step / 2, angle + step / 2 * second[0], momentum + step / 2 * second[1])
        fourth = rates(now + step, angle + step * third[0], momentum + step * third[1])
        angle = angle + step / 6 * (first[0] + 2 * second[0] + 2 * third[0] + fourth[0])
        momentum = momentum + step / 6 * (first[1] + 2 * second[1] + 2 * third[1] + fourth[1])
        if program.problem.form.rung == FORCE_LIMITED:
            later = now + step
            radial = path.position(later)
            speed = wheel_speed(constants, momentum, radial)
            acceleration = path.acceleration(later)
            forces.append(contact_force(np, constants, angle, speed, radial, acceleration))
    largest = float(np.abs(z[layout.node[:, 2]]).max())
    error = np.maximum(
        np.abs(angle[:, 0] - z[layout.node[1:, 1]]),
        np.abs(momentum[:, 0] / scales.momentum - z[layout.node[1:, 2]]) / largest,
    )
    if forces:
        missed = _missed_force(np.hstack(forces)) * duration[:, 0] / rig.mass / scales.speed
        error = np.maximum(error, np.where(program.mesh.rests == FREE, GROWTH * missed, 0.0))
    return np.asarray(error)


def _missed_force(force: Array) -> Array:
    """Largest distance of the force from a parabola through three of its samples [N]."""
    samples = np.arange(1, SUBSTEPS + 1)
    chosen = [1, SUBSTEPS // 2, SUBSTEPS - 1]
    fit = np.polynomial.polynomial.polyvander(samples[chosen], 2)
    everywhere = np.polynomial.polynomial.polyvander(samples, 2)
    parabola = force[:, chosen] @ np.linalg.solve(fit.T, everywhere.T)
    return np.asarray(np.abs(parabola - force).max(axis=1))


def refine(
    task: Task, candidate: Candidate, accuracy: float, monitor: Monitor | None
) -> tuple[Candidate, int]:
    """Divide inaccurate intervals and solve again, until the accuracy holds.

    Returns
    -------
    candidate : Candidate
        The refined local optimum, or the last one that solved.
    rounds : int
        Refinements made.
    """
    for rounds in range(ROUNDS):
        errors = interval_errors(candidate.program, candidate.outcome.variables)
        if errors.max() <= accuracy:
            return candidate, rounds
        # Both estimates shrink with about the third power of the length.
        wanted = np.ceil(np.cbrt(errors / accuracy)).astype(np.intp)
        # Switches move a little when the mesh changes: their neighbours are divided as well.
        wanted[1:] = np.maximum(wanted[1:], np.minimum(wanted[:-1], 2))
        wanted[:-1] = np.maximum(wanted[:-1], np.minimum(wanted[1:], 2))
        finer = _solve_on_finer(task, candidate, np.clip(wanted, 1, MOST_PIECES), monitor)
        if finer.outcome.status is Status.INTERRUPTED:
            return finer, rounds
        if not finer.solved:
            return candidate, rounds
        candidate = finer
    return candidate, ROUNDS


def _solve_on_finer(
    task: Task, candidate: Candidate, pieces: NDArray[np.intp], monitor: Monitor | None
) -> Candidate:
    program = candidate.program
    marks = node_marks(program, candidate.outcome.variables)
    mesh = program.mesh.settled(marks).split(pieces)
    finer = replace(program, mesh=mesh)
    ends = [float(marks[k]) for k in program.mesh.edges[1:]]
    start = finer.start_from(Guess.from_trajectory(candidate.trajectory), ends)
    outcome = run_ipopt(
        finer, start, Settings(barrier=1e-3, iterations=MOST_ITERATIONS), monitor=monitor
    )
    return candidate_of(task, finer, outcome, candidate.iterations + outcome.iterations)
