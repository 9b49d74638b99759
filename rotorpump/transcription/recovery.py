# SPDX-License-Identifier: BSD-3-Clause
"""From the solver's variables back to a motion."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_force, wheel_speed
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.trajectory import Trajectory
from rotorpump.transcription.interval import TIME
from rotorpump.transcription.mesh import INNER, OUTER
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.path import FORCE_LIMITED, INSTANT, SlidePath
from rotorpump.transcription.program import Program

Array = NDArray[np.float64]


def node_marks(program: Program, z: Array) -> Array:
    """Independent variable at the nodes: time [s] or angle [rad], shape (intervals + 1,)."""
    if program.problem.form.independent == TIME:
        return np.asarray(z[program.layout.node[:, 0]] * program.scales.time)
    return np.asarray(z[program.layout.node[:, 1]])


def motion_within(program: Program, z: Array) -> SlidePath:
    """Return the slide's motion in all intervals at once, for times of shape (intervals, n)."""
    form, layout, scales = program.problem.form, program.layout, program.scales
    controls = scales.slide_value(form.rung, z[layout.controls])
    values = (scales.slide_value(k, z[layout.node[:-1, 3 + k]])[:, None] for k in range(form.rung))
    duration = np.diff(z[layout.node[:, 0]])[:, None] * scales.time
    return SlidePath(tuple(values), controls[:, :1], controls[:, 1:], duration)


def recover_trajectory(program: Program, z: Array) -> Trajectory:
    """Return the motion that scaled variables describe, its nodes the collocation points."""
    form, layout, scales = program.problem.form, program.layout, program.scales
    rig = program.problem.rig
    constants = Constants.of(rig)
    points = radau_nodes(form.degree).points
    collocated, places = layout.collocated(form)
    momentum = z[places] * scales.momentum
    edges = z[layout.node[:, 0]] * scales.time
    duration = np.diff(edges)[:, None]
    if form.independent == TIME:
        angle = z[collocated]
        elapsed = duration * points
    else:
        marks = z[layout.node[:, 1]]
        angle = marks[:-1, None] + np.diff(marks)[:, None] * points
        elapsed = z[collocated] * scales.time - edges[:-1, None]
    path = motion_within(program, z)
    radial, slide_speed = path.position(elapsed), path.speed(elapsed)
    speed = wheel_speed(constants, momentum, radial)
    acceleration = path.acceleration(elapsed)
    contact = contact_force(np, constants, angle, speed, radial, acceleration)

    def joined(column: Array) -> Array:
        return _joined(np.broadcast_to(column, angle.shape), form.rung)

    starts = _interval_starts(program)
    return trajectory_of(
        rig,
        joined(edges[:-1, None] + elapsed),
        joined(angle),
        joined(momentum),
        joined(radial),
        joined(slide_speed),
        joined(_drive_share(program, contact)),
        breaks=np.unique(np.append(starts, starts[1:] - 1) if form.rung == INSTANT else starts),
        arcs=starts[program.mesh.edges],
        contact=joined(contact),
    )


def _interval_starts(program: Program) -> NDArray[np.intp]:
    """Nodes at which intervals begin, and the last node, shape (intervals + 1,)."""
    form = program.problem.form
    if form.rung != INSTANT:
        return np.arange(program.mesh.intervals + 1) * form.degree
    starts = np.arange(program.mesh.intervals + 1) * (form.degree + 1)
    starts[-1] -= 1
    return starts


def _joined(values: Array, rung: int) -> Array:
    """Chain the intervals' points.

    Where two intervals meet, one node holds the value on its left; a mass whose position may jump
    has two nodes there.
    """
    if rung == INSTANT:
        return values.ravel()
    return np.concatenate((values[0, :1], values[:, 1:].ravel()))


PRESS = 0.05
"""Share of its force limit with which the drive presses a resting mass onto its stop."""


def _drive_share(program: Program, contact: Array) -> Array:
    """Force of the drive [N]: what the end stop under a resting mass does not bear.

    On a stop the split between drive and stop is free. A drive that exactly balanced the load
    would leave the mass floating in front of its stop, so it presses a little.
    """
    if program.problem.form.rung != FORCE_LIMITED:
        return contact
    limit = program.problem.rig.radial.force
    press = PRESS * limit
    rests = program.mesh.rests[:, None]
    share = np.where(rests == OUTER, np.maximum(contact, 0.0) + press, contact)
    share = np.where(rests == INNER, np.minimum(contact, 0.0) - press, share)
    return np.clip(share, -limit, limit)
