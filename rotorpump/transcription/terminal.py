# SPDX-License-Identifier: BSD-3-Clause
"""Small kernels beside the intervals: interval lengths, objective and goal at the end."""

from __future__ import annotations

from functools import cache
from typing import Any

import casadi

from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import wheel_speed
from rotorpump.transcription.blocks import Kernel
from rotorpump.transcription.form import Form
from rotorpump.transcription.path import INSTANT, SPEED_LIMITED
from rotorpump.transcription.shared import SHARED, Shared


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
def margin_kernel(form: Form, axes: tuple[int, ...]) -> Kernel:
    """Positions at the end, a little ahead of the mass; variables: the last node.

    A motion may end while the mass moves, but not in the moment in which it runs into a stop.
    """
    z, own = casadi.SX.sym("z", len(form.node)), casadi.SX.sym("q", 0)
    ahead = [
        z[form.index(form.axes[k].name)] + MARGIN * z[form.index(f"{form.axes[k].name}_speed")]
        for k in axes
    ]
    return Kernel.build(z, own, casadi.SX.sym("p", SHARED), casadi.vertcat(*ahead))


@cache
def rating_kernel(form: Form, sums: tuple[str, ...]) -> Kernel:
    """Squared forces summed up to the end, less what their ratings allow by then.

    Variables: the last node; own parameters: for each sum, its growth per scaled time at the
    rating.
    """
    z, own = casadi.SX.sym("z", len(form.node)), casadi.SX.sym("q", len(sums))
    time = z[form.index("time")]
    rows = [z[form.index(name)] - own[k] * time for k, name in enumerate(sums)]
    return Kernel.build(z, own, casadi.SX.sym("p", SHARED), casadi.vertcat(*rows))


def end_value(name: str, form: Form, node: Any, controls: Any, shared: Shared) -> Any:
    """Scaled value of an end quantity: a variable of the node, "energy" or "speed".

    "speed" and "momentum" are squared, which makes the direction of rotation irrelevant.
    """
    if name == "momentum":
        return node[form.index(name)] ** 2
    if name not in ("energy", "speed"):
        return node[form.index(name)]
    places, speeds = {}, {}
    for k, axis in enumerate(form.axes):
        scales = shared.scales.slide(axis.name)
        position = controls[k] if axis.rung == INSTANT else node[form.index(axis.name)]
        places[axis.name] = scales.value(0, position)
        if axis.rung == SPEED_LIMITED:
            speeds[axis.name] = scales.value(1, controls[k])
        elif axis.rung > SPEED_LIMITED:
            speeds[axis.name] = scales.value(1, node[form.index(f"{axis.name}_speed")])
    c, s = shared.constants, shared.scales
    slides = shared.slides(places, speeds)
    momentum = node[form.index("momentum")] * s.momentum
    if name == "energy":
        angle = node[form.index("angle")]
        return energy_above_rest(casadi, c, angle, momentum, slides) / s.energy
    return (wheel_speed(c, momentum, slides) * s.time) ** 2


@cache
def end_kernel(name: str, form: Form) -> Kernel:
    """Weight times an end quantity; variables: the last node and the last control of each slide.

    A slide without controls of its own has a variable of the node in that place, unread.
    """
    width = len(form.node)
    z, own = casadi.SX.sym("z", width + len(form.axes)), casadi.SX.sym("q", 1)
    symbols = casadi.SX.sym("p", SHARED)
    value = end_value(name, form, z[:width], z[width:], Shared.of(form, symbols))
    return Kernel.build(z, own, symbols, own * value)
