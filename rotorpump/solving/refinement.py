# SPDX-License-Identifier: BSD-3-Clause
"""Mesh refinement: where a solution is not accurate enough, its intervals are divided."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from rotorpump.solution.status import Status
from rotorpump.solving.carrying import carry_multipliers
from rotorpump.solving.ipopt import Monitor, Settings, run_ipopt
from rotorpump.solving.routes import Candidate, Wanted, candidate_of, with_pattern_of
from rotorpump.transcription.division import Division, divide_variables
from rotorpump.transcription.mesh import FREE
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import (
    Record,
    SlidesWithin,
    drive_forces,
    node_marks,
    rubbing_forces,
    seats,
)

Array = NDArray[np.float64]

GROWTH = 5.0
"""Factor by which an error of the slide's speed may grow in the rest of an arc, e to the π/2."""

BARRIER = 1e-4
"""First barrier parameter on a finer mesh."""

MOST_ITERATIONS = 250
"""Iterations of a solve on a finer mesh."""

SAFETY = 2.0
"""Factor on the errors, so that one round is enough as a rule."""

MOST_PIECES = 5
"""Pieces that an interval is divided into at most at once."""

ROUNDS = 3
"""Refinements at most."""


def interval_errors(program: Program, z: Array) -> Array:
    """Estimate the error of each interval, relative, shape (intervals,).

    The equations are integrated over each interval. The error is the larger of two: how far angle
    and momentum at its end are from that, and how much speed of a slide the recorded drive force
    would miss over it.
    """
    scales, layout = program.scales, program.layout
    within, record = SlidesWithin.of(program, z), Record.of(program, z)
    angle, momentum = record.angle[:, :1], record.momentum[:, :1]
    axes = program.problem.form.axes
    missed = [np.zeros(program.mesh.intervals) for _ in axes]
    recorded = _needed_forces(program, within, *record)
    given = [drive_forces(program, z, k, force) for k, force in enumerate(recorded)]
    for k in range(record.elapsed.shape[1] - 1):
        begin, end = record.elapsed[:, k : k + 1], record.elapsed[:, k + 1 : k + 2]
        angle, momentum = _advance(within, begin, end - begin, angle, momentum)
        needed = _needed_forces(program, within, end, angle, momentum)
        for number, force in enumerate(needed):
            off = np.abs(force[:, 0] - given[number][:, k + 1])
            missed[number] = np.maximum(missed[number], off)
    largest = float(np.abs(z[layout.nodes("momentum")]).max()) * scales.momentum
    error = np.maximum(
        np.abs(angle[:, 0] - record.angle[:, -1]),
        np.abs(momentum[:, 0] - record.momentum[:, -1]) / largest,
    )
    for k, axis in enumerate(axes):
        if axis.forceful:
            impulse = GROWTH * missed[k] * record.elapsed[:, -1]
            lost = impulse / program.problem.rig.mass / scales.slide(axis.name).speed
            error = np.maximum(error, np.where(seats(program, z, k) == FREE, lost, 0.0))
    return np.asarray(error)


def _advance(
    within: SlidesWithin, now: Array, step: Array, angle: Array, momentum: Array
) -> tuple[Array, Array]:
    """Make a step of the classical Runge-Kutta method in all intervals at once."""

    def rates(elapsed: Array, angle: Array, momentum: Array) -> tuple[Array, Array]:
        return within.motion(elapsed, angle, momentum)[:2]

    first = rates(now, angle, momentum)
    second = rates(now + step / 2, angle + step / 2 * first[0], momentum + step / 2 * first[1])
    third = rates(now + step / 2, angle + step / 2 * second[0], momentum + step / 2 * second[1])
    fourth = rates(now + step, angle + step * third[0], momentum + step * third[1])
    return (
        angle + step / 6 * (first[0] + 2 * second[0] + 2 * third[0] + fourth[0]),
        momentum + step / 6 * (first[1] + 2 * second[1] + 2 * third[1] + fourth[1]),
    )


def _needed_forces(
    program: Program, within: SlidesWithin, elapsed: Array, angle: Array, momentum: Array
) -> list[Array]:
    """Force that each drive has to exert on a free mass at given states [N]."""
    motion = within.motion(elapsed, angle, momentum)[2]
    pair = {"radial": motion.radial_contact, "tangential": motion.tangential_contact}
    return [
        np.broadcast_to(pair[axis.name], angle.shape) + rubbing_forces(program, k)
        for k, axis in enumerate(program.problem.form.axes)
    ]


def refine(
    wanted: Wanted,
    candidate: Candidate,
    accuracy: float,
    monitor: Monitor | None,
    *,
    everywhere: bool = False,
) -> tuple[Candidate, int]:
    """Divide inaccurate intervals and solve again, until the accuracy holds.

    With ``everywhere``, all intervals are divided at first, accurate or not.

    Returns
    -------
    candidate : Candidate
        The refined local optimum, or the last one that solved.
    rounds : int
        Refinements made.
    """
    for rounds in range(ROUNDS):
        errors = interval_errors(candidate.program, candidate.outcome.variables)
        halved = everywhere and rounds == 0
        if errors.max() <= accuracy and not halved:
            return candidate, rounds
        # Both estimates shrink with about the third power of the length.
        pieces = np.ceil(np.cbrt(SAFETY * errors / accuracy)).astype(np.intp)
        # Switches move a little when the mesh changes: their neighbours are divided as well.
        pieces[1:] = np.maximum(pieces[1:], np.minimum(pieces[:-1], 2))
        pieces[:-1] = np.maximum(pieces[:-1], np.minimum(pieces[1:], 2))
        pieces = np.clip(pieces, 2 if halved else 1, MOST_PIECES)
        finer = _solve_on_finer(wanted, candidate, pieces, monitor)
        if finer.outcome.status is Status.INTERRUPTED:
            return finer, rounds
        if not finer.solved:
            return candidate, rounds
        candidate = finer
    return candidate, ROUNDS


def _solve_on_finer(
    wanted: Wanted, candidate: Candidate, pieces: NDArray[np.intp], monitor: Monitor | None
) -> Candidate:
    program, variables = candidate.program, candidate.outcome.variables
    division = Division.of(pieces)
    mesh = program.mesh.settled(node_marks(program, variables))
    if program.problem.form.sums:
        # a mass that has come to float in front of its stop is pressed onto it from now on
        mesh = with_pattern_of(program, variables, mesh)
    finer = replace(program, mesh=mesh.split(pieces))
    outcome = run_ipopt(
        finer,
        divide_variables(program, variables, finer, division),
        Settings(barrier=BARRIER, iterations=MOST_ITERATIONS),
        multipliers=carry_multipliers(program, candidate.outcome, finer, division),
        monitor=monitor,
    )
    return candidate_of(wanted, finer, outcome, candidate.iterations + outcome.iterations)
