# SPDX-License-Identifier: BSD-3-Clause
"""The pointwise rule: which end of the stroke is best at this instant."""

from __future__ import annotations

import math
from collections.abc import Callable

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import total_inertia

Preference = Callable[[float, float, int], float]
"""(angle [rad], momentum [kg m2/s], direction of turning) to a number of order one: positive where
the law wants the mass outside, negative where it wants it inside."""


def pointwise_preference(constants: Constants) -> Preference:
    """Preference for the stroke end that gains the most angular momentum per angle turned.

    Notes
    -----
    With s the sign of the wheel speed,
    d(H²/2)/dφ = s [I(ρ) (-s m g ρ sin φ - c) - b |H| - k H²/I(ρ)].
    The bracket is compared between the two ends of the stroke, in units of m g (I₁ρ₁ - I₂ρ₂) (1
    outside, 2 inside); the viscous part is the same at both. Since the bracket depends on nothing
    but φ, ρ and H, the pointwise choice is also the best over a whole half swing or turn: no other
    choice of ends has more |H| at any angle of it. Only the two ends are compared; under quadratic
    or Coulomb friction an interior position may be slightly better for a brief stretch.

    Without Coulomb and quadratic friction: outside while falling, inside while rising.
    """
    outside = total_inertia(constants, constants.outer)
    inside = total_inertia(constants, constants.inner)
    weight: float = constants.mass * constants.gravity
    scale = weight * (outside * constants.outer - inside * constants.inner)
    dry: float = constants.coulomb * (outside - inside) / scale
    drag: float = constants.quadratic * (1.0 / inside - 1.0 / outside) / scale

    def preference(angle: float, momentum: float, direction: int) -> float:
        return -direction * math.sin(angle) - dry + drag * momentum * momentum

    return preference


def landmark_preference(angle: float, momentum: float, direction: int) -> float:
    """Preference for the mass outside while it falls and inside while it rises, whatever friction.

    Moves fall on the lowest and the turning points alone.
    """
    return -direction * math.sin(angle)
