# SPDX-License-Identifier: BSD-3-Clause
"""The numbers of a rig that enter its equations of motion."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

from rotorpump.rig.rig import Rig


class Constants(NamedTuple):
    """Numbers (or CasADi symbols) of a rig, in the order in which programs take them.

    A plain 0.0 in place of a symbol leaves its terms out of symbolic equations.

    Parameters
    ----------
    wheel_inertia : float
        Inertia about the axle without the moving mass, J [kg m2].
    mass : float
        The moving mass, m [kg].
    gravity : float
        Gravity in the plane of the wheel, g [m/s2].
    viscous, coulomb, quadratic : float
        Axle friction b, c, k [N m s, N m, N m s2].
    load_arm : float
        Axle friction per load on the axle, μ a [m].
    wheel_mass : float
        Mass that the axle carries without the moving mass, M [kg].
    unbalance_radial, unbalance_tangential : float
        Unbalance of the wheel along its axes, u_ρ and u_τ [kg m].
    load_torque : float
        Torque that a load takes from the turning wheel [N m].
    lowest_moment : float
        Static moment with which the rig hangs lowest [kg m]; it sets the zero of energy.
    radial_low, radial_high, tangential_low, tangential_high : float
        Ends of the strokes [m]; equal where a coordinate is held.
    radial_rubbing, tangential_rubbing : float
        Coulomb friction along the rails [N].
    """

    wheel_inertia: Any
    mass: Any
    gravity: Any
    viscous: Any
    coulomb: Any
    quadratic: Any
    load_arm: Any
    wheel_mass: Any
    unbalance_radial: Any
    unbalance_tangential: Any
    load_torque: Any
    lowest_moment: Any
    radial_low: Any
    radial_high: Any
    tangential_low: Any
    tangential_high: Any
    radial_rubbing: Any
    tangential_rubbing: Any

    @classmethod
    def of(cls, rig: Rig, load_torque: float = 0.0) -> Constants:
        """Collect the numbers of ``rig``, which turns a load of ``load_torque`` [N m]."""
        friction, wheel = rig.friction, rig.wheel
        rubbing = {axis: rig.slide(axis).rubbing for axis in rig.driven}
        return cls(
            wheel_inertia=wheel.inertia,
            mass=rig.mass,
            gravity=rig.gravity,
            viscous=friction.viscous,
            coulomb=friction.coulomb,
            quadratic=friction.quadratic,
            load_arm=friction.load_arm,
            wheel_mass=wheel.mass,
            unbalance_radial=wheel.unbalance * math.cos(wheel.unbalance_angle),
            unbalance_tangential=wheel.unbalance * math.sin(wheel.unbalance_angle),
            load_torque=load_torque,
            lowest_moment=math.hypot(*rig.static_moment(*rig.lowest_place)),
            radial_low=rig.stroke("radial")[0],
            radial_high=rig.stroke("radial")[1],
            tangential_low=rig.stroke("tangential")[0],
            tangential_high=rig.stroke("tangential")[1],
            radial_rubbing=rubbing.get("radial", 0.0),
            tangential_rubbing=rubbing.get("tangential", 0.0),
        )

    def stroke(self, axis: str) -> tuple[Any, Any]:
        """Low and high end of a stroke [m]; they are equal where the axis is held."""
        if axis == "radial":
            return self.radial_low, self.radial_high
        return self.tangential_low, self.tangential_high


def absent(value: Any) -> bool:
    """Whether a constant is a plain zero, so that its terms need not be written."""
    return isinstance(value, (int, float)) and value == 0
