# SPDX-License-Identifier: BSD-3-Clause
"""Assembled derivatives against automatic differentiation of the whole program."""

from __future__ import annotations

import casadi
import numpy as np
import pytest
from posed_programs import full_program, random_variables, swing_program, turn_program

from rotorpump.transcription.blocks import Block, Kernel, assemble
from rotorpump.transcription.form import ANGLE
from rotorpump.transcription.mesh import HIGH, LOW
from rotorpump.transcription.path import RATE_LIMITED
from rotorpump.transcription.problem import Goal
from rotorpump.transcription.program import Program

CLOSE = 1e-9

PROGRAMS = {
    **{f"swing, rung {rung}": lambda rung=rung: swing_program(rung) for rung in range(3)},
    "swing, relaxed": lambda: swing_program(relaxed=True, flexible=False),
    "swing, rests": lambda: swing_program(rests={0: HIGH, 3: LOW}),
    "swing, degree 1": lambda: swing_program(degree=1),
    "swing, energy": lambda: swing_program(goal=Goal("energy", 1.0)),
    "swing, speed": lambda: swing_program(1, goal=Goal("speed", 1.0), horizon=1.5),
    **{f"turn, rung {rung}": lambda rung=rung: turn_program(rung) for rung in range(3)},
    "turn, relaxed": lambda: turn_program(relaxed=True),
    "turn, one interval": lambda: turn_program(intervals=1),
    "full swing": full_program,
    "full swing, rated": lambda: full_program(RATE_LIMITED),
    "full swing, relaxed": lambda: full_program(relaxed=True),
    "full turn": lambda: full_program(independent=ANGLE),
    "full turn, rated": lambda: full_program(RATE_LIMITED, independent=ANGLE),
    "turn, not closed": lambda: turn_program(intervals=1, closed_momentum=False),
}


def differentiated(functions):
    """All derivatives by CasADi's own differentiation of objective and rows."""
    x, p, f, g = (functions.program[name] for name in "xpfg")
    lam_f, lam_g = casadi.MX.sym("lam_f"), casadi.MX.sym("lam_g", g.numel())
    lagrangian = lam_f * f + casadi.dot(lam_g, g)
    outputs = [f, g, casadi.gradient(f, x), casadi.jacobian(g, x)]
    outputs.append(casadi.triu(casadi.hessian(lagrangian, x)[0]))
    return casadi.Function("by_ad", [x, p, lam_f, lam_g], outputs)


def assembled(functions, x, p, lam_f, lam_g):
    derivatives = functions.derivatives
    value, gradient = derivatives["grad_f"](x, p)
    rows, jacobian = derivatives["jac_g"](x, p)
    return [value, rows, gradient, jacobian, derivatives["hess_lag"](x, p, lam_f, lam_g)]


def dense(matrix):
    return np.array(casadi.DM(matrix))


def compare(functions, parameters, points, rng):
    expected = differentiated(functions)
    for x in points:
        lam = rng.normal(), rng.normal(size=functions.program["g"].numel())
        ours = assembled(functions, x, parameters, *lam)
        pairs = zip(ours, expected(x, parameters, *lam), strict=True)
        for mine, theirs in ((dense(a), dense(b)) for a, b in pairs):
            assert np.isfinite(theirs).all()
            scale = max(1.0, float(np.abs(theirs).max()))
            np.testing.assert_allclose(mine, theirs, rtol=CLOSE, atol=CLOSE * scale)


@pytest.mark.parametrize("name", PROGRAMS)
def test_derivatives_are_those_of_the_program(name):
    program: Program = PROGRAMS[name]()
    rng = np.random.default_rng(20)
    points = [random_variables(program, rng) for _ in range(3)]
    compare(program.functions, program.parameters, points, rng)


@pytest.mark.parametrize("name", PROGRAMS)
def test_functions_fit_their_variables_parameters_and_bounds(name):
    program: Program = PROGRAMS[name]()
    symbols = program.functions.program
    assert symbols["x"].numel() == program.layout.variables == program.functions.variables
    assert symbols["p"].numel() == program.parameters.size
    assert symbols["g"].numel() == program.row_bounds.lower.size == program.row_bounds.upper.size
    assert program.variable_bounds.lower.size == program.variable_bounds.upper.size
    assert program.variable_bounds.lower.size == program.layout.variables


def small_kernel():
    z, q, p = casadi.SX.sym("z", 2), casadi.SX.sym("q", 1), casadi.SX.sym("p", 1)
    rows = casadi.vertcat(q * z[0] * z[1] ** 2, p * casadi.sin(z[0] + z[1]), 3.0 * z[0])
    return Kernel.build(z, q, p, rows)


def test_repeated_indices_are_summed():
    # One place twice in a copy, and the same pair of places in two copies.
    places = np.array([[0, 0], [0, 1], [1, 0], [2, 1]], dtype=np.intp)
    own = np.array([[0.5], [2.0], [-1.0], [4.0]])
    block = Block(small_kernel(), places, own)
    functions = assemble(3, 1, [block, block], [block])
    parameters = np.concatenate([[0.7], *([own.ravel()] * 3)])
    rng = np.random.default_rng(3)
    compare(functions, parameters, rng.normal(size=(3, 3)), rng)


def test_rows_and_parameters_stand_copy_by_copy():
    places = np.array([[0, 1], [1, 2]], dtype=np.intp)
    block = Block(small_kernel(), places, np.array([[2.0], [5.0]]))
    functions = assemble(3, 1, [block], [block])
    x, p = np.array([0.3, -0.4, 1.1]), np.array([0.7, 2.0, 5.0, 3.0, -1.0])

    def rows(own, first, second):
        return [own * first * second**2, 0.7 * np.sin(first + second), 3.0 * first]

    f, g = (functions.program[name] for name in "fg")
    values = casadi.Function("values", [functions.program[n] for n in "xp"], [f, g])
    objective, stacked = values(x, p)
    expected = [*rows(2.0, 0.3, -0.4), *rows(5.0, -0.4, 1.1)]
    assert np.array(stacked).ravel() == pytest.approx(expected)
    total = sum(rows(3.0, 0.3, -0.4)) + sum(rows(-1.0, -0.4, 1.1))
    assert float(objective) == pytest.approx(total)


def test_hessian_is_an_upper_triangle():
    program = turn_program(intervals=2)
    pattern = program.functions.derivatives["hess_lag"].sparsity_out(0)
    assert pattern.is_triu()
