# SPDX-License-Identifier: BSD-3-Clause
"""The same motion on a finer mesh, and what is carried to it."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from posed_programs import full_program, random_variables, swing_program, turn_program

from rotorpump.solving.carrying import carry_multipliers
from rotorpump.solving.ipopt import Settings, run_ipopt
from rotorpump.transcription.division import Division, divide_variables
from rotorpump.transcription.form import ANGLE
from rotorpump.transcription.mesh import HIGH
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import node_marks, recover_trajectory

STATES = ("angle", "momentum", "radial", "radial_speed", "tangential", "tangential_speed")


def divided(program: Program, z: np.ndarray, pieces: np.ndarray) -> tuple[Program, np.ndarray]:
    mesh = program.mesh.settled(node_marks(program, z)).split(pieces)
    finer = replace(program, mesh=mesh)
    return finer, divide_variables(program, z, finer, Division.of(pieces))


def solved(program: Program, seed: int) -> np.ndarray:
    """A motion whose slides are continuous, as a solution's are."""
    rng = np.random.default_rng(seed)
    start = program.variable_bounds.clip(0.2 * random_variables(program, rng))
    outcome = run_ipopt(program, start, Settings())
    assert outcome.status.success, outcome.word
    return outcome.variables


def test_pieces_know_their_parents():
    division = Division.of(np.array([1, 3, 2]))
    assert division.parent.tolist() == [0, 1, 1, 1, 2, 2]
    assert division.begin == pytest.approx([0.0, 0.0, 1 / 3, 2 / 3, 0.0, 0.5])


@pytest.mark.parametrize("rung", [1, 2])
def test_a_divided_motion_is_the_same(rung):
    # exact where the collocated states are the polynomials that the wheel follows
    program = swing_program(rung, horizon=1.7, per_arc=3)
    z = solved(program, 3)
    finer, fine = divided(program, z, np.array([1, 2, 3, 1, 2, 1, 4, 1, 2]))
    assert finer.mesh.intervals == 17
    coarse, after = recover_trajectory(program, z), recover_trajectory(finer, fine)
    times = np.linspace(0.01, 1.69, 60)
    for name in STATES:
        wanted = getattr(coarse.at(times), name)
        scale = 1.0 + np.abs(wanted).max()
        assert getattr(after.at(times), name) == pytest.approx(wanted, abs=2e-6 * scale), name


def test_a_divided_turn_is_the_same():
    program = turn_program(intervals=4)
    z = solved(program, 4)
    finer, fine = divided(program, z, np.full(4, 2))
    coarse, after = recover_trajectory(program, z), recover_trajectory(finer, fine)
    assert fine.size == 2 * program.layout.inner.size + 8 * len(program.problem.form.node) + 2
    assert after.duration == pytest.approx(coarse.duration, rel=1e-9)
    assert after.radial[-1] == pytest.approx(coarse.radial[-1], abs=1e-9)


@pytest.mark.parametrize("independent", ["time", ANGLE])
def test_sums_and_slacks_are_divided_as_well(independent):
    program = full_program(independent=independent)
    z = program.variable_bounds.clip(0.2 * random_variables(program, np.random.default_rng(1)))
    finer, fine = divided(program, z, np.array([2, 1, 1, 3]))
    for name in ("work", "heat"):
        places, before = finer.layout.nodes(name), z[program.layout.nodes(name)]
        assert fine[places][[0, 2, 3, 4]] == pytest.approx(before[:4])
        assert fine[places][1] == pytest.approx(before[:2].mean())


def test_carried_multipliers_save_iterations():
    program = swing_program(horizon=1.7, per_arc=4, rests={0: HIGH})
    outcome = run_ipopt(program, program.variable_bounds.clip(solved(program, 3)), Settings())
    assert outcome.status.success
    pieces = np.ones(program.mesh.intervals, dtype=np.intp)
    finer, start = divided(program, outcome.variables, pieces)
    settings = Settings(barrier=1e-4)
    carried = carry_multipliers(program, outcome, finer, Division.of(pieces))
    warm = run_ipopt(finer, start, settings, multipliers=carried)
    spoiled = replace(carried, rows=-30.0 * carried.rows)
    wrong = run_ipopt(finer, start, settings, multipliers=spoiled)
    assert warm.status.success
    assert warm.iterations < 15
    assert warm.iterations < wrong.iterations
