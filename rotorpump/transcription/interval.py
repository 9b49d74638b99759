# SPDX-License-Identifier: BSD-3-Clause
"""Collocation of one interval: its variables and its rows.

Time form: time is the independent variable, angle and momentum are collocated.
Angle form: the angle is, momentum and time are collocated (dt/dφ = 1/ω).
In both the slide's motion is an exact polynomial of the elapsed time (`SlidePath`), so that only
the wheel's equations are collocated. Every variable is scaled to order one.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import Any

import casadi

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_force, momentum_rate, wheel_speed
from rotorpump.transcription.blocks import Kernel
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.path import FORCE_LIMITED, INSTANT, SPEED_LIMITED, SlidePath
from rotorpump.transcription.scaling import Scales

TIME, ANGLE = "time", "angle"
WHEEL = 3
"""Time, angle and momentum lead every node; the slide's continuous values follow."""

SHARED = len(Constants._fields) + len(Scales._fields) + 2
"""Shared parameters of every kernel: constants, scales, force limit, relaxation."""


@dataclass(frozen=True)
class Form:
    """Structure of an interval: all that changes its functions rather than their parameters.

    Parameters
    ----------
    independent : {"time", "angle"}
        The independent variable.
    rung : int
        Rung of the radial slide's ladder.
    degree : int
        Number of Radau points.
    relaxed : bool
        Whether the end stops bear load by a relaxed complementarity everywhere, rather than only
        in intervals known to rest on a stop.
    """

    independent: str
    rung: int
    degree: int = 3
    relaxed: bool = False

    @property
    def node(self) -> int:
        """Variables of a node."""
        return WHEEL + self.rung

    @property
    def inner(self) -> int:
        """Variables inside an interval: two for each inner point, two controls."""
        return 2 * (self.degree - 1) + 2

    @property
    def rows(self) -> dict[str, int]:
        """Number of rows by group, in their order."""
        force = self.rung == FORCE_LIMITED
        return {
            "wheel": 2 * self.degree,
            "path": max(self.rung, 1),
            "stroke": self.rung,
            "arrival": 2 if self.relaxed else 0,
            "speed": 1 if force else 0,
            "force": (2 * self.degree if self.relaxed else self.degree + 1) if force else 0,
        }


def split_shared(shared: Any) -> tuple[Constants, Scales, Any, Any]:
    """Name the shared parameters: constants, scales, force limit, relaxation."""
    parts = casadi.vertsplit(shared)
    first = len(Constants._fields)
    return Constants(*parts[:first]), Scales(*parts[first:-2]), parts[-2], parts[-1]


@cache
def interval_kernel(form: Form) -> Kernel:
    """Rows of one interval with their derivatives.

    The variables are those of the first node, of the second node, and the inner ones: the two
    collocated quantities at each inner point, then the control at both ends. The own parameter is
    the direction of rotation.
    """
    z = casadi.SX.sym("z", 2 * form.node + form.inner)
    own = casadi.SX.sym("q", 1)
    shared = casadi.SX.sym("p", SHARED)
    c, s, force_limit, relaxation = split_shared(shared)
    variables = casadi.vertsplit(z)
    left, right = variables[: form.node], variables[form.node : 2 * form.node]
    inner = variables[2 * form.node :]
    path = SlidePath(
        tuple(s.slide_value(k, v) for k, v in enumerate(left[WHEEL:])),
        s.slide_value(form.rung, inner[-2]),
        s.slide_value(form.rung, inner[-1]),
        (right[0] - left[0]) * s.time,
    )
    points = _Points(form, left, right, inner, path.duration, s)

    wheel, arrival, force = [], [], []
    for j in range(form.degree + 1):
        elapsed = points.elapsed[j]
        radial = path.position(elapsed)
        speed = wheel_speed(c, points.momentum[j] * s.momentum, radial)
        if j:
            rate = momentum_rate(casadi, c, points.angle[j], speed, radial, own)
            wheel += points.defects(j, speed, rate)
        if j == form.degree and form.relaxed:
            # What the drive alone can brake: it forbids a stop to stop or to throw the mass.
            pace = path.speed(elapsed) ** 2 / 2.0
            strength = force_limit / c.mass + c.gravity
            arrival.append((pace / strength + radial - c.outer) / s.length)
            arrival.append((pace / (strength + radial * speed**2) + c.inner - radial) / s.length)
        # A jump of the force at an interval's start is the next interval's business; a relaxed
        # solve, which only has to find the pattern, does without that point.
        if form.rung == FORCE_LIMITED and (j or not form.relaxed):
            acceleration = path.acceleration(elapsed)
            contact = contact_force(casadi, c, points.angle[j], speed, radial, acceleration)
            force += _force_rows(form, contact / force_limit, radial, c, s, relaxation)
    joins = [
        (s.slide_value(k, v) - end) / s.slide(k)
        for k, (v, end) in enumerate(zip(right[WHEEL:], path.end(), strict=True))
    ]
    if form.rung == INSTANT:
        # A mass that may jump stays where it is in between, so that no speed is hidden there.
        joins = [inner[-1] - inner[-2]]
    groups = {"wheel": wheel, "path": joins, "arrival": arrival, "force": force}
    groups["stroke"], groups["speed"] = _between_nodes(form, path, right, c, s)
    rows = [row for name, count in form.rows.items() if count for row in groups[name]]
    return Kernel.build(z, own, shared, casadi.vertcat(*rows))


class _Points:
    """Angle, momentum and elapsed time at the start and the collocation points of an interval."""

    def __init__(
        self, form: Form, left: Any, right: Any, inner: Any, duration: Any, scales: Scales
    ) -> None:
        nodes = radau_nodes(form.degree)
        self._form, self._scales, self._slopes = form, scales, nodes.slopes
        which = 1 if form.independent == TIME else 0
        last = 2 * (form.degree - 1)
        self._collocated = [left[which], *inner[0:last:2], right[which]]
        self._span = right[1 - which] - left[1 - which]
        self.momentum = [left[2], *inner[1:last:2], right[2]]
        if form.independent == TIME:
            self.angle = self._collocated
            self.elapsed = [duration * float(point) for point in nodes.points]
        else:
            self.angle = [left[1] + self._span * float(point) for point in nodes.points]
            self.elapsed = [(time - left[0]) * scales.time for time in self._collocated]

    def defects(self, j: int, speed: Any, rate: Any) -> list[Any]:
        """Rows that make the polynomials follow φ' = ω and H' = Ḣ at point j."""
        slopes = casadi.DM(self._slopes[j - 1])
        slope = casadi.dot(slopes, casadi.vertcat(*self._collocated))
        rise = casadi.dot(slopes, casadi.vertcat(*self.momentum))
        if self._form.independent == TIME:
            turned, passed = slope, self._span * self._scales.time
        else:
            turned, passed = self._span, slope * self._scales.time
        return [turned - passed * speed, rise - passed * rate / self._scales.momentum]


def _between_nodes(
    form: Form, path: SlidePath, right: Any, c: Constants, s: Scales
) -> tuple[list[Any], list[Any]]:
    """Rows that hold stroke and speed limit everywhere within the interval.

    Position and speed are polynomials; both stay within limits that their Bernstein coefficients
    stay within. The end values are bounded as variables, the coefficients in between here.
    """
    if form.rung == FORCE_LIMITED:
        first = path.start[0] + path.duration * path.start[1] / 3.0
        last = (
            s.slide_value(0, right[WHEEL])
            - path.duration * s.slide_value(1, right[WHEEL + 1]) / 3.0
        )
        middle = path.start[1] + 0.5 * path.duration * path.first
        stroke = [(first - c.inner) / s.length, (last - c.inner) / s.length]
        return stroke, [middle / s.slide(SPEED_LIMITED)]
    if form.rung == SPEED_LIMITED:
        middle = path.start[0] + 0.5 * path.duration * path.first
        return [(middle - c.inner) / s.length], []
    return [], []


def _force_rows(
    form: Form, contact: Any, radial: Any, c: Constants, s: Scales, relaxation: Any
) -> list[Any]:
    """Rows that hold the drive within its limit; ``contact`` is in units of that limit.

    What the contact force exceeds the limit by must be borne by an end stop; relaxed
    complementarity keeps excess times gap below a small share of limit times stroke.
    """
    if not form.relaxed:
        return [contact]
    inward = (-contact - 1.0) * (c.outer - radial) / s.length
    outward = (contact - 1.0) * (radial - c.inner) / s.length
    return [inward - relaxation, outward - relaxation]
