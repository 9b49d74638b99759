# SPDX-License-Identifier: BSD-3-Clause
"""What the bounds of variables and rows fix."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from posed_programs import rig_on, swing_program, turn_program

from rotorpump.rig.slide import Slide
from rotorpump.solving.routes import find_rests
from rotorpump.transcription.bounds import Bounds
from rotorpump.transcription.mesh import FREE, HIGH, LOW
from rotorpump.transcription.problem import Goal, Start
from rotorpump.transcription.program import FLEXIBILITY, Program


def variable_range(program: Program, place) -> tuple[float, float]:
    bounds = program.variable_bounds
    return float(bounds.lower[place]), float(bounds.upper[place])


def row_ranges(program: Program) -> dict[str, tuple[np.ndarray, np.ndarray]]:
    """Bounds of the intervals' rows by group, shape (intervals, rows) each."""
    rows, bounds = program.problem.form.rows, program.row_bounds
    count = program.mesh.intervals * sum(rows.values())
    cuts = np.cumsum(list(rows.values()))[:-1]
    lower, upper = (
        np.split(side[:count].reshape(program.mesh.intervals, -1), cuts, axis=1)
        for side in (bounds.lower, bounds.upper)
    )
    names = [name.removeprefix("radial ") for name in rows]
    return dict(zip(names, zip(lower, upper, strict=True), strict=True))


def length_ranges(program: Program) -> tuple[np.ndarray, np.ndarray]:
    """Bounds of the interval lengths' rows, shape (intervals, 2)."""
    first = program.mesh.intervals * sum(program.problem.form.rows.values())
    rows = slice(first, first + 2 * program.mesh.intervals)
    bounds = program.row_bounds
    return bounds.lower[rows].reshape(-1, 2), bounds.upper[rows].reshape(-1, 2)


def test_limits_and_clip():
    bounds = Bounds.free(3)
    bounds.limit([0, 2], -1.0, np.array([1.0, 2.0]))
    assert bounds.lower.tolist() == [-1.0, -math.inf, -1.0]
    assert bounds.upper.tolist() == [1.0, math.inf, 2.0]
    assert bounds.clip(np.array([-3.0, 9.0, 5.0])).tolist() == [-1.0, 9.0, 2.0]


@pytest.mark.parametrize("rung", [0, 1, 2])
def test_start_is_given(rung):
    program = swing_program(rung)
    start = Start(0.7, -0.4, 0.3)
    program = replace(program, problem=replace(program.problem, start=start))
    node, scales = program.layout.node[0], program.scales
    # the slide is at rest
    expected = [0.0, 0.7, -0.4 / scales.momentum]
    expected += [scales.radial.scaled(0, 0.3), 0.0][:rung]
    for place, value in zip(node, expected, strict=True):
        assert variable_range(program, place) == pytest.approx((value, value))


def test_start_near_its_stop_stays_where_it_is():
    # A start a hair's breadth from the stop is the user's: no resting interval may move it.
    program = swing_program()
    start = replace(program.problem.start, radial=0.4 - 1e-4)
    program = replace(program, problem=replace(program.problem, start=start))
    z = np.zeros(program.layout.variables)
    z[program.layout.node[:, 3]] = 1.0
    rests = find_rests(program, program.variable_bounds.clip(z), 0)
    assert np.all(rests[1:] == HIGH)
    program = replace(
        program, mesh=program.mesh.with_pattern(rests[None], rests[None], flexible=True)
    )
    scaled = program.scales.radial.scaled(0, start.radial)
    assert variable_range(program, program.layout.node[0, 3]) == pytest.approx((scaled, scaled))


def test_time_runs_on_and_ends_at_the_horizon():
    program = swing_program()
    times = program.layout.node[:, 0]
    assert variable_range(program, times[0]) == (0.0, 0.0)
    assert all(variable_range(program, place) == (0.0, math.inf) for place in times[1:])
    program = swing_program(horizon=2.5)
    last = 2.5 / program.scales.time
    assert variable_range(program, program.layout.node[-1, 0]) == pytest.approx((last, last))


def test_momentum_has_the_sign_of_its_arc():
    program = swing_program(per_arc=2)
    _, momentum = program.layout.collocated
    inner = momentum[:, 1:-1]
    for k, direction in enumerate([-1, -1, -1, -1, 1, 1]):
        assert program.directions[k] == direction
        wanted = (0.0, math.inf) if direction > 0 else (-math.inf, 0.0)
        assert all(variable_range(program, place) == wanted for place in inner[k])
    nodes = program.layout.node
    assert variable_range(program, nodes[1, 2]) == (-math.inf, 0.0)
    assert variable_range(program, nodes[-1, 2]) == (0.0, math.inf)


def test_arcs_end_where_they_should():
    program = swing_program(per_arc=2)
    nodes = program.layout.node
    assert variable_range(program, nodes[2, 1]) == (0.0, 0.0)
    assert variable_range(program, nodes[2, 2]) == (-math.inf, 0.0)
    assert variable_range(program, nodes[4, 2]) == (0.0, 0.0)
    assert variable_range(program, nodes[4, 1]) == (-math.inf, math.inf)
    assert variable_range(program, nodes[6, 1]) == (-math.inf, math.inf)


def test_turn_begins_below_and_ends_a_turn_later():
    program = turn_program()
    nodes = program.layout.node
    assert variable_range(program, nodes[0, 0]) == (0.0, 0.0)
    assert variable_range(program, nodes[0, 1]) == (0.0, 0.0)
    assert variable_range(program, nodes[-1, 1]) == pytest.approx((2.0 * math.pi,) * 2)
    assert variable_range(program, nodes[0, 2]) == (0.0, math.inf)
    assert variable_range(program, nodes[0, 3]) == (0.0, 1.0)


@pytest.mark.parametrize("rung", [0, 1, 2])
def test_stroke_and_speed_limit(rung):
    program = swing_program(rung)
    values = [*program.layout.node[1, 3:], program.layout.controls(0)[1, 0]]
    top = 0.8 / program.scales.radial.speed
    limits = [(0.0, 1.0), (-top, top), (-math.inf, math.inf)]
    for place, expected in zip(values, limits, strict=False):
        assert variable_range(program, place) == pytest.approx(expected)
    assert len(values) == rung + 1


def test_no_speed_limit():
    program = swing_program()
    rig = rig_on(2, radial=Slide(stroke=(0.2, 0.4), force=40.0))
    program = replace(program, problem=replace(program.problem, rig=rig))
    assert variable_range(program, program.layout.node[1, 4]) == (-math.inf, math.inf)
    lower, upper = row_ranges(program)["speed"]
    assert np.all(lower == -np.inf)
    assert np.all(upper == np.inf)


def test_resting_mass_is_held_on_its_stop():
    program = swing_program(rests={0: HIGH, 3: LOW})
    for interval, seat in ((0, 1.0), (3, 0.0)):
        for node in program.layout.node[interval : interval + 2]:
            assert variable_range(program, node[3]) == (seat, seat)
            assert variable_range(program, node[4]) == (0.0, 0.0)
        for place in program.layout.controls(0)[interval]:
            assert variable_range(program, place) == (0.0, 0.0)
    free = program.layout.controls(0)[1]
    assert variable_range(program, free[0]) == (-math.inf, math.inf)


def test_rows_of_free_intervals():
    program = swing_program(rests={0: HIGH, 3: LOW})
    ranges = row_ranges(program)
    moving = np.flatnonzero(program.mesh.rests[0] == FREE)
    top = 0.8 / program.scales.radial.speed
    expected = {
        "wheel": (0.0, 0.0),
        "path": (0.0, 0.0),
        "speed": (-top, top),
        "force": (-1.0, 1.0),
    }
    for name, (low, high) in expected.items():
        lower, upper = ranges[name]
        assert lower.shape[1] > 0
        assert lower[moving] == pytest.approx(low)
        assert upper[moving] == pytest.approx(high)


def test_the_stroke_holds_but_where_the_mass_is_seated_anyway():
    program = swing_program(rests={0: HIGH, 3: LOW})
    lower, upper = row_ranges(program)["stroke"]
    # rows of the start and of the end of an interval; beside a rest, place and speed are given
    held = np.array([[0, 0], [0, 1], [1, 0], [0, 0], [0, 1], [1, 1]], dtype=bool)
    assert np.array_equal(lower, np.where(held, 0.0, -np.inf))
    assert np.array_equal(upper, np.where(held, 1.0, np.inf))
    # and a motion begins at rest
    lower, _ = row_ranges(swing_program())["stroke"]
    assert np.array_equal(lower[:2], [[-np.inf, 0.0], [0.0, 0.0]])


def test_rows_of_resting_intervals():
    program = swing_program(rests={0: HIGH, 3: LOW})
    ranges = row_ranges(program)
    for interval, force in ((0, (-np.inf, 1.0)), (3, (-1.0, np.inf))):
        lower, upper = (side[interval] for side in ranges["force"])
        assert np.all(lower == force[0])
        assert np.all(upper == force[1])
        assert np.all(ranges["wheel"][0][interval] == 0.0)
        assert np.all(ranges["wheel"][1][interval] == 0.0)
        for name in ("path", "stroke", "speed"):
            assert np.all(ranges[name][0][interval] == -np.inf)
            assert np.all(ranges[name][1][interval] == np.inf)


def test_rows_of_relaxed_stops_are_one_sided():
    ranges = row_ranges(swing_program(relaxed=True, flexible=False))
    for name in ("stops", "arrival"):
        lower, upper = ranges[name]
        assert lower.shape[1] > 0
        assert np.all(lower == -np.inf)
        assert np.all(upper == 0.0)


def test_lengths_are_nominal_or_flexible():
    program = swing_program(flexible=False)
    lower, upper = length_ranges(program)
    last = program.mesh.edges[1:] - 1
    # an arc's last length follows from the others
    assert np.all(np.isinf(lower[last, 0]))
    assert np.all(np.delete(lower[:, 0], last) == 0.0)
    assert np.all(np.delete(upper[:, 0], last) == 0.0)
    assert np.all(lower[:, 1] > 0.0)
    assert np.all(upper[:, 1] == np.inf)
    program = swing_program(flexible=True, per_arc=2)
    lower, upper = length_ranges(program)
    # length - least share x arc >= 0 and length - largest share x arc <= 0
    assert np.all(lower == [0.0, -np.inf])
    assert np.all(upper == [np.inf, 0.0])
    z = np.zeros(program.layout.variables)
    z[program.layout.node[:, 0]] = [0.0, 0.4, 1.0, 2.0, 3.0, 4.0, 5.0]
    first = program.mesh.intervals * sum(program.problem.form.rows.values())
    rows = np.array(program.functions.derivatives["jac_g"](z, program.parameters)[0]).ravel()
    least, largest = FLEXIBILITY
    assert rows[first : first + 4] == pytest.approx(
        [0.4 - least / 2, 0.4 - largest / 2, 0.6 - least / 2, 0.6 - largest / 2]
    )


def test_goal_is_a_least_value():
    program = swing_program(goal=Goal("energy", 1.75))
    assert (program.row_bounds.lower[-1], program.row_bounds.upper[-1]) == (1.75, math.inf)
    without = swing_program()
    assert program.row_bounds.lower.size == without.row_bounds.lower.size + 1
