# SPDX-License-Identifier: BSD-3-Clause
"""What the drives control: forces on the mass, or its motion."""

from __future__ import annotations

from rotorpump.rig.rig import Rig

EFFORTS = frozenset({"work", "heat", "work+heat"})
"""Objectives made of the drives' forces."""


def force_driven(rig: Rig, objective: str) -> bool:
    """Whether forces move the mass, rather than its speeds or places being prescribed.

    They do where something limits a drive's force, where rubbing takes a part of it, and where the
    objective counts it; otherwise forces are unlimited and cost nothing, and may hold impulses. It
    is one or the other for both slides: an impulse along one axis would throw the mass along the
    other.

    Parameters
    ----------
    rig : Rig
        The rig.
    objective : str
        Name of the objective.
    """
    counted = objective in EFFORTS
    return counted or any(slide.forceful or slide.rubbing > 0.0 for slide in rig.slides)
