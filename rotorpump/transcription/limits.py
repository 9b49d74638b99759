# SPDX-License-Identifier: BSD-3-Clause
"""Rows of an interval that hold one slide within its limits and on its stops."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple

import casadi

from rotorpump.transcription.form import LINE_PLACES, POWER_PLACES, TIME, AxisForm, Form
from rotorpump.transcription.instant import Instant
from rotorpump.transcription.nodes import lagrange_basis, radau_nodes
from rotorpump.transcription.path import FORCE_LIMITED, RATE_LIMITED, SPEED_LIMITED, SlidePath
from rotorpump.transcription.shared import Drive, Shared

SMOOTH = 0.02
"""Width, in typical speeds, over which a relaxed solve smooths the rubbing's change of sign."""

Rows = dict[str, list[Any]]
Node = dict[str, Any]


class Rest(NamedTuple):
    """Own parameters of one slide in one interval.

    Parameters
    ----------
    stop : symbol
        1 where the mass rests on its high stop, -1 on its low one, 0 where it is free.
    sign : symbol
        Direction in which a free mass moves, 0 where none is given.
    """

    stop: Any
    sign: Any


def limit_rows(
    form: Form,
    axis: AxisForm,
    shared: Shared,
    path: SlidePath,
    instants: list[Instant],
    ends: tuple[Node, Node],
    rest: Rest,
) -> tuple[Rows, list[Any]]:
    """Rows of one slide, and the force of its drive at all points.

    Parameters
    ----------
    form, axis : Form, AxisForm
        Structure.
    shared : Shared
        Shared parameters.
    path : SlidePath
        The slide's motion.
    instants : list of Instant
        Start and collocation points.
    ends : tuple of dict
        Scaled variables of both nodes.
    rest : Rest
        The interval's own parameters.

    Returns
    -------
    rows : dict
        Rows by group.
    forces : list
        Force of the drive at the start and the collocation points [N].
    """
    rows: Rows = {}
    rows["stroke"], rows["speed"] = _between_nodes(axis, shared, path, ends[1])
    if not axis.forceful:
        return rows, [now.contact(axis.name) for now in instants]
    scales, drive = shared.scales.slide(axis.name), shared.drives[axis.name]
    needed = [_needed(form, axis, shared, now, rest) for now in instants]
    forces = [_drive_force(force, drive, rest) for force in needed]
    if axis.rung == RATE_LIMITED:
        held, forces = _rated_rows(form, axis, shared, instants, needed, ends, rest)
        rows |= held
    rows["force"] = [force / scales.force for force in needed]
    if axis.power:
        rows["power"] = [
            force * pace / (scales.force * scales.speed)
            for force, pace in _between_points(form, path, instants, needed, POWER_PLACES)
        ]
    if axis.motor_line:
        rows["line"] = [
            force / drive.stall_force + pace / drive.no_load_speed
            for force, pace in _between_points(form, path, instants, needed, LINE_PLACES)
        ]
    if form.relaxed and axis.bears:
        rows["arrival"] = _arrival(axis, shared, instants[-1])
        # a relaxed solve, which only has to find the pattern, does without the start
        rows["stops"] = [
            row
            for force, now in zip(needed[1:], instants[1:], strict=True)
            for row in _relaxed_rows(axis, shared, force, now)
        ]
    return rows, forces


def _between_points(
    form: Form,
    path: SlidePath,
    instants: list[Instant],
    needed: list[Any],
    places: Sequence[float],
) -> list[tuple[Any, Any]]:
    """Force and speed at places throughout the interval [N, m/s].

    The force is the polynomial through the collocation points, which is what a replay takes it for.
    """
    if form.independent == TIME:
        times = [float(point) for point in radau_nodes(form.degree).points]
    else:
        times = [now.elapsed / path.duration for now in instants]
    found = []
    for place in places:
        basis = lagrange_basis(times[1:], place)
        force = sum(weight * value for weight, value in zip(basis, needed[1:], strict=True))
        found.append((force, path.speed(place * path.duration)))
    return found


def _needed(form: Form, axis: AxisForm, shared: Shared, now: Instant, rest: Rest) -> Any:
    """Force that drive and stop have to exert together, rubbing included [N]."""
    contact = now.contact(axis.name)
    if not axis.rubs:
        return contact
    sign = rest.sign
    if form.relaxed:
        ratio = now.pace(axis.name) / (SMOOTH * shared.scales.slide(axis.name).speed)
        sign = ratio / casadi.sqrt(1.0 + ratio**2)
    return contact + sign * getattr(shared.constants, f"{axis.name}_rubbing")


def _drive_force(needed: Any, drive: Drive, rest: Rest) -> Any:
    """Force of the drive: all that is needed, or on a stop what the stop does not bear [N].

    On a stop the split between drive and stop is free. A drive that exactly balanced the load
    would leave the mass floating in front of its stop, so it presses a little.
    """
    outward = casadi.fmax(needed, 0.0) + drive.press
    inward = casadi.fmin(needed, 0.0) - drive.press
    return casadi.if_else(
        rest.stop > 0.5, outward, casadi.if_else(rest.stop < -0.5, inward, needed)
    )


def _rated_rows(
    form: Form,
    axis: AxisForm,
    shared: Shared,
    instants: list[Instant],
    needed: list[Any],
    ends: tuple[Node, Node],
    rest: Rest,
) -> tuple[Rows, list[Any]]:
    """Rows of a drive whose force changes at a limited rate, and its force.

    The force at the nodes is a variable. Under a free mass the last point has to have it; under a
    resting one it is linear in between, and at least what the stop cannot give.
    """
    drive, scale = shared.drives[axis.name], shared.scales.slide(axis.name).force
    first, last = (end[f"{axis.name}_drive"] * scale for end in ends)
    nodes = radau_nodes(form.degree)
    stacked = casadi.vertcat(*needed)
    rates = [
        casadi.dot(casadi.DM(slopes), stacked) / now.passing
        for slopes, now in zip((nodes.start_slope, *nodes.slopes), instants, strict=True)
    ]
    linear = [first + (last - first) * float(point) for point in nodes.points]
    duration = sum(
        float(weight) * now.passing for weight, now in zip(nodes.weights, instants[1:], strict=True)
    )
    rows = {
        "rate": [rate / drive.force_rate for rate in (*rates, (last - first) / duration)],
        "drive": [(first - needed[0]) / scale, (last - needed[-1]) / scale],
        "bearing": [
            rest.stop * (force - least) / scale for force, least in zip(linear, needed, strict=True)
        ],
    }
    resting = rest.stop**2
    forces = [
        resting * held + (1.0 - resting) * free for held, free in zip(linear, needed, strict=True)
    ]
    return rows, forces


def _between_nodes(
    axis: AxisForm, shared: Shared, path: SlidePath, right: Node
) -> tuple[list[Any], list[Any]]:
    """Rows that hold stroke and speed limit everywhere within the interval.

    Position and speed are polynomials; both stay within limits that their Bernstein coefficients
    stay within. The end values are bounded as variables, the coefficients in between here.
    """
    scales = shared.scales.slide(axis.name)
    if axis.rung >= FORCE_LIMITED:
        first = path.start[0] + path.duration * path.start[1] / 3.0
        final = scales.value(1, right[f"{axis.name}_speed"])
        last = scales.value(0, right[axis.name]) - path.duration * final / 3.0
        middle = path.start[1] + 0.5 * path.duration * path.first
        return [scales.scaled(0, first), scales.scaled(0, last)], [middle / scales.speed]
    if axis.rung == SPEED_LIMITED:
        middle = path.start[0] + 0.5 * path.duration * path.first
        return [scales.scaled(0, middle)], []
    return [], []


def _arrival(axis: AxisForm, shared: Shared, now: Instant) -> list[Any]:
    """Rows that forbid a relaxed stop to stop or to throw the mass.

    They keep the mass no faster than what the drive alone can brake, at most.
    """
    c, drive = shared.constants, shared.drives[axis.name]
    low, high = c.stroke(axis.name)
    pace, place = now.pace(axis.name) ** 2 / 2.0, now.place(axis.name)
    strength = drive.force / c.mass + c.gravity
    if axis.name == "tangential":
        # the wheel's acceleration pushes along this axis, at most about as gravity does
        strength = strength + c.gravity
    spinning = now.speed**2
    outward = strength + casadi.fmax(-high, 0.0) * spinning
    inward = strength + (
        place * spinning if axis.name == "radial" else casadi.fmax(low, 0.0) * spinning
    )
    length = shared.scales.slide(axis.name).length
    return [(pace / outward + place - high) / length, (pace / inward + low - place) / length]


def _relaxed_rows(axis: AxisForm, shared: Shared, needed: Any, now: Instant) -> list[Any]:
    """Rows of relaxed complementarity.

    What the needed force exceeds the limit by must be borne by an end stop; excess times gap stays
    below a small share of limit times stroke.
    """
    low, high = shared.constants.stroke(axis.name)
    share = needed / shared.drives[axis.name].force
    length, place = shared.scales.slide(axis.name).length, now.place(axis.name)
    inward = (-share - 1.0) * (high - place) / length
    outward = (share - 1.0) * (place - low) / length
    return [inward - shared.relaxation, outward - shared.relaxation]
