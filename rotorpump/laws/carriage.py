# SPDX-License-Identifier: BSD-3-Clause
"""One step of wheel and mass under held drive forces, end stops and dry friction included.

Symbolic, for the compiled loop. The direction of every dry friction is that at the start of the
step; what it would turn back by the end of the step it stops.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import product
from typing import Any

import casadi

from rotorpump.physics.constants import Constants, absent
from rotorpump.physics.equations import momentum_rate, sliding_momentum, wheel_speed
from rotorpump.physics.forces import accelerations, torque_against_hold
from rotorpump.physics.state import HOLD, Motion, Push, Slides
from rotorpump.rig.rig import AXES

STILL = 1e-9
"""Wheel speed below which a wheel with dry friction counts as standing [rad/s]."""

State = tuple[Any, ...]
"""Angle, momentum, then position and speed along the radial and the tangential axis."""


@dataclass(frozen=True)
class Rubbed:
    """Forces on the mass along one axis less the rubbing, and whether the rail holds the mass."""

    force: Any
    held: Any


@dataclass(frozen=True)
class Carriages:
    """What holds throughout a step.

    Parameters
    ----------
    axes : tuple of str
        Driven axes.
    state : tuple of symbol
        See `State`.
    dry : bool
        Whether the axle has any friction that can hold the wheel.
    stuck : symbol
        Whether friction holds the wheel.
    direction : symbol
        Sign with which friction acts on the wheel.
    """

    axes: tuple[str, ...]
    state: State
    dry: bool
    stuck: Any
    direction: Any

    @classmethod
    def of(
        cls, c: Constants, axes: tuple[str, ...], angle: Any, momentum: Any, slides: Slides
    ) -> Carriages:
        """Judge the state at the start of a step, the mass held where it is."""
        state = (angle, momentum, *slides)
        speed = wheel_speed(c, momentum, slides)
        if absent(c.coulomb) and absent(c.load_arm):
            return cls(axes, state, False, False, casadi.sign(speed))
        still = accelerations(casadi, c, angle, 0.0, slides, HOLD, HOLD, 0.0, stuck=True)
        return cls(axes, state, True, False, 0.0)._judged(c, still)

    def under(self, c: Constants, rubbed: dict[str, Rubbed]) -> Carriages:
        """Judge the state again under the forces on the mass."""
        if not (self.dry and self.coupled(c)):
            return self
        return self._judged(c, _seated(c, replace(self, stuck=True), self.state, rubbed))

    def coupled(self, c: Constants) -> bool:
        """Whether the forces on the mass and the friction of the wheel depend on each other."""
        plain = self.axes == ("radial",) and absent(self.state[4])
        return not plain or not absent(c.load_arm)

    def _judged(self, c: Constants, still: Motion) -> Carriages:
        """Compare the torque on the standing wheel with what friction can hold."""
        angle, momentum, *places = self.state
        slides = Slides(*places)
        speed = wheel_speed(c, momentum, slides)
        torque, held = torque_against_hold(casadi, c, angle, slides, still)
        standing = casadi.fabs(speed) < STILL
        stuck = casadi.logic_and(standing, casadi.fabs(torque) <= held)
        moving = casadi.if_else(standing, casadi.sign(torque), casadi.sign(speed))
        return replace(self, stuck=stuck, direction=casadi.if_else(stuck, 0.0, moving))


def step_forward(
    c: Constants, carriages: Carriages, forces: dict[str, Any], step: Any
) -> tuple[Any, Any, Slides]:
    """Return angle, momentum and slides after a step (classical Runge-Kutta).

    Parameters
    ----------
    c : Constants
        The rig's numbers.
    carriages : Carriages
        The state at its start.
    forces : dict of str to symbol
        Forces of the drives, held through the step [N].
    step : symbol
        Its length [s].
    """
    state = carriages.state
    rubbed = _rubbed(c, carriages, forces)
    carriages = carriages.under(c, rubbed)

    def advance(share: float, rates: list[Any]) -> State:
        return tuple(x + share * step * r for x, r in zip(state, rates, strict=True))

    first = _rates(c, carriages, state, rubbed)
    second = _rates(c, carriages, advance(0.5, first), rubbed)
    third = _rates(c, carriages, advance(0.5, second), rubbed)
    fourth = _rates(c, carriages, advance(1.0, third), rubbed)
    after = [
        x + step / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4)
        for x, k1, k2, k3, k4 in zip(state, first, second, third, fourth, strict=True)
    ]
    return _settled(c, carriages, after)


def _rubbed(c: Constants, carriages: Carriages, forces: dict[str, Any]) -> dict[str, Rubbed]:
    """Take the rubbing along the rails off the drives' forces."""
    pushes = {}
    for axis, force in forces.items():
        rubbing = getattr(c, f"{axis}_rubbing")
        if absent(rubbing):
            pushes[axis] = Rubbed(force, False)
            continue
        speed = carriages.state[3 + 2 * AXES.index(axis)]
        others = [
            HOLD if name == axis or name not in forces else Push(forces[name]) for name in AXES
        ]
        hold = getattr(_motion(c, carriages, carriages.state, others), f"{axis}_contact")
        excess = force - hold
        held = casadi.logic_and(speed == 0.0, casadi.fabs(excess) <= rubbing)
        way = casadi.if_else(speed == 0.0, casadi.sign(excess), casadi.sign(speed))
        pushes[axis] = Rubbed(force - rubbing * way, held)
    return pushes


def _motion(c: Constants, carriages: Carriages, state: State, pushes: list[Push]) -> Motion:
    """Accelerations in a state, of a wheel that turns or is held."""
    angle, momentum, *places = state
    slides = Slides(*places)
    radial, tangential = pushes
    speed = wheel_speed(c, momentum, slides)
    if carriages.stuck is True:
        return accelerations(casadi, c, angle, 0.0, slides, radial, tangential, 0.0, stuck=True)
    turning = accelerations(
        casadi, c, angle, speed, slides, radial, tangential, carriages.direction
    )
    if not (carriages.dry and carriages.coupled(c)):
        return turning
    still = accelerations(casadi, c, angle, 0.0, slides, radial, tangential, 0.0, stuck=True)
    return _chosen(carriages.stuck, still, turning)


def _rates(
    c: Constants, carriages: Carriages, state: State, rubbed: dict[str, Rubbed]
) -> list[Any]:
    """State rates under held forces, the end stops bearing what presses on them."""
    angle, momentum, *places = state
    slides = Slides(*places)
    speed = wheel_speed(c, momentum, slides)
    motion = _seated(c, carriages, state, rubbed)
    load = 0.0 if absent(c.load_arm) else motion.axle_load
    turning = momentum_rate(casadi, c, angle, speed, slides, carriages.direction, load)
    return [
        speed,
        turning,
        slides.radial_speed,
        motion.radial,
        slides.tangential_speed,
        motion.tangential,
    ]


def _seated(c: Constants, carriages: Carriages, state: State, rubbed: dict[str, Rubbed]) -> Motion:
    """Accelerations with each axis free, or held by a stop or by rubbing.

    Whether a stop holds the mass is judged with the other axis free.
    """
    slides = Slides(*state[2:])
    motions: dict[tuple[bool, ...], Motion] = {}
    for held in product((False, True), repeat=len(carriages.axes)):
        pushes = dict.fromkeys(AXES, HOLD)
        for axis, rests in zip(carriages.axes, held, strict=True):
            if not rests:
                pushes[axis] = Push(rubbed[axis].force)
        motions[held] = _motion(c, carriages, state, list(pushes.values()))
    free = motions[(False,) * len(carriages.axes)]
    chosen = free
    borne = [
        casadi.logic_or(_against_stop(c, axis, slides, getattr(free, axis)), rubbed[axis].held)
        for axis in carriages.axes
    ]
    for held, motion in motions.items():
        if any(held):
            matches = [r if h else casadi.logic_not(r) for r, h in zip(borne, held, strict=True)]
            chosen = _chosen(casadi.logic_and(matches[0], matches[-1]), motion, chosen)
    return chosen


def _against_stop(c: Constants, axis: str, slides: Slides, acceleration: Any) -> Any:
    """Whether the mass at the end of a stroke would go on outside it."""
    low, high = getattr(c, f"{axis}_low"), getattr(c, f"{axis}_high")
    position = getattr(slides, axis)
    above = casadi.logic_and(position >= high, acceleration > 0.0)
    below = casadi.logic_and(position <= low, acceleration < 0.0)
    return casadi.logic_or(above, below)


def _chosen(condition: Any, one: Motion, other: Motion) -> Motion:
    """Return one motion where the condition holds, the other one elsewhere."""
    return Motion(*(casadi.if_else(condition, a, b) for a, b in zip(one, other, strict=True)))


def _settled(c: Constants, carriages: Carriages, after: list[Any]) -> tuple[Any, Any, Slides]:
    """Apply what stops within the step: masses at the ends, rubbed masses, a rubbed wheel."""
    angle, momentum, *places = after
    values = dict(zip(Slides._fields, places, strict=True))
    for axis in carriages.axes:
        low, high = getattr(c, f"{axis}_low"), getattr(c, f"{axis}_high")
        position, speed = values[axis], values[f"{axis}_speed"]
        beyond = casadi.logic_or(position > high, position < low)
        if not absent(getattr(c, f"{axis}_rubbing")):
            before = carriages.state[3 + 2 * AXES.index(axis)]
            beyond = casadi.logic_or(beyond, before * speed < 0.0)
        values[f"{axis}_speed"] = casadi.if_else(beyond, 0.0, speed)
        values[axis] = casadi.fmax(low, casadi.fmin(high, position))
    slides = Slides(**values)
    if not carriages.dry:
        return angle, momentum, slides
    # dry friction stops the wheel, it never turns it back
    backward = wheel_speed(c, momentum, slides) * carriages.direction < 0.0
    stopped = casadi.logic_or(backward, carriages.stuck)
    momentum = casadi.if_else(stopped, sliding_momentum(c, slides), momentum)
    return casadi.if_else(carriages.stuck, carriages.state[0], angle), momentum, slides
