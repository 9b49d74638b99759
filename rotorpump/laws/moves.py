# SPDX-License-Identifier: BSD-3-Clause
"""Instantaneous moves of the mass along its slides."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import lru_cache
from itertools import product
from typing import Any

from rotorpump.physics.constants import Constants, absent
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import total_inertia, wheel_speed
from rotorpump.physics.loads import static_moment
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES


@dataclass(frozen=True)
class Instant:
    """State of the rig at one instant, the mass at rest on its slides.

    Parameters
    ----------
    time, angle, momentum : float
        Time [s], wheel angle [rad], angular momentum [kg m2/s].
    slides : Slides
        Place of the mass [m], at rest.
    direction : int, optional
        Direction in which the wheel goes on, 0 if it stands or is not known yet.
    """

    time: float
    angle: float
    momentum: float
    slides: Slides
    direction: int = 0

    def energy(self, constants: Constants) -> float:
        """Energy above rest [J]."""
        return float(energy_above_rest(math, constants, self.angle, self.momentum, self.slides))

    def pace(self, constants: Constants) -> float:
        """Magnitude of the wheel speed [rad/s]."""
        return abs(float(wheel_speed(constants, self.momentum, self.slides)))


@lru_cache(maxsize=16)
def moved_axes(constants: Constants) -> tuple[str, ...]:
    """Axes along which the mass is driven, in the order in which it moves along them."""
    return tuple(axis for axis in AXES if len(set(constants.stroke(axis))) == 2)


@lru_cache(maxsize=32)
def positions_of(constants: Constants, axis: str) -> tuple[float, ...]:
    """Positions along an axis at which the law lets the mass rest, from low to high [m].

    The ends of the stroke, and the point between them where the mass is closest to the axle.
    """
    low, high = constants.stroke(axis)
    return tuple(sorted({low, high} | ({0.0} if low < 0.0 < high else set())))


@lru_cache(maxsize=16)
def corners_of(constants: Constants) -> tuple[Slides, ...]:
    """Places at which the law lets the mass rest."""
    ranges = (positions_of(constants, axis) for axis in AXES)
    return tuple(Slides(radial, 0.0, tangential) for radial, tangential in product(*ranges))


def shift_of(constants: Constants, slides: Slides, axis: str, end: float) -> float:
    """Angle by which the wheel turns while the mass jumps along one axis to ``end`` [rad].

    Notes
    -----
    At a given momentum a jump takes no time, so only the part of the wheel's turning that the mass
    itself causes is left, I dφ = -m (ρ dτ - τ dρ). Along the tangential axis it makes
    -ρ q [atan(q τ)] with q² = m/(J + m ρ²), along the radial axis τ q [atan(q ρ)] with
    q² = m/(J + m τ²).
    """
    if axis == "radial":
        begin, across = slides.radial, slides.tangential
    else:
        begin, across = slides.tangential, -slides.radial
    return float(turned_by(math, constants, across, begin, end))


def turned_by(xp: Any, constants: Constants, across: Any, begin: Any, end: Any) -> Any:
    """Angle by which the wheel turns at no momentum while the mass moves along a straight line.

    Parameters
    ----------
    xp : module
        Maths namespace.
    constants : Constants
        The rig's numbers.
    across : float or symbol
        Distance of the line from the axle, which lies on its left if positive [m].
    begin, end : float or symbol
        Positions along the line, from the point that is closest to the axle [m].
    """
    if absent(across):
        return 0.0
    scale = xp.sqrt(constants.mass / (constants.wheel_inertia + constants.mass * across**2))
    return across * scale * (xp.atan(scale * end) - xp.atan(scale * begin))


def jump(constants: Constants, now: Instant, axis: str, end: float) -> Instant:
    """Return the instant after a jump along one axis to ``end``; the momentum stays."""
    if getattr(now.slides, axis) == end:
        return now
    angle = now.angle + shift_of(constants, now.slides, axis, end)
    return replace(now, angle=angle, slides=now.slides._replace(**{axis: end}))


def jumps_to(constants: Constants, now: Instant, slides: Slides) -> list[Instant]:
    """Instants after each of the jumps that lead to a place, radial first, then tangential."""
    instants = []
    for axis in AXES:
        after = jump(constants, now, axis, getattr(slides, axis))
        if after is not now:
            instants.append(after)
        now = after
    return instants


def placed(constants: Constants, now: Instant, slides: Slides) -> Instant:
    """Return the instant after the jumps that lead to a place."""
    return (jumps_to(constants, now, slides) or [now])[-1]


def jump_work(constants: Constants, before: Instant, after: Slides) -> float:
    """Work of the drives in the jumps to a place, those that brake not counted [J].

    A jump adds to the rig's energy what its drive puts in, less the rubbing along the rail.
    """
    work = 0.0
    for instant in jumps_to(constants, before, after):
        radial = abs(instant.slides.radial - before.slides.radial)
        tangential = abs(instant.slides.tangential - before.slides.tangential)
        rubbed = constants.radial_rubbing * radial + constants.tangential_rubbing * tangential
        rise = instant.energy(constants) - before.energy(constants)
        work += max(rise + rubbed, 0.0)
        before = instant
    return work


@lru_cache(maxsize=16)
def heaviest_place(constants: Constants) -> Slides:
    """Place at which gravity can pull hardest."""
    return max(corners_of(constants), key=lambda corner: moment_at(constants, corner))


def moment_at(constants: Constants, slides: Slides) -> float:
    """Return the static moment about the axle with the mass at a place [kg m]."""
    return math.hypot(*static_moment(constants, slides))


def full_pull(constants: Constants) -> float:
    """Largest torque of the weight [N m]."""
    return float(constants.gravity * moment_at(constants, heaviest_place(constants)))


def full_swing(constants: Constants) -> float:
    """Momentum of a large swing [kg m2/s]."""
    inertia = max(total_inertia(constants, corner) for corner in corners_of(constants))
    return math.sqrt(full_pull(constants) * inertia)
