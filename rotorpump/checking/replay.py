# SPDX-License-Identifier: BSD-3-Clause
"""Replay: the motion integrated anew under what the drives do, arc by arc.

The forces of the drives are replayed where they move the mass. Where the motion itself is the
control, its speeds are, and a jump of a speed is an impulse; H is kept.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.case import Case
from rotorpump.checking.intervals import held_polynomials
from rotorpump.physics.contacts import Action
from rotorpump.physics.impulses import PLACES
from rotorpump.physics.phases import SimulationFailure, State
from rotorpump.physics.simulation import Simulator
from rotorpump.rig.rig import AXES, Rig
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

STATES = (
    "angle",
    "speed",
    "radial",
    "radial_speed",
    "tangential",
    "tangential_speed",
)
"""Columns of a trajectory that make a state."""

LEAP = 1e-9
"""Share of the stroke beyond which a change of place in no time is one, and not rounding."""

ESCAPE = 10.0
"""Distance from the axle, in the largest the rig has, at which a replay is given up."""


@dataclass(frozen=True, eq=False)
class Replay:
    """A motion as replayed.

    Parameters
    ----------
    states : ndarray, shape (m, 6)
        Angle, speed, place and speed along both axes at the end of each of the m intervals
        [rad, rad/s, m, m/s, m, m/s]; infinite where the replay was given up.
    arrivals : dict of str to float
        Largest speed at which the mass arrived at a stop of each axis [m/s].
    message : str
        Why the replay was given up, if it was.
    """

    states: Array
    arrivals: dict[str, float]
    message: str = ""


def replay_motion(case: Case, trajectory: Trajectory) -> Replay:
    """Integrate the motion anew; each arc starts from the trajectory's state at its first node."""
    run = _Run(case, trajectory)
    states = np.full((trajectory.breaks.size - 1, len(STATES)), np.inf)
    messages = []
    first = np.searchsorted(trajectory.breaks, trajectory.arcs)
    for arc, (begin, end) in enumerate(pairwise(first)):
        state = state_at(case.rig, trajectory, int(trajectory.breaks[begin]))
        try:
            for interval in range(begin, end):
                state = run.advance(interval, state)
                _stay(state, case.rig)
                states[interval] = state
        except SimulationFailure as failure:
            messages.append(f"arc {arc + 1}: {failure}")
    return Replay(states, run.simulator.arrivals, "; ".join(messages))


def state_at(rig: Rig, trajectory: Trajectory, node: int) -> State:
    """State at a node; an axis without a slide is at rest."""
    state = [float(getattr(trajectory, name)[node]) for name in STATES]
    for axis in AXES:
        if axis not in rig.driven:
            state[PLACES[axis] + 1] = 0.0
    return state


class _Run:
    """The replay of one motion, interval by interval."""

    def __init__(self, case: Case, trajectory: Trajectory) -> None:
        self.case = case
        self.simulator: Simulator = case.simulator()
        self.trajectory = trajectory
        self.edges = trajectory.time[trajectory.breaks].tolist()
        control = "force" if case.forced else "speed"
        self.courses = {
            axis: held_polynomials(trajectory, f"{axis}_{control}") for axis in case.rig.driven
        }

    def advance(self, interval: int, state: State) -> State:
        """State at the end of an interval."""
        begin, end = self.edges[interval : interval + 2]
        if not end > begin:
            return self._jump(int(self.trajectory.breaks[interval + 1]), state)
        for axis in self.case.told:
            course = self.courses[axis][interval]
            assert course is not None
            state = self.simulator.set_speed(state, axis, course(begin))
        actions = self._action("radial", interval), self._action("tangential", interval)
        return self.simulator.advance(begin, end, actions, state)

    def _action(self, axis: str, interval: int) -> Action:
        if axis not in self.courses:
            return Action()
        course = self.courses[axis][interval]
        assert course is not None
        return Action(force=course) if self.case.forced else Action(acceleration=course.rate())

    def _jump(self, node: int, state: State) -> State:
        """State after an interval of no length: a motion that is told may jump there."""
        for axis in self.case.told:
            slide = self.case.rig.slide(axis)
            place = float(getattr(self.trajectory, axis)[node])
            leaps = abs(place - state[PLACES[axis]]) > LEAP * slide.length
            # only a slide without a speed limit may leap; any other stays, and the leap shows
            if leaps and math.isinf(slide.speed):
                state = self.simulator.set_place(state, axis, place)
            speed = float(getattr(self.trajectory, f"{axis}_speed")[node])
            state = self.simulator.set_speed(state, axis, speed)
        return state


def _stay(state: State, rig: Rig) -> None:
    """Raise if a replay has left the neighbourhood of the rig."""
    ends = [max(map(abs, rig.stroke(axis))) for axis in AXES]
    place = math.hypot(state[2], state[4])
    if not all(map(math.isfinite, state)) or place > ESCAPE * math.hypot(*ends):
        where = ", ".join(f"{state[PLACES[axis]]:.3g} m {axis}" for axis in AXES)
        raise SimulationFailure(f"the mass leaves the rig ({where})")
