# SPDX-License-Identifier: BSD-3-Clause
"""What the ideal law leaves out of a rig, and the words that say so."""

from __future__ import annotations

import math
from dataclasses import replace

from rotorpump.measures import Measure
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig

COSTLY = ("heat", "work+heat")
"""Objectives that have no finite value for a mass that moves at once."""

SUPERPOSITION = (
    "no best instantaneous law exists for two axes at once, since the mass could circle the axle"
    " without end: this is the superposition of the two laws of one axis, the radial move first"
)


def idealized(rig: Rig) -> Rig:
    """Return the rig on which the law acts: friction by load is that of the resting rig's weight.

    Notes
    -----
    An instantaneous move presses on the axle with an infinite impulse, so under the full law of
    friction it would have no finite loss. In its place stands μ a (M + m) g, as Coulomb friction.
    """
    friction = rig.friction
    plain = AxleFriction(
        friction.viscous,
        friction.coulomb + friction.load_arm * resting_load(rig),
        friction.quadratic,
    )
    return replace(rig, friction=plain) if friction.load_arm > 0.0 else rig


def resting_load(rig: Rig) -> float:
    """Weight that the axle carries at rest [N]."""
    return (rig.wheel.mass + rig.mass) * rig.gravity


def remarks_on(rig: Rig, measure: Measure) -> list[str]:
    """Words on what the ideal law leaves out, none for a rig and measure that it does full justice.

    Parameters
    ----------
    rig : Rig
        The rig as it is.
    measure : Measure
        The objective.
    """
    remarks = []
    if len(rig.driven) == 2:
        remarks.append(SUPERPOSITION)
    if rig.friction.load_arm > 0.0:
        held = rig.friction.load_arm * resting_load(rig)
        remarks.append(
            "an instantaneous move has no finite loss under friction by load: that of the static"
            f" load alone is taken, {held:.6g} N m at {resting_load(rig):.6g} N"
        )
    sideways = "tangential" in rig.driven or rig.tangential != 0.0
    if sideways and rig.friction.grows_with_speed:
        remarks.append(
            "a sideways jump turns the wheel at no finite speed: the drag in it is left out"
        )
    if measure.name in COSTLY:
        remarks.append("an instantaneous move takes an infinite force: its heat has no bound")
    return remarks


def cost_of(measure: Measure, work: float) -> float:
    """Value of a cost, given the work of the drives [J]; infinite where heat counts."""
    return math.inf if measure.name in COSTLY else work
