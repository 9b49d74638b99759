# SPDX-License-Identifier: BSD-3-Clause
"""Plain simulation: wheel and mass under given drives, with every event met exactly.

A mass that arrives at a stop loses its speed at once; it rests there while it is pressed on, the
stop bearing whatever that takes. A mass without force on its drive sticks by rubbing, and a wheel
by dry friction.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import partial
from itertools import product

from rotorpump.physics.constants import Constants
from rotorpump.physics.contacts import (
    LEAVING_FORCE,
    Action,
    Contact,
    Rail,
    Situation,
    depends_on_direction,
    directions_of,
    grips_of,
    push_over_time,
)
from rotorpump.physics.friction import friction_torque
from rotorpump.physics.impulses import OTHER, PLACES, SPEED, kick, kinetic_energy, leap
from rotorpump.physics.phases import Ending, Phase, State, follow
from rotorpump.rig.rig import AXES, Rig

SKIN = 1e-12
"""Depth in a stop at which an arrival counts [m]; parts arriving from leaving."""

TURNED = 1e-12
"""Speed at which a wheel or a mass has turned back [rad/s, m/s]; parts turning from starting."""

REBOUND = 1e-4
"""Speed at which an impulse along the other axis must throw a mass off its stop [m/s], so that it
leaves. In a corner a mass rebounds from stop to stop ever more slowly and without an end; a fall
through the skin alone makes some 1e-5 m/s."""

LEDGER = ("drive work", "axle friction", "rubbing", "load", "arrivals")
"""Energies that a simulation adds up where the state has room for them [J]."""

NOTHING = [0.0] * len(LEDGER)
"""What stands in the ledger at the start."""

BARE = 6
"""Entries of a state without a ledger."""

Rates = Callable[[float, State], Sequence[float]]
Actions = tuple[Action, Action]


@dataclass(frozen=True)
class Simulator:
    """Wheel and mass in the force form of the equations.

    A state is the list φ, ω, ρ, vρ, τ, vτ [rad, rad/s, m, m/s, m, m/s]. With `NOTHING` behind it,
    the energies of `LEDGER` are added up on the way.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    rails : tuple of Rail
        Stops and rubbing of the radial and the tangential axis.
    arrivals : dict of str to float
        Largest speed of an arrival at a stop of each axis so far [m/s].
    """

    constants: Constants
    rails: tuple[Rail, Rail]
    arrivals: dict[str, float] = field(default_factory=lambda: dict.fromkeys(AXES, 0.0))

    @classmethod
    def of(cls, rig: Rig, load_torque: float = 0.0) -> Simulator:
        """Set up a simulation of ``rig``, which turns a load of ``load_torque`` [N m]."""
        rails = []
        for axis in AXES:
            slide = rig.slide(axis) if axis in rig.driven else None
            bearing, rubbing = (slide.bearing, slide.rubbing) if slide else (False, 0.0)
            rails.append(Rail(*rig.stroke(axis), bearing, rubbing))
        return cls(Constants.of(rig, load_torque), (rails[0], rails[1]))

    def advance(self, begin: float, end: float, actions: Actions, state: State) -> State:
        """State at the end of a stretch of smooth actions.

        Parameters
        ----------
        begin, end : float
            The stretch [s].
        actions : tuple of Action
            What acts along the radial and the tangential axis, over time [s].
        state : list of float
            State at its begin.

        Raises
        ------
        SimulationFailure
            If the integration cannot go on.
        """
        state = self._meet_stops(actions, state)
        return follow(begin, end, state, partial(self._plan, actions))

    def set_speed(self, state: State, axis: str, speed: float) -> State:
        """State after an impulse makes the speed along one axis ``speed`` [m/s].

        Rail or drive see to it that the mass keeps its speed along the other axis.
        """
        entry = PLACES[axis] + 1
        after = kick(self.constants, state, axis, speed - state[entry], free=False)
        after[entry] = speed
        self._book(after, "drive work", self._gain(state, after))
        return after

    def set_place(self, state: State, axis: str, place: float) -> State:
        """State after the mass is brought to ``place`` [m] along one axis in no time."""
        return leap(self.constants, state, axis, place)

    def _plan(self, actions: Actions, time: float, state: State) -> Phase:
        situation = self._situation(actions, time, state)
        return Phase(self._rates(situation, len(state)), self._endings(situation))

    def _situation(self, actions: Actions, time: float, state: State) -> Situation:
        """Find the contact that the motion does not contradict, or does the least."""
        options = list(
            product(
                directions_of(self.constants, state[SPEED]),
                grips_of(actions[0], self.rails[0], state[2], state[3]),
                grips_of(actions[1], self.rails[1], state[4], state[5]),
            )
        )
        best, least = None, math.inf
        for direction, *grips in options:
            contact = Contact(direction, (grips[0], grips[1]))
            pushes = (
                push_over_time(actions[0], self.rails[0], grips[0]),
                push_over_time(actions[1], self.rails[1], grips[1]),
            )
            found = Situation(self.constants, actions, self.rails, contact, pushes)
            if len(options) == 1:
                return found
            violation = found.violation(time, state)
            if violation <= 0.0:
                return found
            # rounding may leave no contact without any contradiction
            if best is None or violation < least:
                best, least = found, violation
        assert best is not None
        return best

    def _rates(self, situation: Situation, size: int) -> Callable[[float, State], Sequence[float]]:
        motion_at = situation.motion

        def rates(time: float, state: State) -> Sequence[float]:
            motion = motion_at(time, state)
            return state[1], motion.wheel, state[3], motion.radial, state[5], motion.tangential

        return rates if size == BARE else self._rates_with_ledger(situation)

    def _rates_with_ledger(self, situation: Situation) -> Rates:
        c, direction = self.constants, situation.contact.direction

        def rates(time: float, state: State) -> Sequence[float]:
            motion = situation.motion(time, state)
            speed, paces = state[1], (state[3], state[5])
            contacts = motion.radial_contact, motion.tangential_contact
            rubbed = [
                rail.rubbing * abs(pace) for rail, pace in zip(self.rails, paces, strict=True)
            ]
            work = sum(
                # a drive that enforces a motion also overcomes the rubbing
                pace * contact + loss if action.force is None else pace * action.force(time)
                for action, pace, contact, loss in zip(
                    situation.actions, paces, contacts, rubbed, strict=True
                )
            )
            lost = -speed * friction_torque(c, speed, direction, motion.axle_load)
            load = speed * direction * c.load_torque
            turning = (speed, motion.wheel, paces[0], motion.radial, paces[1], motion.tangential)
            return (*turning, work, lost, sum(rubbed), load, 0.0)

        return rates

    def _endings(self, situation: Situation) -> tuple[Ending, ...]:
        direction = situation.contact.direction
        endings: list[Ending] = []
        if direction == 0.0:
            endings.append(Ending(lambda time, s: situation.unheld_torque(time, s) - 1e-12, list))
        elif depends_on_direction(self.constants):
            endings.append(
                Ending(lambda _, s: -direction * s[SPEED] - TURNED, partial(_still, SPEED))
            )
        for axis, name in enumerate(AXES):
            if situation.actions[axis].force is not None:
                endings += self._slide_endings(situation, axis, name)
        return tuple(endings)

    def _slide_endings(self, situation: Situation, axis: int, name: str) -> list[Ending]:
        """Events of a driven axis: the mass leaves its rest, arrives at a stop, turns back."""
        rail, here = self.rails[axis], PLACES[name]
        grip = situation.contact.grips[axis]
        if grip.holds:
            margin = LEAVING_FORCE * float(self.constants.mass)

            def leaves(time: float, state: State) -> float:
                motion = situation.motion(time, state)
                return situation.unheld_force(axis, time, motion) - margin

            return [Ending(leaves, list)]
        endings = []
        if rail.bearing:
            actions = situation.actions
            high = partial(self._arrive, actions, name, rail.high)
            low = partial(self._arrive, actions, name, rail.low)
            endings += [
                Ending(lambda _, s: s[here] - rail.high - SKIN, high),
                Ending(lambda _, s: rail.low - s[here] - SKIN, low),
            ]
        if grip.way:
            way = grip.way
            endings.append(
                Ending(lambda _, s: -way * s[here + 1] - TURNED, partial(_still, here + 1))
            )
        return endings

    def _meet_stops(self, actions: Actions, state: State) -> State:
        """State with the mass between the stops, and not moving into one."""
        for axis, name in enumerate(AXES):
            rail, here = self.rails[axis], PLACES[name]
            if actions[axis].force is None or not rail.bearing:
                continue
            # the states of a solver may lie in a stop by a rounding; margins measure how deep
            place = min(max(state[here], rail.low), rail.high)
            state = [*state[:here], place, *state[here + 1 :]]
            if rail.seat(place) * state[here + 1] > 0.0:
                state = self._arrive(actions, name, place, state)
        return state

    def _arrive(self, actions: Actions, axis: str, stop: float, state: State) -> State:
        """Inelastic arrival at a stop."""
        here = PLACES[axis]
        self.arrivals[axis] = max(self.arrivals[axis], abs(state[here + 1]))
        state = [*state[:here], stop, *state[here + 1 :]]
        after = self._halt(actions, state, axis)
        self._book(after, "arrivals", -self._gain(state, after))
        return after

    def _halt(self, actions: Actions, state: State, axis: str) -> State:
        """State at rest along one axis; a stop of the other one may take its share."""
        here, there = PLACES[axis], PLACES[OTHER[axis]]
        other = AXES.index(OTHER[axis])
        pace, free = state[here + 1], actions[other].force is not None
        after = kick(self.constants, state, axis, -pace, free=free)
        seat = self.rails[other].seat(state[there])
        if free and seat and state[there + 1] == 0.0 and -seat * after[there + 1] < REBOUND:
            after = kick(self.constants, state, axis, -pace, free=False)
        after[here + 1] = 0.0
        return after

    def _gain(self, before: State, after: State) -> float:
        return kinetic_energy(self.constants, after) - kinetic_energy(self.constants, before)

    def _book(self, state: State, entry: str, energy: float) -> None:
        """Add an energy to the ledger, if there is one."""
        if len(state) > BARE:
            state[BARE + LEDGER.index(entry)] += energy


def _still(entry: int, state: State) -> State:
    """Return the same state with one of its speeds at zero."""
    return [*state[:entry], 0.0, *state[entry + 1 :]]
