# SPDX-License-Identifier: BSD-3-Clause
"""Parameters that all kernels of a program share: the rig's numbers, scales, drives, relaxation."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import casadi
import numpy as np
from numpy.typing import NDArray

from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES, Rig
from rotorpump.transcription.form import Form
from rotorpump.transcription.scaling import Scales, SlideScales

PRESS = 0.05
"""Share of its force with which the drive presses a resting mass onto its stop."""


class Drive(NamedTuple):
    """Numbers of one drive.

    Parameters
    ----------
    force : float
        Its force limit, or a typical force without one [N].
    press : float
        Force with which it presses a resting mass onto its stop [N].
    stall_force, no_load_speed : float
        Motor line [N, m/s].
    motor_constant : float
        Force per root of the copper loss [N/√W].
    force_rate : float
        Largest rate of the force [N/s].
    """

    force: Any
    press: Any
    stall_force: Any
    no_load_speed: Any
    motor_constant: Any
    force_rate: Any

    @classmethod
    def of(cls, rig: Rig, axis: str, scales: SlideScales) -> Drive:
        """Numbers of the drive of an axis; what it lacks is 1 and enters nowhere."""
        if axis not in rig.driven:
            return cls(*(1.0 for _ in cls._fields))
        slide = rig.slide(axis)
        rate = slide.force_rate if math.isfinite(slide.force_rate) else 1.0
        return cls(
            scales.force,
            PRESS * scales.force,
            slide.stall_force or 1.0,
            slide.no_load_speed or 1.0,
            slide.motor_constant or 1.0,
            rate,
        )


class Shared(NamedTuple):
    """Shared parameters, named."""

    constants: Constants
    scales: Scales
    drives: dict[str, Drive]
    relaxation: Any

    @classmethod
    def of(cls, form: Form, symbols: Any) -> Shared:
        """Name the entries of a symbolic vector; what the form lacks becomes a plain zero."""
        parts = casadi.vertsplit(symbols)
        edges = np.cumsum([len(Constants._fields), SCALES, len(Drive._fields)]).tolist()
        constants = Constants(*parts[: edges[0]])
        zeros = [] if form.loaded else ["load_arm"]
        zeros += [] if form.unbalanced else ["unbalance_radial", "unbalance_tangential"]
        zeros += ["tangential_low", "tangential_high"] if form.centred else []
        return cls(
            constants._replace(**dict.fromkeys(zeros, 0.0)),
            Scales.from_flat(parts[edges[0] : edges[1]]),
            {
                "radial": Drive(*parts[edges[1] : edges[2]]),
                "tangential": Drive(*parts[edges[2] : -1]),
            },
            parts[-1],
        )

    def slides(self, places: dict[str, Any], speeds: dict[str, Any]) -> Slides:
        """Place and speed of the mass; an axis that is not given is held."""
        c = self.constants
        return Slides(
            places.get("radial", c.radial_low),
            speeds.get("radial", 0.0),
            places.get("tangential", c.tangential_low),
            speeds.get("tangential", 0.0),
        )


SCALES = 3 + 2 * len(SlideScales._fields)
SHARED = len(Constants._fields) + SCALES + 2 * len(Drive._fields) + 1
"""Number of shared parameters."""


def shared_values(rig: Rig, load_torque: float, relaxation: float) -> NDArray[np.float64]:
    """Values of the shared parameters."""
    scales = Scales.of(rig)
    drives = [Drive.of(rig, axis, scales.slide(axis)) for axis in AXES]
    return np.array(
        [*Constants.of(rig, load_torque), *scales.flat, *drives[0], *drives[1], relaxation]
    )


def shared_symbols() -> Any:
    """Return a symbolic vector of shared parameters."""
    return casadi.SX.sym("p", SHARED)
