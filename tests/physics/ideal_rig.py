# SPDX-License-Identifier: BSD-3-Clause
"""The rig on which the ideal law is tried."""

from __future__ import annotations

import numpy as np
from scipy.integrate import trapezoid

from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel

PULL = 1.2 * 9.80665 * 0.4
"""Largest torque of the weight [N m]."""

FAR, NEAR = 0.25 + 1.2 * 0.4**2, 0.25 + 1.2 * 0.2**2


SIDEWAYS = Slide(stroke=(-0.12, 0.12))


def rig(viscous=0.05, coulomb=0.0, quadratic=0.0, **changes) -> Rig:
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0),
        "mass": 1.2,
        "radial": Slide(stroke=(0.2, 0.4)),
        "friction": AxleFriction(viscous=viscous, coulomb=coulomb, quadratic=quadratic),
    }
    return Rig(**(parts | changes))


def pumped_and_lost(run, friction) -> tuple[float, float]:
    """Energy added by the jumps, and friction's work by quadrature over the trajectory."""
    t = run.trajectory
    jump = (np.diff(t.radial) != 0.0) | (np.diff(t.tangential) != 0.0)
    pumped = float(np.diff(t.energy)[jump].sum())
    power = np.abs(t.speed) * friction.coulomb + t.speed**2 * friction.viscous
    power = power + np.abs(t.speed) ** 3 * friction.quadratic
    return pumped, float(trapezoid(power, t.time))


FRICTIONS = [(0.05, 0.0, 0.0), (0.02, 0.2, 0.0), (0.0, 0.1, 0.01), (0.0, 0.0, 0.02)]
