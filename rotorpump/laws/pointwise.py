# SPDX-License-Identifier: BSD-3-Clause
"""The pointwise rule: which position along an axis is best at this instant."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache

from rotorpump.laws.moves import full_swing, positions_of, shift_of
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import total_inertia
from rotorpump.physics.state import Slides


@dataclass(frozen=True)
class Urge:
    """How much better one position is than another, in numbers of order one.

    Parameters
    ----------
    sine, cosine : float
        Its disadvantage in the torque of the weight, while the wheel turns in the positive
        direction: the parts that go with sin φ and cos φ.
    dry : float, optional
        Its disadvantage in the friction that does not grow with speed.
    drag : float, optional
        Its advantage in quadratic friction, per momentum squared [1/(kg m2/s)2].
    """

    sine: float
    cosine: float
    dry: float = 0.0
    drag: float = 0.0

    def __call__(self, angle: float, momentum: float, direction: int) -> float:
        """Positive where the position is better.

        Parameters
        ----------
        angle, momentum : float
            Wheel angle [rad] and angular momentum [kg m2/s] with the mass where it is.
        direction : int
            Direction of turning, 1 or -1.
        """
        weight = self.sine * math.sin(angle) + self.cosine * math.cos(angle)
        return -direction * weight - self.dry + self.drag * momentum * momentum


Rule = Callable[[str, Slides], Mapping[float, Urge]]
"""(axis, place of the mass) to the positions along that axis at which the mass may rest instead,
each with the urge to be there rather than here."""


def held_torque(constants: Constants) -> float:
    """Torque against the motion that does not depend on it: Coulomb friction and load [N m]."""
    return float(constants.coulomb + constants.load_torque)


def pointwise_rule(constants: Constants) -> Rule:
    """Rule for the position that gains the most angular momentum per angle turned.

    Notes
    -----
    With s the sign of the wheel speed, W(φ) the torque of the weight and c that of Coulomb
    friction and load,
    d(H²/2)/dφ = s [I (s W - c) - b |H| - k H²/I].
    The bracket is compared between positions, each at the wheel angle that the jump to it would
    leave (`shift_of`); the viscous part is the same everywhere. The angle less that shift, and H,
    stay in any move along one axis, and the bracket depends on nothing but them and the position.
    So along one axis the pointwise choice is also the best over a whole half swing or turn: no
    other choice of these positions has more |H| at any angle of it. Only the ends of the stroke and
    the point closest to the axle are compared; between them, positions may be slightly better for
    a stretch.

    A balanced wheel without Coulomb and quadratic friction has the mass outside while it falls,
    inside while it rises; sideways, on the side that falls, and where the wheel rises steeply, next
    to the axle.
    """

    @lru_cache(maxsize=64)
    def rule(axis: str, slides: Slides) -> Mapping[float, Urge]:
        here = getattr(slides, axis)
        others = (end for end in positions_of(constants, axis) if end != here)
        return {end: advantage(constants, axis, slides, end, here) for end in others}

    return rule


def landmark_rule(constants: Constants) -> Rule:
    """Rule between the two ends of each stroke that looks at the weight alone, whatever friction.

    A balanced wheel moves its mass on the lowest and the turning points.
    """

    @lru_cache(maxsize=64)
    def rule(axis: str, slides: Slides) -> Mapping[float, Urge]:
        here = getattr(slides, axis)
        urges = {}
        for end in constants.stroke(axis):
            if end != here:
                urge = advantage(constants, axis, slides, end, here)
                urges[end] = Urge(urge.sine, urge.cosine)
        return urges

    return rule


def advantage(constants: Constants, axis: str, slides: Slides, there: float, here: float) -> Urge:
    """Compare two positions along an axis, the other axis held.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    axis : str
        The axis.
    slides : Slides
        Place of the mass at which the wheel angle is read.
    there, here : float
        The positions that are compared [m].
    """
    far, far_sine, far_cosine = _pull_at(constants, axis, slides, there)
    near, near_sine, near_cosine = _pull_at(constants, axis, slides, here)
    scale = full_swing(constants) ** 2
    return Urge(
        (far * far_sine - near * near_sine) / scale,
        (far * far_cosine - near * near_cosine) / scale,
        held_torque(constants) * (far - near) / scale,
        constants.quadratic * (1.0 / near - 1.0 / far) / scale,
    )


def _pull_at(
    constants: Constants, axis: str, slides: Slides, end: float
) -> tuple[float, float, float]:
    """Inertia after a jump to ``end``, and the weight's torque against the motion.

    The torque comes as its parts with the sine and the cosine of the angle before the jump.
    """
    there = slides._replace(**{axis: end})
    along = constants.mass * there.radial + constants.unbalance_radial
    across = constants.mass * there.tangential + constants.unbalance_tangential
    shift = shift_of(constants, slides, axis, end)
    sine = along * math.cos(shift) - across * math.sin(shift)
    cosine = along * math.sin(shift) + across * math.cos(shift)
    inertia = float(total_inertia(constants, there))
    return inertia, constants.gravity * sine, constants.gravity * cosine
