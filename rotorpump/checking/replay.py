# SPDX-License-Identifier: BSD-3-Clause
"""Replay: the motion integrated anew under what the drive does, arc by arc."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.driven import DrivenSlide
from rotorpump.checking.intervals import held_polynomials
from rotorpump.checking.phases import ReplayFailure, State
from rotorpump.checking.prescribed import PrescribedSlide
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]
Advance = Callable[[int, State], State]

SEAT = 1e-6
"""Gap in strokes, and speed in largest speeds, below which the mass counts as on a stop."""

ESCAPE = 10.0
"""Distance from the axle, in outer ends of the stroke, at which a replay is given up."""


@dataclass(frozen=True, eq=False)
class Replay:
    """A motion as replayed.

    Parameters
    ----------
    states : ndarray, shape (m, 4) or (m, 3)
        Angle, speed, radial position and, where a force drives the slide, radial speed at the end
        of each of the m intervals [rad, rad/s, m, m/s]; infinite where the replay was given up.
    arrival_speed : float
        Largest speed at which the mass arrived at a stop [m/s].
    message : str
        Why the replay was given up, if it was.
    """

    states: Array
    arrival_speed: float
    message: str = ""


def replay_motion(rig: Rig, trajectory: Trajectory) -> Replay:
    """Integrate the motion anew; each arc starts from the trajectory's state at its first node."""
    if math.isinf(rig.radial.force):
        names, arrivals = ["angle", "speed", "radial"], [0.0]
        advance = _prescribed_advance(rig, trajectory)
    else:
        slide = DrivenSlide(Constants.of(rig), rig.radial.bearing, [0.0])
        names, arrivals = ["angle", "speed", "radial", "radial_speed"], slide.arrivals
        advance = _driven_advance(slide, trajectory)
    nodes = np.column_stack([getattr(trajectory, name) for name in names])
    states = np.full((trajectory.breaks.size - 1, len(names)), np.inf)
    messages = []
    first = np.searchsorted(trajectory.breaks, trajectory.arcs)
    for arc, (begin, end) in enumerate(pairwise(first)):
        state = nodes[trajectory.breaks[begin]].tolist()
        try:
            for interval in range(begin, end):
                state = advance(interval, state)
                _stay(state, rig)
                states[interval] = state
        except ReplayFailure as failure:
            messages.append(f"arc {arc + 1}: {failure}")
    return Replay(states, max(arrivals), "; ".join(messages))


def replay_checks(
    rig: Rig, trajectory: Trajectory, replay: Replay, accuracy: float
) -> tuple[Check, ...]:
    """Compare a replay with the trajectory at the end of every interval.

    Notes
    -----
    Deviations are relative: the angle to the angle turned in its arc or 1 rad if that is less,
    speeds to their largest magnitude, the radial position to the stroke. Stops never brake a
    moving mass: the distance in which the drive alone would have taken away the speed with which
    the mass arrives at one, relative to the stroke, is held against the same tolerance. So is the
    speed of a mass that should rest on a stop: arriving a little early or late, it has a speed
    there that is of the order of the square root of the deviation in time.
    """
    ends = trajectory.breaks[1:]
    pace = slide_pace(rig, trajectory)
    spin = float(np.max(np.abs(trajectory.speed))) or 1.0
    scales = {
        "angle": np.maximum(1.0, _arc_turns(trajectory)),
        "speed": np.full(ends.size, spin),
        "radial": np.full(ends.size, rig.radial.length),
        "radial_speed": np.full(ends.size, pace),
    }
    seated = _seated(rig, trajectory, ends)
    checks = []
    for name, states in zip(scales, replay.states.T, strict=False):
        deviation = np.abs(states - getattr(trajectory, name)[ends]) / scales[name]
        if name == "radial_speed" and rig.radial.bearing:
            deviation = np.where(seated, _stopping_share(rig, deviation * pace), deviation)
        # argmax finds a value that is not a number first, so such a motion cannot pass
        worst = int(np.argmax(deviation))
        detail = replay.message or f"largest at {trajectory.time[ends[worst]]:.4g} s"
        title = f"replay {name.replace('_', ' ')}"
        checks.append(Check(title, float(deviation[worst]), 10.0 * accuracy, "1", detail))
    if not math.isinf(rig.radial.force) and rig.radial.bearing:
        detail = f"at most {replay.arrival_speed:.3g} m/s"
        share = _stopping_share(rig, replay.arrival_speed)
        checks.append(Check("arrival at stops", share, 10.0 * accuracy, "1", detail))
    return tuple(checks)


def _seated(rig: Rig, trajectory: Trajectory, nodes: NDArray[np.intp]) -> NDArray[np.bool_]:
    """Whether the mass rests on a stop at these nodes."""
    gaps = np.abs(trajectory.radial[nodes, None] - np.array(rig.radial.stroke)).min(axis=1)
    still = np.abs(trajectory.radial_speed[nodes]) <= SEAT * slide_pace(rig, trajectory)
    return np.asarray((gaps <= SEAT * rig.radial.length) & still)


def _stopping_share(rig: Rig, speed: Any) -> Any:
    """Distance in which the drive alone takes this speed away, relative to the stroke."""
    return speed**2 * rig.mass / (2.0 * rig.radial.force * rig.radial.length)


def slide_pace(rig: Rig, trajectory: Trajectory) -> float:
    """Largest slide speed of a motion; one stroke per its duration if the mass never moves."""
    fastest = float(np.max(np.abs(trajectory.radial_speed)))
    return fastest or rig.radial.length / trajectory.duration


def _arc_turns(trajectory: Trajectory) -> Array:
    """Angle that the wheel turns through in the arc of each interval [rad]."""
    turned = np.zeros(trajectory.breaks.size - 1)
    first = np.searchsorted(trajectory.breaks, trajectory.arcs)
    for arc, (begin, end) in enumerate(pairwise(first)):
        nodes = slice(trajectory.arcs[arc], trajectory.arcs[arc + 1] + 1)
        turned[begin:end] = np.ptp(trajectory.angle[nodes])
    return turned


def _driven_advance(slide: DrivenSlide, trajectory: Trajectory) -> Advance:
    forces = held_polynomials(trajectory, "radial_force")
    edges = trajectory.time[trajectory.breaks].tolist()

    def advance(interval: int, state: State) -> State:
        force = forces[interval]
        if force is None:
            return state
        return slide.advance(edges[interval], edges[interval + 1], force, state)

    return advance


def _prescribed_advance(rig: Rig, trajectory: Trajectory) -> Advance:
    slide = PrescribedSlide(Constants.of(rig))
    paces = held_polynomials(trajectory, "radial_speed")
    edges = trajectory.time[trajectory.breaks].tolist()
    radial = trajectory.radial[trajectory.breaks].tolist()

    def advance(interval: int, state: State) -> State:
        pace = paces[interval]
        if pace is not None:
            return slide.advance(edges[interval], edges[interval + 1], pace, state)
        # only a slide without a speed limit may jump; any other stays, and the jump shows
        return slide.jump(state, radial[interval + 1]) if math.isinf(rig.radial.speed) else state

    return advance


def _stay(state: State, rig: Rig) -> None:
    """Raise if a replay has left the neighbourhood of the rig."""
    if not all(map(math.isfinite, state)) or abs(state[2]) > ESCAPE * rig.radial.stroke[1]:
        raise ReplayFailure(f"the mass leaves the rig, radial position {state[2]:.3g} m")
