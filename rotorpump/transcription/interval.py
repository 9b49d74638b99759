# SPDX-License-Identifier: BSD-3-Clause
"""Collocation of one interval: its variables and its rows.

Time form: time is the independent variable, angle and momentum are collocated.
Angle form: the angle is, momentum and time are collocated (dt/dφ = 1/ω).
In both the slides' motion is an exact polynomial of the elapsed time (`SlidePath`), so that only
the wheel's equations are collocated. Every variable is scaled to order one.
"""

from __future__ import annotations

from functools import cache
from typing import Any

import casadi

from rotorpump.physics.equations import motion_along, wheel_speed
from rotorpump.transcription.blocks import Kernel
from rotorpump.transcription.form import TIME, AxisForm, Form
from rotorpump.transcription.instant import Instant
from rotorpump.transcription.limits import Rest, limit_rows
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.path import INSTANT, RATE_LIMITED, SlidePath
from rotorpump.transcription.shared import SHARED, Shared
from rotorpump.transcription.sums import sum_rows


@cache
def interval_kernel(form: Form) -> Kernel:
    """Rows of one interval with their derivatives.

    The variables are those of the first node, of the second node, and the inner ones: the two
    collocated quantities at each inner point, the control of each slide at both ends, and the
    positive parts of the drives' powers. The own parameters are the direction of rotation and, for
    each slide, the stop on which it rests and the direction in which it moves.
    """
    width = len(form.node)
    z = casadi.SX.sym("z", 2 * width + form.inner)
    own = casadi.SX.sym("q", form.own)
    symbols = casadi.SX.sym("p", SHARED)
    shared = Shared.of(form, symbols)
    variables = casadi.vertsplit(z)
    left = dict(zip(form.node, variables[:width], strict=True))
    right = dict(zip(form.node, variables[width : 2 * width], strict=True))
    inner = variables[2 * width :]
    parameters = casadi.vertsplit(own)

    duration = (right["time"] - left["time"]) * shared.scales.time
    paths = {
        axis.name: _path(form, shared, axis, left, right, inner[form.control(k)], duration)
        for k, axis in enumerate(form.axes)
    }
    points = _Points(form, left, right, inner, duration, shared)
    instants = [
        _instant(form, shared, points, j, paths, parameters[0]) for j in range(form.degree + 1)
    ]
    groups: dict[str, list[Any]] = {
        "wheel": [row for j in range(1, form.degree + 1) for row in points.defects(j, instants[j])],
        "turning": [parameters[0] * now.speed * shared.scales.time for now in instants],
    }
    groups["turning"] = groups["turning"][-form.rows["turning"] or None :]
    used = {}
    for k, axis in enumerate(form.axes):
        path, rest = paths[axis.name], Rest(*parameters[1 + 2 * k : 3 + 2 * k])
        ends = (left, right)
        limits, used[axis.name] = limit_rows(form, axis, shared, path, instants, ends, rest)
        groups |= {f"{axis.name} {name}": group for name, group in limits.items()}
        groups[f"{axis.name} path"] = _joins(axis, shared, path, right)
    slacks = inner[form.inner - form.slacks :]
    groups |= sum_rows(form, shared, instants, used, slacks, (left, right))
    rows = [row for name, count in form.rows.items() if count for row in groups[name]]
    return Kernel.build(z, own, symbols, casadi.vertcat(*rows))


def _path(
    form: Form,
    shared: Shared,
    axis: AxisForm,
    left: dict[str, Any],
    right: dict[str, Any],
    controls: list[Any],
    duration: Any,
) -> SlidePath:
    """Motion of one slide from its scaled variables."""
    scales = shared.scales.slide(axis.name)
    rated = axis.rung == RATE_LIMITED
    continuous = axis.node[:2] if rated else axis.node
    start = tuple(scales.value(k, left[name]) for k, name in enumerate(continuous))
    if rated:
        controls = [end[f"{axis.name}_acceleration"] for end in (left, right)]
    first, last = (scales.value(len(continuous), control) for control in controls)
    return SlidePath(start, first, last, duration)


def _joins(axis: AxisForm, shared: Shared, path: SlidePath, right: dict[str, Any]) -> list[Any]:
    """Rows that make the next node continue the slide's motion."""
    scales = shared.scales.slide(axis.name)
    if axis.rung == INSTANT:
        # a mass that may jump stays where it is in between, so that no speed is hidden there
        return [(path.last - path.first) / scales.length]
    return [
        (scales.value(k, right[name]) - end) / scales.of_order(k)
        for k, (name, end) in enumerate(zip(axis.node, path.end(), strict=False))
    ]


def _instant(
    form: Form,
    shared: Shared,
    points: _Points,
    j: int,
    paths: dict[str, SlidePath],
    direction: Any,
) -> Instant:
    """Everything about collocation point j."""
    elapsed = points.elapsed[j]
    slides = shared.slides(
        {name: path.position(elapsed) for name, path in paths.items()},
        {name: path.speed(elapsed) for name, path in paths.items()},
    )
    radial, tangential = (
        paths[name].acceleration(elapsed) if name in paths else 0.0
        for name in ("radial", "tangential")
    )
    speed = wheel_speed(shared.constants, points.momentum[j] * shared.scales.momentum, slides)
    rate, motion = motion_along(
        casadi, shared.constants, points.angle[j], speed, slides, radial, tangential, direction
    )
    passing = points.passing(j, speed)
    return Instant(points.angle[j], speed, rate, slides, motion, elapsed, passing)


class _Points:
    """Angle, momentum and elapsed time at the start and the collocation points of an interval."""

    def __init__(
        self,
        form: Form,
        left: dict[str, Any],
        right: dict[str, Any],
        inner: list[Any],
        duration: Any,
        shared: Shared,
    ) -> None:
        nodes = radau_nodes(form.degree)
        self._form, self._scales, self._slopes = form, shared.scales, nodes.slopes
        collocated, other = ("angle", "time") if form.independent == TIME else ("time", "angle")
        last = form.collocated
        self._collocated = [left[collocated], *inner[0:last:2], right[collocated]]
        self._span = right[other] - left[other]
        self.momentum = [left["momentum"], *inner[1:last:2], right["momentum"]]
        if form.independent == TIME:
            self.angle = self._collocated
            self.elapsed = [duration * float(point) for point in nodes.points]
        else:
            self.angle = [left["angle"] + self._span * float(point) for point in nodes.points]
            self.elapsed = [(time - left["time"]) * shared.scales.time for time in self._collocated]

    def passing(self, j: int, speed: Any) -> Any:
        """Time that passes per unit of the interval at point j [s]."""
        if self._form.independent == TIME:
            return self._span * self._scales.time
        return self._span / speed

    def defects(self, j: int, now: Instant) -> list[Any]:
        """Rows that make the polynomials follow φ' = ω and H' = Ḣ at point j."""
        slopes = casadi.DM(self._slopes[j - 1])
        slope = casadi.dot(slopes, casadi.vertcat(*self._collocated))
        rise = casadi.dot(slopes, casadi.vertcat(*self.momentum))
        if self._form.independent == TIME:
            turned, passed = slope, self._span * self._scales.time
        else:
            turned, passed = self._span, slope * self._scales.time
        return [turned - passed * now.speed, rise - passed * now.rate / self._scales.momentum]
