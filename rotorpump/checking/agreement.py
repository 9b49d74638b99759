# SPDX-License-Identifier: BSD-3-Clause
"""Agreement of a motion with its replay."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rotorpump.checking.case import Case
from rotorpump.checking.replay import STATES, Replay
from rotorpump.rig.rig import Rig
from rotorpump.solution.check import Check
from rotorpump.solution.trajectory import Trajectory

Array = NDArray[np.float64]

SEAT = 1e-6
"""Gap in strokes, and speed in largest speeds, below which the mass counts as on a stop."""


def replay_checks(
    case: Case, trajectory: Trajectory, replay: Replay, accuracy: float
) -> tuple[Check, ...]:
    """Compare a replay with the trajectory at the end of every interval.

    Notes
    -----
    Deviations are relative: the angle to the angle turned in its arc or 1 rad if that is less,
    speeds to their largest magnitude, places to the stroke. Stops never brake a moving mass: the
    distance in which the drive alone would have taken away the speed with which the mass arrives
    at one, relative to the stroke, is held against the same tolerance. So is the speed of a mass
    that should rest on a stop: arriving a little early or late, it has a speed there that is of
    the order of the square root of the deviation in time. With two slides, the stop passes that on
    to the other slide at once, whose speed at such a node is judged alike.
    """
    ends = trajectory.breaks[1:]
    spin = float(np.max(np.abs(trajectory.speed))) or 1.0
    scales: dict[str, Any] = {"angle": np.maximum(1.0, _arc_turns(trajectory)), "speed": spin}
    for axis in case.rig.driven:
        scales[axis] = case.rig.slide(axis).length
    for axis in case.forced:
        scales[f"{axis}_speed"] = slide_pace(case.rig, trajectory, axis)
    checks = []
    for name in STATES:
        if name not in scales:
            continue
        states = replay.states[:, STATES.index(name)]
        deviation = np.abs(states - getattr(trajectory, name)[ends]) / scales[name]
        axis = name.removesuffix("_speed")
        if axis in case.forced and axis != name:
            stopping = _stopping_share(case.rig, trajectory, axis, deviation * scales[name])
            deviation = np.where(_stopped(case, trajectory, ends), stopping, deviation)
        # argmax finds a value that is not a number first, so such a motion cannot pass
        worst = int(np.argmax(deviation))
        detail = replay.message or f"largest at {trajectory.time[ends[worst]]:.4g} s"
        title = f"replay {name.replace('_', ' ')}"
        checks.append(Check(title, float(deviation[worst]), 10.0 * accuracy, "1", detail))
    for axis in case.forced:
        if case.rig.slide(axis).bearing:
            speed = replay.arrivals[axis]
            share = float(_stopping_share(case.rig, trajectory, axis, speed))
            detail = f"at most {speed:.3g} m/s"
            checks.append(Check(f"{axis} arrival", share, 10.0 * accuracy, "1", detail))
    return tuple(checks)


def slide_pace(rig: Rig, trajectory: Trajectory, axis: str) -> float:
    """Largest slide speed of a motion; one stroke per its duration if the mass never moves."""
    fastest = float(np.max(np.abs(getattr(trajectory, f"{axis}_speed"))))
    return fastest or rig.slide(axis).length / trajectory.duration


def _stopped(case: Case, trajectory: Trajectory, nodes: NDArray[np.intp]) -> NDArray[np.bool_]:
    """Whether the mass rests on a stop of any slide at these nodes."""
    stopped = np.zeros(nodes.size, dtype=bool)
    for axis in case.forced:
        if case.rig.slide(axis).bearing:
            stopped |= _seated(case.rig, trajectory, axis, nodes)
    return stopped


def _seated(
    rig: Rig, trajectory: Trajectory, axis: str, nodes: NDArray[np.intp]
) -> NDArray[np.bool_]:
    """Whether the mass rests on a stop at these nodes."""
    slide, places = rig.slide(axis), getattr(trajectory, axis)[nodes]
    gaps = np.abs(places[:, None] - np.array(slide.stroke)).min(axis=1)
    paces = np.abs(getattr(trajectory, f"{axis}_speed")[nodes])
    still = paces <= SEAT * slide_pace(rig, trajectory, axis)
    return np.asarray((gaps <= SEAT * slide.length) & still)


def _stopping_share(rig: Rig, trajectory: Trajectory, axis: str, speed: Any) -> Any:
    """Distance in which the drive alone takes this speed away, relative to the stroke."""
    slide = rig.slide(axis)
    force = slide.standing_force
    if math.isinf(force):
        largest = float(np.max(np.abs(getattr(trajectory, f"{axis}_force"))))
        force = largest or rig.mass * rig.gravity
    return speed**2 * rig.mass / (2.0 * force * slide.length)


def _arc_turns(trajectory: Trajectory) -> Array:
    """Angle that the wheel turns through in the arc of each interval [rad]."""
    turned = np.zeros(trajectory.breaks.size - 1)
    first = np.searchsorted(trajectory.breaks, trajectory.arcs)
    for arc, (begin, end) in enumerate(pairwise(first)):
        nodes = slice(trajectory.arcs[arc], trajectory.arcs[arc + 1] + 1)
        turned[begin:end] = np.ptp(trajectory.angle[nodes])
    return turned
