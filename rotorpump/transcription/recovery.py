# SPDX-License-Identifier: BSD-3-Clause
"""From the solver's variables back to a motion."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import motion_along, wheel_speed
from rotorpump.physics.state import Motion, Slides
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.trajectory import Trajectory
from rotorpump.transcription.form import TIME, AxisForm
from rotorpump.transcription.mesh import FREE, HIGH, LOW, Marks
from rotorpump.transcription.nodes import lagrange_basis, radau_nodes
from rotorpump.transcription.path import RATE_LIMITED, SlidePath
from rotorpump.transcription.program import Program
from rotorpump.transcription.shared import PRESS

Array = NDArray[np.float64]

SEATED = 1e-6
"""Distance from a stop, and speed, in scaled units, below which the mass sits on it."""

SHORTEST = 1e-12
"""Length that stands for none [s]."""

BETWEEN = 3e-3
"""Share of its force limit by which a drive may exceed it between the collocation points."""

RECORD = 6
"""Radau points of an interval at which the motion is recorded."""


def node_marks(program: Program, z: Array) -> Array:
    """Independent variable at the nodes: time [s] or angle [rad], shape (intervals + 1,)."""
    if program.problem.form.independent == TIME:
        return np.asarray(z[program.layout.nodes("time")] * program.scales.time)
    return np.asarray(z[program.layout.nodes("angle")])


@dataclass(frozen=True, eq=False)
class SlidesWithin:
    """Motion of the slides in all intervals at once, for elapsed times of shape (intervals, n)."""

    program: Program
    paths: dict[str, SlidePath]

    @classmethod
    def of(cls, program: Program, z: Array) -> SlidesWithin:
        """Take the slides' motion from scaled variables."""
        layout = program.layout
        duration = np.diff(z[layout.nodes("time")])[:, None] * program.scales.time
        # an iterate, unlike a solution, may have intervals without any length
        duration = np.where(duration == 0.0, SHORTEST, duration)
        paths = {}
        for k, axis in enumerate(program.problem.form.axes):
            scales = program.scales.slide(axis.name)
            names = axis.node[:2] if axis.rung == RATE_LIMITED else axis.node
            start = (
                scales.value(order, z[layout.nodes(name)[:-1]])[:, None]
                for order, name in enumerate(names)
            )
            if axis.rung == RATE_LIMITED:
                nodes = z[layout.nodes(axis.node[2])]
                controls = np.column_stack([nodes[:-1], nodes[1:]])
            else:
                controls = z[layout.controls(k)]
            ends = scales.value(len(names), controls)
            paths[axis.name] = SlidePath(tuple(start), ends[:, :1], ends[:, 1:], duration)
        return cls(program, paths)

    def pieces(self, intervals: NDArray[np.intp]) -> SlidesWithin:
        """Return the motion in chosen intervals."""
        paths = {
            name: SlidePath(
                tuple(value[intervals] for value in path.start),
                path.first[intervals],
                path.last[intervals],
                path.duration[intervals],
            )
            for name, path in self.paths.items()
        }
        return SlidesWithin(self.program, paths)

    def slides(self, elapsed: Array) -> Slides:
        """Place and speed of the mass."""
        c = Constants.of(self.program.problem.rig)
        held = {"radial": c.radial_low, "tangential": c.tangential_low}
        values: list[Any] = []
        for name, place in held.items():
            path = self.paths.get(name)
            values += (
                [place, 0.0] if path is None else [path.position(elapsed), path.speed(elapsed)]
            )
        return Slides(*values)

    def accelerations(self, elapsed: Array) -> tuple[Any, Any]:
        """Accelerations of the mass along both axes [m/s2]."""
        radial, tangential = (
            self.paths[name].acceleration(elapsed) if name in self.paths else 0.0
            for name in ("radial", "tangential")
        )
        return radial, tangential

    def motion(self, elapsed: Array, angle: Array, momentum: Array) -> tuple[Array, Array, Motion]:
        """Wheel speed [rad/s], rate of angular momentum [N m], and the motion."""
        problem = self.program.problem
        c = Constants.of(problem.rig, problem.load_torque)
        slides = self.slides(elapsed)
        speed = wheel_speed(c, momentum, slides)
        direction = self.program.directions[:, None]
        accelerations = self.accelerations(elapsed)
        rate, motion = motion_along(np, c, angle, speed, slides, *accelerations, direction)
        return np.asarray(speed), np.asarray(rate), motion


class Record(NamedTuple):
    """States at the points of all intervals that are recorded, shape (intervals, RECORD + 1).

    Parameters
    ----------
    elapsed, angle, momentum : ndarray
        Time since the interval's start [s], wheel angle [rad], angular momentum [kg m2/s].
    """

    elapsed: Array
    angle: Array
    momentum: Array

    @classmethod
    def of(cls, program: Program, z: Array) -> Record:
        """Evaluate the collocation polynomials."""
        form, layout, scales = program.problem.form, program.layout, program.scales
        points = radau_nodes(RECORD).points
        nodes = radau_nodes(form.degree).points.tolist()
        basis = np.array([lagrange_basis(nodes, place) for place in points.tolist()])
        collocated, places = layout.collocated
        momentum = z[places] * scales.momentum @ basis.T
        if form.independent == TIME:
            duration = np.diff(z[layout.nodes("time")])[:, None] * scales.time
            return cls(duration * points, z[collocated] @ basis.T, momentum)
        marks = z[layout.nodes("angle")]
        angle = marks[:-1, None] + np.diff(marks)[:, None] * points
        elapsed = (z[collocated] - z[layout.nodes("time")[:-1]][:, None]) * scales.time
        return cls(elapsed @ basis.T, angle, momentum)


def recover_trajectory(program: Program, z: Array) -> Trajectory:
    """Return the motion that scaled variables describe.

    It has more nodes than the collocation has points: the wheel's states are evaluated from their
    polynomials, the slides' exactly, and the forces that follow from both are no polynomials.
    """
    form = program.problem.form
    record = Record.of(program, z)
    edges = z[program.layout.nodes("time")] * program.scales.time
    within = SlidesWithin.of(program, z)
    _, _, motion = within.motion(*record)
    contacts = {"radial": motion.radial_contact, "tangential": motion.tangential_contact}
    drives = {name: np.zeros(1) for name in contacts}
    for k, axis in enumerate(form.axes):
        needed = np.broadcast_to(contacts[axis.name], record.angle.shape)
        drives[axis.name] = drive_forces(program, z, k, needed + rubbing_forces(program, k))

    def joined(column: Any) -> Array:
        return _joined(np.broadcast_to(column, record.angle.shape), jumps=form.jumps)

    starts = _interval_starts(program)
    time = edges[:-1, None] + record.elapsed
    time[:, -1] = edges[1:]
    return trajectory_of(
        program.problem.rig,
        joined(time),
        joined(record.angle),
        joined(record.momentum),
        Slides(*(joined(column) for column in within.slides(record.elapsed))),
        (joined(drives["radial"]), joined(drives["tangential"])),
        breaks=np.unique(np.append(starts, starts[1:-1] - 1)) if form.jumps else starts,
        arcs=starts[_arc_edges(program, z)],
        contacts=(joined(contacts["radial"]), joined(contacts["tangential"])),
        direction=joined(program.directions[:, None]),
        load_torque=program.problem.load_torque,
    )


def _arc_edges(program: Program, z: Array) -> NDArray[np.intp]:
    """Intervals at which arcs of the trajectory begin, and the last node.

    With two slides an arc also ends where the mass arrives at a stop: a position that is off by a
    little there becomes a speed, of the order of its root, which the stop passes on to the wheel
    and to the other slide.
    """
    axes = program.problem.form.axes
    edges = program.mesh.edges
    if len(axes) == 1:
        return edges
    for k, axis in enumerate(axes):
        if axis.forceful:
            high, low = _seated_nodes(program, z, k)
            free = seats(program, z, k) == FREE
            arrivals = np.flatnonzero((high | low)[1:-1] & free[:-1]) + 1
            edges = np.union1d(edges, arrivals)
    return edges


def _interval_starts(program: Program) -> NDArray[np.intp]:
    """Nodes at which intervals begin, and the last node, shape (intervals + 1,)."""
    if not program.problem.form.jumps:
        return np.arange(program.mesh.intervals + 1) * RECORD
    starts = np.arange(program.mesh.intervals + 1) * (RECORD + 1)
    starts[-1] -= 1
    return starts


def _joined(values: Array, *, jumps: bool) -> Array:
    """Chain the intervals' points.

    Where two intervals meet, one node holds the value on its left; where the wheel's speed or the
    mass may jump, two nodes stand there.
    """
    if jumps:
        return values.ravel()
    return np.concatenate((values[0, :1], values[:, 1:].ravel()))


def rubbing_forces(program: Program, number: int) -> Array:
    """Force that rubbing takes from a drive in each interval [N], shape (intervals, 1)."""
    axis, mesh = program.problem.form.axes[number], program.mesh
    rubbing = program.problem.rig.slide(axis.name).rubbing
    return np.where(mesh.rests[number] == FREE, rubbing * mesh.signs[number], 0.0)[:, None]


def drive_forces(program: Program, z: Array, number: int, needed: Array) -> Array:
    """Force of a drive at all points [N]: what is needed, less what an end stop bears.

    ``needed`` is the whole force on the mass and what rubbing takes. On a stop the split between
    drive and stop is free. A drive that exactly balanced the load would leave the mass floating in
    front of its stop, so it presses a little.
    """
    axis = program.problem.form.axes[number]
    if not axis.forceful:
        return needed
    slide = program.problem.rig.slide(axis.name)
    rests = seats(program, z, number)[:, None]
    if axis.rung == RATE_LIMITED:
        return _rated_force(program, z, axis, needed, rests)
    press = PRESS * program.scales.slide(axis.name).force
    share = np.where(rests == HIGH, np.maximum(needed, 0.0) + press, needed)
    share = np.where(rests == LOW, np.minimum(needed, 0.0) - press, share)
    limit = np.where(rests == FREE, slide.force * (1.0 + BETWEEN), slide.standing_force)
    return np.clip(share, -limit, limit)


def seats(program: Program, z: Array, number: int) -> Marks:
    """Stop on which the mass sits throughout each interval, in the pattern or not.

    A mass at a stop with no speed at both ends of an interval does not move in it, since its
    position is a cubic. Where the drive's force is summed up, the pattern alone counts: the force
    that presses the mass onto its stop is part of the sum.
    """
    axis = program.problem.form.axes[number]
    rests: Marks = program.mesh.rests[number]
    if not program.problem.rig.slide(axis.name).bearing or axis.rung == RATE_LIMITED:
        return rests
    if program.problem.form.sums:
        return rests
    high, low = _seated_nodes(program, z, number)
    rests = np.where(high[:-1] & high[1:], HIGH, rests)
    return np.asarray(np.where(low[:-1] & low[1:], LOW, rests), dtype=np.intp)


def _seated_nodes(
    program: Program, z: Array, number: int
) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Nodes at which the mass stands at the high, and at the low end of a stroke."""
    name = program.problem.form.axes[number].name
    place = z[program.layout.nodes(name)]
    still = np.abs(z[program.layout.nodes(f"{name}_speed")]) < SEATED
    return still & (place > 1.0 - SEATED), still & (place < SEATED)


def _rated_force(
    program: Program, z: Array, axis: AxisForm, needed: Array, rests: NDArray[np.intp]
) -> Array:
    """Force of a drive with a limited force rate: linear between the nodes on a stop."""
    nodes = z[program.layout.nodes(axis.node[3])] * program.scales.slide(axis.name).force
    points = radau_nodes(RECORD).points
    linear = nodes[:-1, None] + np.diff(nodes)[:, None] * points
    return np.where(rests == FREE, needed, linear)
