# SPDX-License-Identifier: BSD-3-Clause
"""Order of the collocation, on a damped pendulum with the mass at rest outside."""

from __future__ import annotations

import math
from itertools import pairwise

import casadi
import numpy as np
import pytest
from scipy.integrate import solve_ivp

from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.transcription.arcs import Arc
from rotorpump.transcription.form import ANGLE, TIME, AxisForm, Form
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.mesh import HIGH, Mesh
from rotorpump.transcription.path import FORCE_LIMITED
from rotorpump.transcription.problem import Problem, Start, Term
from rotorpump.transcription.program import Program

RIG = Rig(
    wheel=Wheel(inertia=0.25),
    mass=1.2,
    radial=Slide(stroke=(0.2, 0.4), speed=0.8, force=100.0),
    friction=AxleFriction(viscous=0.05, coulomb=0.02, quadratic=0.004),
)
INERTIA = 0.25 + 1.2 * 0.4**2
ANGLE_START, SPEED_START = 0.0, 9.0
DURATION, LAST_ANGLE = 1.1, 6.0


def rates(_, state):
    """Damped pendulum, written out once more: φ̇ = H/I, Ḣ = -m g ρ sin φ - c - b ω - k ω²."""
    angle, momentum = state
    speed = momentum / INERTIA
    friction = 0.02 + 0.05 * speed + 0.004 * speed**2
    return [speed, -1.2 * 9.80665 * 0.4 * math.sin(angle) - friction]


def exact_motion(until=None):
    start = [ANGLE_START, INERTIA * SPEED_START]
    return solve_ivp(
        rates,
        (0.0, DURATION if until is None else 2.0),
        start,
        method="DOP853",
        rtol=1e-13,
        atol=1e-13,
        events=until,
        dense_output=True,
    )


def held_program(form: Form, intervals: int) -> Program:
    """The mass rests outside throughout; time (or angle) and state at the start are given."""
    timed = form.independent == TIME
    chain = (Arc(1, "free") if timed else Arc(1, "angle", LAST_ANGLE),)
    start = Start(ANGLE_START, INERTIA * SPEED_START, 0.4)
    horizon = DURATION if timed else None
    problem = Problem(RIG, form, chain, (Term("time", 1.0),), start, horizon=horizon)
    mesh = Mesh.uniform(1, intervals, 1, flexible=False)
    marks = np.full((1, intervals), HIGH)
    return Program(problem, mesh.with_pattern(marks, marks, flexible=False))


def solve_rows(program: Program) -> np.ndarray:
    """Solve the rows of the wheel for its states by Newton's method, the mesh being given."""
    form, layout = program.problem.form, program.layout
    motion = exact_motion()
    time = np.linspace(0.0, DURATION, 400)
    angle, momentum = motion.sol(time)
    still = np.zeros_like(time)
    states = np.vstack([angle, momentum, still + 0.4, still, still, still])
    guess = Guess.from_states(RIG, time, states)
    timed = form.independent == TIME
    z = program.start_from(guess, [DURATION if timed else LAST_ANGLE])
    variables, rows = program.variable_bounds, program.row_bounds
    free = np.flatnonzero(variables.lower < variables.upper)
    free = np.setdiff1d(free, layout.node[:, 0 if timed else 1])
    equal = np.flatnonzero(rows.lower == rows.upper)
    equal = equal[equal < program.mesh.intervals * sum(form.rows.values())]
    assert free.size == equal.size
    for _ in range(12):
        values, jacobian = program.functions.derivatives["jac_g"](z, program.parameters)
        slopes = casadi.DM(jacobian)[equal.tolist(), free.tolist()]
        step = -np.array(casadi.solve(slopes, values[equal.tolist()])).ravel()
        z[free] += step
        if np.abs(step).max() < 1e-13 * np.abs(z).max():
            return z
    raise AssertionError(f"Newton's method has not converged: {np.abs(step).max()}")


def end_error(independent: str, degree: int, intervals: int) -> float:
    axis = AxisForm("radial", FORCE_LIMITED)
    program = held_program(Form(independent, (axis,), degree), intervals)
    z = solve_rows(program)
    last, scales = program.layout.node[-1], program.scales
    momentum = z[last[2]] * scales.momentum
    if independent == TIME:
        angle, exact = exact_motion().y[:, -1]
        return math.hypot(z[last[1]] - angle, (momentum - exact) / INERTIA)

    def arrives(_, state):
        return state[0] - LAST_ANGLE

    arrives.terminal = True
    motion = exact_motion(arrives)
    time, exact = motion.t[-1], motion.y[1, -1]
    return math.hypot(z[last[0]] * scales.time - time, (momentum - exact) / INERTIA)


@pytest.mark.parametrize("independent", [TIME, ANGLE])
@pytest.mark.parametrize(
    ("degree", "ladder"), [(1, (16, 32, 64)), (2, (8, 16, 32)), (3, (6, 12, 24))]
)
def test_end_state_converges_at_the_stated_order(independent, degree, ladder):
    errors = [end_error(independent, degree, count) for count in ladder]
    slope = np.polyfit(np.log(ladder), np.log(errors), 1)[0]
    assert -slope == pytest.approx(2 * degree - 1, abs=0.5)
    assert all(fine < coarse for coarse, fine in pairwise(errors))
