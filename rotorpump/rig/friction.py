# SPDX-License-Identifier: BSD-3-Clause
"""Friction of the axle."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.quantities import non_negative


@dataclass(frozen=True)
class AxleFriction:
    """Friction torque that opposes the wheel, -sign(ω) c - b ω - k |ω| ω.

    Parameters
    ----------
    viscous : float
        Viscous coefficient b [N m s]. There is no default: friction is the user's decision.
    coulomb : float, optional
        Coulomb torque c [N m].
    quadratic : float, optional
        Quadratic coefficient k [N m s2].

    Raises
    ------
    InputError
        If a coefficient is negative or not finite.
    """

    viscous: float
    coulomb: float = 0.0
    quadratic: float = 0.0

    def __post_init__(self) -> None:
        for name in ("viscous", "coulomb", "quadratic"):
            object.__setattr__(self, name, non_negative(name, getattr(self, name)))
