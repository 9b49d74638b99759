# SPDX-License-Identifier: BSD-3-Clause
"""Error estimates of a mesh: small where the motion is exact, local, and falling with the mesh."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from posed_programs import radial_form, rig_on
from scipy.integrate import solve_ivp

from rotorpump.solving.ipopt import Settings, run_ipopt
from rotorpump.solving.refinement import interval_errors
from rotorpump.transcription.arcs import Arc
from rotorpump.transcription.form import ANGLE, TIME
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.mesh import FREE, HIGH, Mesh
from rotorpump.transcription.path import FORCE_LIMITED
from rotorpump.transcription.problem import Problem, Start, Term
from rotorpump.transcription.program import Program

RIG = rig_on()
OUTSIDE, BETWEEN = 0.4, 0.3
"""Places at which the mass is held: on its stop, and between the two."""

ANGLE_START, SPEED_START, DURATION, LAST_ANGLE = 0.3, 8.0, 0.9, 5.0
LADDER = (3, 6, 12)


def held_motion(place):
    """Guess with the mass held at a place: Ḣ = -m g ρ sin φ - c - b ω - k ω²."""
    friction, inertia = RIG.friction, RIG.inertia(place)

    def rates(_, state):
        speed = state[1] / inertia
        drag = friction.coulomb + friction.viscous * speed + friction.quadratic * speed**2
        return [speed, -RIG.mass * RIG.gravity * place * math.sin(state[0]) - drag]

    start = [ANGLE_START, inertia * SPEED_START]
    # so fine that the guess's linear interpolation does not show
    time = np.linspace(0.0, DURATION, 40_001)
    run = solve_ivp(rates, (0.0, DURATION), start, t_eval=time, rtol=1e-11, atol=1e-11)
    still = np.zeros_like(time)
    return Guess.from_states(RIG, time, np.vstack([run.y, still + place, still, still, still]))


def held_program(intervals, rest, independent=TIME, place=OUTSIDE):
    timed = independent == TIME
    chain = (Arc(1, "free") if timed else Arc(1, "angle", LAST_ANGLE),)
    problem = Problem(
        RIG,
        radial_form(independent, FORCE_LIMITED),
        chain,
        (Term("time", 1.0),),
        Start(ANGLE_START, RIG.inertia(place) * SPEED_START, place),
        horizon=DURATION if timed else None,
    )
    mesh = Mesh.uniform(1, intervals, 1, flexible=False)
    marks = np.full((1, intervals), rest)
    return Program(problem, mesh.with_pattern(marks, marks, flexible=False))


def exact_variables(program):
    """The true motion at every node, whatever the collocation would make of it."""
    guess = held_motion(program.problem.start.radial)
    timed = program.problem.form.independent == TIME
    return program.start_from(guess, [DURATION if timed else LAST_ANGLE])


def order(errors):
    return -np.polyfit(np.log(LADDER), np.log(errors), 1)[0]


@pytest.mark.parametrize("independent", [TIME, ANGLE])
def test_errors_of_collocated_motions_fall_faster_than_the_cube_of_the_length(independent):
    errors = []
    for count in LADDER:
        program = held_program(count, HIGH, independent)
        # with mesh and slide fixed, the solver has only the equations of the wheel to fulfil
        outcome = run_ipopt(program, exact_variables(program), Settings(tolerance=1e-10))
        assert outcome.status.success
        found = interval_errors(program, outcome.variables)
        assert found.shape == (count,)
        errors.append(found.max())
    assert 1e-9 < errors[-1] < errors[0] < 0.1
    assert order(errors) > 2.7


def test_the_force_that_is_missed_falls_faster_than_the_cube_of_the_length():
    errors = []
    for count in LADDER:
        program = held_program(count, FREE, place=BETWEEN)
        errors.append(interval_errors(program, exact_variables(program)).max())
        # on a stop, which bears what it has to, no force is missed
        for rest in (HIGH, FREE):
            seated = held_program(count, rest)
            assert interval_errors(seated, exact_variables(seated)).max() < 0.01 * errors[-1]
    assert order(errors) > 2.7


def test_halving_every_interval_divides_the_errors_by_about_eight_or_more():
    program = held_program(4, FREE, place=BETWEEN)
    pieces = np.full(4, 2)
    halved = replace(program, mesh=program.mesh.split(pieces))
    coarse = interval_errors(program, exact_variables(program))
    fine = interval_errors(halved, exact_variables(halved))
    assert fine.max() < coarse.max() / 6.0


@pytest.mark.parametrize("column", [1, 2], ids=["angle", "momentum"])
def test_a_state_that_is_off_shows_in_the_intervals_on_both_sides(column):
    program = held_program(6, HIGH)
    z = exact_variables(program)
    before = interval_errors(program, z)
    z[program.layout.node[3, column]] += 0.01
    changed = np.flatnonzero(np.abs(interval_errors(program, z) - before) > 1e-4)
    assert changed.tolist() == [2, 3]
