# SPDX-License-Identifier: BSD-3-Clause
"""Axle friction from the type and the bore of its bearings.

Handbook moment of a rolling bearing: M = ½ μ P d, with the load P on the bearing and its bore d.
It holds for good lubrication, a load of about a tenth of the dynamic rating and ordinary speeds
(conditions from memory). The coefficients are typical values; starting may take up to twice as
much, and seals and grease add their own drag, which belongs into the viscous and Coulomb terms.
"""

from __future__ import annotations

from rotorpump.quantities import choice, positive
from rotorpump.rig.friction import AxleFriction

BEARINGS: dict[str, float] = {
    "deep groove ball": 0.0015,
    "angular contact ball, single row": 0.0020,
    "angular contact ball, double row": 0.0024,
    "four-point contact ball": 0.0024,
    "self-aligning ball": 0.0010,
    "cylindrical roller, caged": 0.0011,
    "cylindrical roller, full complement": 0.0020,
    "needle roller, caged": 0.0020,
    "taper roller": 0.0018,
    "spherical roller": 0.0018,
    "toroidal roller": 0.0016,
    "thrust ball": 0.0013,
    "cylindrical roller thrust": 0.0050,
    "needle roller thrust": 0.0050,
}
"""Typical coefficient μ of open rolling bearings by type [1].

Source: SKF, Rolling Bearings (catalogue), page 100.
"""


def bearing_friction(
    kind: str,
    bore: float,
    *,
    viscous: float = 0.0,
    coulomb: float = 0.0,
    quadratic: float = 0.0,
) -> AxleFriction:
    """Return the friction of an axle in rolling bearings.

    Parameters
    ----------
    kind : str
        Type of the bearings, a key of `BEARINGS`.
    bore : float
        Bore of the bearings, d [m].
    viscous, coulomb, quadratic : float, optional
        The other terms of the friction [N m s, N m, N m s2].

    Returns
    -------
    AxleFriction
        With ``load`` μ and ``journal_radius`` d/2, so that the torque per load on the axle is μ d/2
        however the load is shared between the bearings.

    Raises
    ------
    InputError
        If the type is unknown, or a value is out of its range.
    """
    coefficient = BEARINGS[choice("kind", kind, tuple(BEARINGS))]
    return AxleFriction(
        viscous=viscous,
        coulomb=coulomb,
        quadratic=quadratic,
        load=coefficient,
        journal_radius=positive("bore", bore) / 2.0,
    )
