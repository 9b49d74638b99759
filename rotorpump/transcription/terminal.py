# SPDX-License-Identifier: BSD-3-Clause
"""Small kernels beside the intervals: interval lengths, objective and goal at the end."""

from __future__ import annotations

from functools import cache
from typing import Any

import casadi

from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import wheel_speed
from rotorpump.transcription.blocks import Kernel
from rotorpump.transcription.interval import SHARED, Form, split_shared
from rotorpump.transcription.path import FORCE_LIMITED, SPEED_LIMITED


@cache
def length_kernel() -> Kernel:
    """Length of an interval against its arc's: variables start, end, arc's start, arc's end.

    Two rows, length - least share x arc and length - largest share x arc; the own parameters are
    these shares.
    """
    z, own = casadi.SX.sym("z", 4), casadi.SX.sym("q", 2)
    length, arc = z[1] - z[0], z[3] - z[2]
    rows = casadi.vertcat(length - own[0] * arc, length - own[1] * arc)
    return Kernel.build(z, own, casadi.SX.sym("p", SHARED), rows)


@cache
def evenness_kernel() -> Kernel:
    """Squared departure of an interval's length from its nominal share; own: share, weight.

    It decides lengths to which the objective is indifferent; its weight is too small to be felt
    elsewhere.
    """
    z, own = casadi.SX.sym("z", 4), casadi.SX.sym("q", 2)
    departure = (z[1] - z[0]) / (own[0] * (z[3] - z[2])) - 1.0
    return Kernel.build(z, own, casadi.SX.sym("p", SHARED), own[1] * departure**2)


MARGIN = 2e-3
"""Gap to a stop, in strokes, that a mass moving at its typical speed keeps at the end."""


@cache
def margin_kernel(form: Form) -> Kernel:
    """Position at the end, a little ahead of the mass; variables: the last node.

    A motion may end while the mass moves, but not in the moment in which it runs into a stop.
    """
    z, own = casadi.SX.sym("z", form.node), casadi.SX.sym("q", 0)
    return Kernel.build(z, own, casadi.SX.sym("p", SHARED), z[3] + MARGIN * z[4])


def end_value(name: str, form: Form, node: Any, controls: Any, shared: Any) -> Any:
    """Scaled value of an end quantity: "energy", "speed", "momentum", "angle" or "time".

    "speed" and "momentum" are squared, which makes the direction of rotation irrelevant.
    """
    c, s, _, _ = split_shared(shared)
    order = form.rung
    radial = s.slide_value(0, node[3] if order else controls[1])
    slide_speed: Any = 0.0
    if order == FORCE_LIMITED:
        slide_speed = s.slide_value(1, node[4])
    elif order == SPEED_LIMITED:
        slide_speed = s.slide_value(1, controls[1])
    momentum = node[2] * s.momentum
    if name == "energy":
        return energy_above_rest(casadi, c, node[1], momentum, radial, slide_speed) / s.energy
    if name == "speed":
        return (wheel_speed(c, momentum, radial) * s.time) ** 2
    return {"momentum": node[2] ** 2, "angle": node[1], "time": node[0]}[name]


@cache
def end_kernel(name: str, form: Form) -> Kernel:
    """Weight times an end quantity; variables: the last node and the last controls."""
    z, own = casadi.SX.sym("z", form.node + 2), casadi.SX.sym("q", 1)
    shared = casadi.SX.sym("p", SHARED)
    value = end_value(name, form, z[: form.node], z[form.node :], shared)
    return Kernel.build(z, own, shared, own * value)
