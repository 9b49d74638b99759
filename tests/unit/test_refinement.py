# SPDX-License-Identifier: BSD-3-Clause
"""Error estimates of a mesh: small where the motion is exact, local, and falling with the mesh."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from posed_programs import rig_on
from scipy.integrate import solve_ivp

from rotorpump.solving.ipopt import Settings, run_ipopt
from rotorpump.solving.refinement import interval_errors
from rotorpump.transcription.arcs import Arc
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.interval import ANGLE, TIME, Form
from rotorpump.transcription.mesh import FREE, OUTER, Mesh
from rotorpump.transcription.path import FORCE_LIMITED
from rotorpump.transcription.problem import Problem, Start, Term
from rotorpump.transcription.program import Program

RIG = rig_on()
INERTIA = RIG.inertia(0.4)
ANGLE_START, SPEED_START, DURATION, LAST_ANGLE = 0.3, 8.0, 0.9, 5.0
LADDER = (3, 6, 12)


def held_motion():
    """Guess with the mass at the outer end: Ḣ = -m g ρ sin φ - c - b ω - k ω²."""
    friction = RIG.friction

    def rates(_, state):
        speed = state[1] / INERTIA
        drag = friction.coulomb + friction.viscous * speed + friction.quadratic * speed**2
        return [speed, -RIG.mass * RIG.gravity * 0.4 * math.sin(state[0]) - drag]

    start = [ANGLE_START, INERTIA * SPEED_START]
    # so fine that the guess's linear interpolation does not show
    time = np.linspace(0.0, DURATION, 40_001)
    run = solve_ivp(rates, (0.0, DURATION), start, t_eval=time, rtol=1e-11, atol=1e-11)
    still = np.zeros_like(time)
    return Guess(time, run.y[0], run.y[1], still + 0.4, still)


def held_program(intervals, rest, independent=TIME):
    timed = independent == TIME
    chain = (Arc(1, "free") if timed else Arc(1, "angle", LAST_ANGLE),)
    problem = Problem(
        RIG,
        Form(independent, FORCE_LIMITED),
        chain,
        (Term("time", 1.0),),
        Start(ANGLE_START, INERTIA * SPEED_START, 0.4),
        horizon=DURATION if timed else None,
    )
    mesh = Mesh.uniform(1, intervals, flexible=False)
    return Program(problem, mesh.with_rests(np.full(intervals, rest), flexible=False))


def exact_variables(program):
    """The true motion at every node, whatever the collocation would make of it."""
    guess = held_motion()
    timed = program.problem.form.independent == TIME
    return program.start_from(guess, [DURATION if timed else LAST_ANGLE])


def order(errors):
    return -np.polyfit(np.log(LADDER), np.log(errors), 1)[0]


@pytest.mark.parametrize("independent", [TIME, ANGLE])
def test_errors_of_collocated_motions_fall_faster_than_the_cube_of_the_length(independent):
    errors = []
    for count in LADDER:
        program = held_program(count, OUTER, independent)
        # with mesh and slide fixed, the solver has only the equations of the wheel to fulfil
        outcome = run_ipopt(program, exact_variables(program), Settings(tolerance=1e-10))
        assert outcome.status.success
        found = interval_errors(program, outcome.variables)
        assert found.shape == (count,)
        errors.append(found.max())
    assert 1e-9 < errors[-1] < errors[0] < 0.1
    assert order(errors) > 2.7


def test_the_force_that_is_missed_falls_with_the_cube_of_the_length():
    errors = []
    for count in LADDER:
        program = held_program(count, FREE)
        z = exact_variables(program)
        errors.append(interval_errors(program, z).max())
        # the same states, the mass resting: no force has to be interpolated
        resting = replace(program, mesh=held_program(count, OUTER).mesh)
        assert interval_errors(resting, z).max() < 0.1 * errors[-1]
    assert order(errors) > 2.7


def test_halving_every_interval_divides_the_errors_by_about_eight_or_more():
    program = held_program(4, FREE)
    pieces = np.full(4, 2)
    halved = replace(program, mesh=program.mesh.split(pieces))
    coarse = interval_errors(program, exact_variables(program))
    fine = interval_errors(halved, exact_variables(halved))
    assert fine.max() < coarse.max() / 6.0


@pytest.mark.parametrize("column", [1, 2], ids=["angle", "momentum"])
def test_a_state_that_is_off_shows_in_the_intervals_on_both_sides(column):
    program = held_program(6, OUTER)
    z = exact_variables(program)
    before = interval_errors(program, z)
    z[program.layout.node[3, column]] += 0.01
    changed = np.flatnonzero(np.abs(interval_errors(program, z) - before) > 1e-4)
    assert changed.tolist() == [2, 3]
