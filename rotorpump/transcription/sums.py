# SPDX-License-Identifier: BSD-3-Clause
"""Integrals over the motion: work of the drives, copper loss, squared forces.

Each is a variable of every node, zero at the start, that grows over an interval by a quadrature at
the collocation points. The positive part of a drive's power is a variable p ≥ F v, p ≥ 0, which the
objective presses down: exact, without smoothing.
"""

from __future__ import annotations

from typing import Any

from rotorpump.transcription.form import SQUARE, Form
from rotorpump.transcription.instant import Instant
from rotorpump.transcription.nodes import radau_nodes
from rotorpump.transcription.scaling import Scales
from rotorpump.transcription.shared import Shared


def sum_scale(name: str, scales: Scales) -> Any:
    """Scale of an integral: an energy, or a squared force over time."""
    for axis in ("radial", "tangential"):
        if name == SQUARE.format(axis=axis):
            return scales.slide(axis).force ** 2 * scales.time
    return scales.energy


def sum_rows(
    form: Form,
    shared: Shared,
    instants: list[Instant],
    forces: dict[str, list[Any]],
    slacks: list[Any],
    ends: tuple[dict[str, Any], dict[str, Any]],
) -> dict[str, list[Any]]:
    """Rows of the integrals, and of the positive parts of power.

    Parameters
    ----------
    form : Form
        Structure.
    shared : Shared
        Shared parameters.
    instants : list of Instant
        Start and collocation points.
    forces : dict
        Force of each axis's drive at these points [N].
    slacks : list
        Positive parts of the power, scaled: axis by axis, point by point.
    ends : tuple of dict
        Scaled variables of both nodes.
    """
    weights = [float(weight) for weight in radau_nodes(form.degree).weights]
    steps = [weight * now.passing for weight, now in zip(weights, instants[1:], strict=True)]
    power = shared.scales.energy / shared.scales.time
    excess, slack_table = [], {}
    for k, axis in enumerate(form.axes):
        mine = slacks[k * form.degree : (k + 1) * form.degree]
        slack_table[axis.name] = mine
        for slack, now, force in zip(mine, instants[1:], forces[axis.name][1:], strict=False):
            excess.append(slack - force * now.pace(axis.name) / power)

    def rate(name: str, j: int) -> Any:
        if name == "work":
            return sum(mine[j] for mine in slack_table.values()) * power
        if name == "heat":
            return sum(
                (forces[axis.name][j + 1] / shared.drives[axis.name].motor_constant) ** 2
                for axis in form.axes
            )
        return forces[name.removesuffix("_square")][j + 1] ** 2

    rows = []
    for name in form.sums:
        grown = sum(step * rate(name, j) for j, step in enumerate(steps))
        rows.append(ends[1][name] - ends[0][name] - grown / sum_scale(name, shared.scales))
    return {"sums": rows, "slacks": excess}
