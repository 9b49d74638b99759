# SPDX-License-Identifier: BSD-3-Clause
"""Friction of the axle."""

from __future__ import annotations

from dataclasses import dataclass

from rotorpump.errors import InputError
from rotorpump.quantities import non_negative


@dataclass(frozen=True)
class AxleFriction:
    """Friction torque that opposes the wheel, -sign(ω) (c + μ a |R|) - b ω - k |ω| ω.

    A standing wheel sticks while the torque on it is at most c + μ a |R|.

    Parameters
    ----------
    viscous : float
        Viscous coefficient b [N m s]. There is no default: friction is the user's decision.
    coulomb : float, optional
        Coulomb torque c [N m].
    quadratic : float, optional
        Quadratic coefficient k [N m s2].
    load : float, optional
        Coefficient μ of the friction that grows with the axle's load |R| [1].
    journal_radius : float, optional
        Radius a at which that friction acts [m]; half the bore of a rolling bearing.

    Raises
    ------
    InputError
        If a coefficient is negative or not finite, or ``load`` is given without a radius.
    """

    viscous: float
    coulomb: float = 0.0
    quadratic: float = 0.0
    load: float = 0.0
    journal_radius: float = 0.0

    def __post_init__(self) -> None:
        for name in ("viscous", "coulomb", "quadratic", "load", "journal_radius"):
            object.__setattr__(self, name, non_negative(name, getattr(self, name)))
        if self.load > 0.0 and self.journal_radius == 0.0:
            rule = "must be greater than 0 where load is given"
            raise InputError("journal_radius", rule, self.journal_radius)

    @property
    def load_arm(self) -> float:
        """Friction torque per load on the axle, μ a [m]."""
        return self.load * self.journal_radius

    @property
    def grows_with_speed(self) -> bool:
        """Whether any part of the friction grows with the wheel's speed by its own law."""
        return self.viscous > 0.0 or self.quadratic > 0.0
