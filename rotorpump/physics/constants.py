# SPDX-License-Identifier: BSD-3-Clause
"""The numbers of a rig that enter its equations of motion."""

from __future__ import annotations

from typing import Any, NamedTuple

from rotorpump.rig.rig import Rig


class Constants(NamedTuple):
    """Numbers (or CasADi symbols) of a rig, in the order in which programs take them.

    Parameters
    ----------
    wheel_inertia : float
        Inertia about the axle without the moving mass [kg m2].
    mass : float
        The moving mass [kg].
    gravity : float
        Gravity in the plane of the wheel [m/s2].
    viscous, coulomb, quadratic : float
        Axle friction [N m s, N m, N m s2].
    inner, outer : float
        Ends of the radial stroke [m].
    """

    wheel_inertia: Any
    mass: Any
    gravity: Any
    viscous: Any
    coulomb: Any
    quadratic: Any
    inner: Any
    outer: Any

    @classmethod
    def of(cls, rig: Rig) -> Constants:
        """Collect the numbers of ``rig``."""
        inner, outer = rig.radial.stroke
        friction = rig.friction
        return cls(
            rig.wheel.inertia,
            rig.mass,
            rig.gravity,
            friction.viscous,
            friction.coulomb,
            friction.quadratic,
            inner,
            outer,
        )
