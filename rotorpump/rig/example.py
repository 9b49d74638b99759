# SPDX-License-Identifier: BSD-3-Clause
"""The built-in example rig: a bench wheel with a belt-driven carriage, an invention of ours."""

from __future__ import annotations

from importlib.resources import files

from rotorpump.rig.rig import Rig
from rotorpump.rig.rigfile import parse_rig
from rotorpump.tasks import Task


def example_rig() -> tuple[Rig, Task]:
    """Return the built-in example: a rig, and the task to pump it.

    Returns
    -------
    rig : Rig
        A wheel of 0.31 kg m2 with a carriage of 1.1 kg on a stroke from 0.16 m to 0.38 m.
    task : Pump
        7 s of pumping from 0.35 rad.
    """
    text = files("rotorpump.rig").joinpath("example.toml").read_text(encoding="utf-8")
    return parse_rig(text, "built-in example")
