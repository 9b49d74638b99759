# SPDX-License-Identifier: BSD-3-Clause
"""Jumps of the state: impulses along a slide, and places that change in no time.

The momentum H about the axle is kept, since impulses act between mass and wheel alone. Friction
that depends on the axle's load is not given its share of an impulse.
"""

from __future__ import annotations

import math

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import angular_momentum, wheel_speed
from rotorpump.physics.phases import State
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import AXES

ANGLE, SPEED = 0, 1
PLACES = {"radial": 2, "tangential": 4}
"""Where the place along each axis stands in a state [φ, ω, ρ, vρ, τ, vτ]; its speed follows."""

OTHER = dict(zip(AXES, AXES[::-1], strict=True))
"""The other axis."""


def kick(constants: Constants, state: State, axis: str, change: float, *, free: bool) -> State:
    """State after an impulse that changes the speed along one axis.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    state : list of float
        φ, ω, ρ, vρ, τ, vτ [rad, rad/s, m, m/s, m, m/s], and whatever else follows.
    axis : {"radial", "tangential"}
        The axis.
    change : float
        Change of the mass's speed relative to the wheel along it [m/s].
    free : bool
        Whether the mass gives way along the other axis; otherwise its speed there stays.

    Notes
    -----
    The force between mass and wheel turns the wheel. With the other axis held,
    I Δω = m (τ Δvρ - ρ Δvτ). Where no impulse acts along the other axis, the mass's own velocity
    along that one stays: (J + m τ²) Δω = m τ Δvρ and Δvτ = -ρ Δω after a radial impulse,
    (J + m ρ²) Δω = -m ρ Δvτ and Δvρ = τ Δω after a tangential one.
    """
    after = list(state)
    radial, tangential = state[PLACES["radial"]], state[PLACES["tangential"]]
    along, across = (tangential, -radial) if axis == "radial" else (-radial, tangential)
    inertia = constants.wheel_inertia + constants.mass * along**2
    if not free:
        inertia += constants.mass * across**2
    turn = constants.mass * along * change / inertia
    after[SPEED] += turn
    after[PLACES[axis] + 1] += change
    if free:
        after[PLACES[OTHER[axis]] + 1] += across * turn
    return after


def leap(constants: Constants, state: State, axis: str, place: float) -> State:
    """State after the mass moves to ``place`` [m] along one axis in no time.

    Notes
    -----
    The wheel turns by Δφ = -ρ s [atan(s τ)] with s = √(m / (J + m ρ²)) while τ changes, and by
    τ s [atan(s ρ)] with s = √(m / (J + m τ²)) while ρ does; ω follows from H.
    """
    after = list(state)
    here = PLACES[axis]
    after[here] = place
    other = state[PLACES[OTHER[axis]]]
    pace = math.sqrt(constants.mass / (constants.wheel_inertia + constants.mass * other**2))
    sweep = math.atan(pace * place) - math.atan(pace * state[here])
    after[ANGLE] += (other if axis == "radial" else -other) * pace * sweep
    momentum = angular_momentum(constants, state[SPEED], Slides(*state[2:6]))
    after[SPEED] = wheel_speed(constants, momentum, Slides(*after[2:6]))
    return after


def kinetic_energy(constants: Constants, state: State) -> float:
    """Kinetic energy of wheel and mass, ½ J ω² + ½ m [(vρ - τ ω)² + (vτ + ρ ω)²] [J]."""
    _, speed, radial, radial_speed, tangential, tangential_speed = state[:6]
    along = radial_speed - tangential * speed
    across = tangential_speed + radial * speed
    mass = constants.mass * (along * along + across * across)
    return float(0.5 * (constants.wheel_inertia * speed * speed + mass))
