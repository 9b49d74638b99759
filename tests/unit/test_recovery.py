# SPDX-License-Identifier: BSD-3-Clause
"""From a motion to the program's variables and back."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from posed_programs import random_variables, rig_on, swing_program, turn_program

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_forces
from rotorpump.physics.state import Slides
from rotorpump.rig.slide import Slide
from rotorpump.transcription.form import ANGLE, TIME
from rotorpump.transcription.guess import Guess
from rotorpump.transcription.mesh import FREE, HIGH, LOW
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.problem import Start
from rotorpump.transcription.program import Program
from rotorpump.transcription.recovery import node_marks, recover_trajectory

ENDS = [0.5, 0.9, 1.7]
LATE = 0.9


def angle_at(time):
    """A cubic that is zero at 0.5 s, where the first arc ends."""
    return (time - 0.5) * (time**2 - 1.3 * time - 1.0)


def momentum_at(time):
    """A cubic that is negative up to 0.9 s and positive after it."""
    return (time - LATE) * (1.0 + 0.5 * time**2)


def radial_at(time):
    return 0.38 - 0.05 * time**2


def radial_speed_at(time):
    return -0.1 * time


def needed_force(rig, angle, speed, radial, acceleration):
    """Force along a radial slide through the axle, whatever the wheel's acceleration."""
    slides = Slides(radial)
    constants = Constants.of(rig)
    return contact_forces(np, constants, angle, speed, 0.0, slides, acceleration, 0.0)[0]


def sampled(program: Program, ends) -> Guess:
    """The motion above at the program's own points, so that nothing is lost between samples."""
    points = radau_nodes(program.problem.form.degree).points
    marks = program.mesh.node_times(ends)
    time = np.unique((marks[:-1, None] + np.diff(marks)[:, None] * points).ravel())
    still = np.zeros_like(time)
    slides = (radial_at(time), radial_speed_at(time), still, still)
    states = np.vstack([angle_at(time), momentum_at(time), *slides])
    return Guess.from_states(program.problem.rig, time, states)


def started(program: Program) -> Program:
    """The program with the start and the horizon of the motion above."""
    start = Start(angle_at(0.0), momentum_at(0.0), radial_at(0.0))
    return replace(program, problem=replace(program.problem, start=start, horizon=ENDS[-1]))


@pytest.mark.parametrize("flexible", [True, False])
@pytest.mark.parametrize("degree", [3, 5])
def test_representable_motion_comes_back(degree, flexible):
    program = started(swing_program(degree=degree, per_arc=3, flexible=flexible))
    z = program.start_from(sampled(program, ENDS), ENDS)
    trajectory = recover_trajectory(program, z)
    dense = trajectory.at(np.linspace(0.0, ENDS[-1], 101))
    assert dense.angle == pytest.approx(angle_at(dense.time), abs=1e-10)
    assert dense.momentum == pytest.approx(momentum_at(dense.time), abs=1e-10)
    assert dense.radial == pytest.approx(radial_at(dense.time), abs=1e-10)
    assert dense.radial_speed == pytest.approx(radial_speed_at(dense.time), abs=1e-10)
    assert trajectory.time[trajectory.arcs] == pytest.approx([0.0, *ENDS])
    assert node_marks(program, z) == pytest.approx(program.mesh.node_times(ENDS))
    # where the drive can, it makes the force that this motion needs
    rig = program.problem.rig
    speed = dense.momentum / (0.25 + 1.2 * dense.radial**2)
    need = needed_force(rig, dense.angle, speed, dense.radial, -0.1)
    nodes = trajectory.at(trajectory.time)
    own = needed_force(rig, nodes.angle, nodes.speed, nodes.radial, -0.1)
    assert np.abs(need).max() < 40.0
    assert trajectory.radial_force == pytest.approx(own, abs=1e-9)


def test_wrong_order_of_rows_would_show():
    # The same motion on a mesh that ends elsewhere is not reproduced: the test above can fail.
    program = started(swing_program(per_arc=3))
    z = program.start_from(sampled(program, ENDS), [0.5, 0.9, 1.6])
    trajectory = recover_trajectory(program, z)
    time = np.linspace(0.0, 1.6, 50)
    assert np.abs(trajectory.at(time).angle - angle_at(time)).max() > 1e-3


def consistent_variables(program: Program, seed: int) -> np.ndarray:
    """Random variables that keep all bounds and whose slide is continuous from node to node.

    Its control is constant within an interval on the higher rungs, as `start_from` makes it.
    """
    rng = np.random.default_rng(seed)
    form, layout, scales = program.problem.form, program.layout, program.scales.radial
    rung = form.axes[0].rung
    z = program.variable_bounds.clip(random_variables(program, rng) * 0.3)
    first, _ = layout.collocated
    points = radau_nodes(form.degree).points
    if form.independent == TIME:
        z[layout.nodes("time")] = program.mesh.node_times([0.5, 1.1, 1.8])
    else:
        turn = program.mesh.node_times([2.0 * math.pi])
        z[layout.nodes("angle")] = turn
        nodes = np.concatenate(([0.0], np.cumsum(rng.uniform(0.1, 0.5, program.mesh.intervals))))
        z[first] = nodes[:-1, None] + np.diff(nodes)[:, None] * points
    spans = np.diff(z[layout.nodes("time")]) * program.scales.time
    position, pace = 0.5, 0.0
    for k, span in enumerate(spans):
        z[layout.node[k, 3 : 3 + rung]] = (position, pace)[:rung]
        goal = position + rng.uniform(-0.1, 0.1)
        if rung == 0:
            z[layout.controls(0)[k]] = position, goal
            position = goal
        elif rung == 1:
            z[layout.controls(0)[k]] = (goal - position) * scales.length / span / scales.speed
            position = goal
        else:
            gain = rng.uniform(-0.02, 0.02)
            z[layout.controls(0)[k]] = gain * scales.speed / span / scales.acceleration
            position += (pace + gain / 2) * scales.speed * span / scales.length
            pace += gain
    z[layout.node[-1, 3 : 3 + rung]] = (position, pace)[:rung]
    return z


def opened(program: Program) -> Program:
    """The angle form with a start of its own: its last node shares nothing with the first."""
    start = Start(0.0, 0.3, 0.3)
    return replace(program, problem=replace(program.problem, start=start))


def with_middle_start(program: Program) -> Program:
    start = replace(program.problem.start, radial=0.3)
    return replace(program, problem=replace(program.problem, start=start))


@pytest.mark.parametrize("rung", [0, 1, 2])
@pytest.mark.parametrize("independent", [TIME, ANGLE])
@given(seed=st.integers(0, 10_000))
def test_variables_come_back(independent, rung, seed):
    if independent == TIME:
        program = with_middle_start(swing_program(rung))
    else:
        program = opened(turn_program(rung))
    z = consistent_variables(program, seed)
    marks = node_marks(program, z)
    trajectory = recover_trajectory(program, z)
    ends = [float(marks[k]) for k in program.mesh.edges[1:]]
    mesh = program.mesh.settled(marks)
    again = replace(program, mesh=mesh)
    back = again.start_from(Guess.from_trajectory(trajectory, points=40), ends)
    # a random motion may leave its bounds, a start is always moved into them; in between, samples
    # of the motion are taken as linear
    assert back == pytest.approx(again.variable_bounds.clip(z), rel=5e-3, abs=5e-3)


@pytest.mark.parametrize("rung", [0, 1, 2])
@pytest.mark.parametrize("posed", [swing_program, turn_program])
def test_every_column_has_every_node(rung, posed):
    program = posed(rung)
    z = program.variable_bounds.clip(random_variables(program, np.random.default_rng(1)))
    trajectory = recover_trajectory(program, z)
    sizes = {name: column.size for name, column in trajectory.columns().items()}
    assert len(set(sizes.values())) == 1, sizes
    assert all(np.isfinite(column).all() for column in trajectory.columns().values())


def test_instant_slide_may_jump_between_intervals():
    program = with_middle_start(swing_program(0))
    z = consistent_variables(program, 5)
    z[program.layout.controls(0)] = np.array([0.0, 1.0, 0.25, 0.75, 0.0, 1.0])[:, None]
    trajectory = recover_trajectory(program, z)
    marks = node_marks(program, z)
    middle = trajectory.at(0.5 * (marks[1:] + marks[:-1])).radial
    assert middle == pytest.approx([0.2, 0.4, 0.25, 0.35, 0.2, 0.4])
    early = trajectory.at(marks[:-1] + 0.01 * np.diff(marks)).radial
    assert early == pytest.approx([0.2, 0.4, 0.25, 0.35, 0.2, 0.4])


@pytest.mark.parametrize(("rest", "angle", "sign"), [(HIGH, 0.0, -1.0), (LOW, math.pi, 1.0)])
def test_stop_only_pushes_and_the_drive_keeps_its_limit(rest, angle, sign):
    # A drive too weak to carry the mass: below it hangs in the outer stop, on top it sits on the
    # inner one.
    weak = rig_on(2, radial=Slide(stroke=(0.2, 0.4), force=3.0))
    program = swing_program(rests={k: rest for k in range(6)})
    program = replace(program, problem=replace(program.problem, rig=weak))
    z = program.variable_bounds.clip(0.1 * random_variables(program, np.random.default_rng(7)))
    z[program.layout.nodes("time")] = np.arange(7.0)
    first, _ = program.layout.collocated
    z[first] = angle
    trajectory = recover_trajectory(program, z)
    contact = needed_force(weak, trajectory.angle, trajectory.speed, trajectory.radial, 0.0)
    assert trajectory.radial == pytest.approx(0.4 if rest == HIGH else 0.2)
    assert np.all(np.abs(contact) > 3.0)
    assert np.all(sign * (contact - trajectory.radial_force) > 0.0)
    assert np.abs(trajectory.radial_force).max() <= 3.0
    # and the drive presses the mass onto its stop rather than off it
    assert np.all(sign * trajectory.radial_force < 0.0)


def test_free_mass_is_carried_by_the_drive_alone():
    program = swing_program(rests={k: FREE for k in range(6)})
    z = program.variable_bounds.clip(0.2 * random_variables(program, np.random.default_rng(2)))
    z[program.layout.nodes("time")] = np.arange(7.0)
    z[program.layout.controls(0)] = 0.0
    trajectory = recover_trajectory(program, z)
    motion = (trajectory.angle, trajectory.speed, trajectory.radial)
    contact = needed_force(rig_on(2), *motion, 0.0)
    assert np.abs(contact).max() < 40.0
    assert trajectory.radial_force == pytest.approx(contact)
