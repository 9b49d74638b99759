# SPDX-License-Identifier: BSD-3-Clause
"""Motions in which the slides move at told speeds, for tests of the checking stage.

Integrated in the momentum form, so that they share no equation with the replay.
"""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
from scipy.integrate import solve_ivp
from simulated_motion import PLACES, STEP, Motion, pump_task

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import motion_along, wheel_speed
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig
from rotorpump.solution.assembly import trajectory_of


def told_speeds(rig: Rig, state: list[float], moves) -> Motion:
    """A motion in which the mass moves as told.

    A move is (duration, radial speed), (duration, radial speed, tangential speed), or a leap
    (0, new radial place). Where a tangential speed may jump, two nodes stand at one time.
    """
    constants = Constants.of(rig)
    angle, speed, *places = state
    places = places if len(places) == 2 else [*places, rig.stroke("tangential")[0]]
    momentum = speed * rig.inertia(*places)
    now = [angle, momentum, *places]
    time, nodes, breaks = [0.0], [[*now, 0.0, 0.0]], [0]

    def add(at, values, paces):
        time.append(at)
        nodes.append([*values, *paces])

    for duration, told, *rest in moves:
        if duration == 0.0:
            now = [now[0], now[1], told, now[3]]
            add(time[-1], now, nodes[-1][4:])
            breaks.append(len(time) - 1)
            continue
        paces = (told, rest[0] if rest else 0.0)
        if rest:
            add(time[-1], now, paces)
            breaks.append(len(time) - 1)

        def rates(_, y, paces=paces):
            slides = Slides(y[2], paces[0], y[3], paces[1])
            turning = wheel_speed(constants, y[1], slides)
            way = np.sign(turning)
            rate, _ = motion_along(math, constants, y[0], turning, slides, 0.0, 0.0, way)
            return [turning, rate, *paces]

        found = solve_ivp(
            rates, (0.0, duration), now, rtol=1e-11, atol=1e-12, method="DOP853", dense_output=True
        )
        edges = np.linspace(0.0, duration, math.ceil(duration / STEP) + 1)
        begin = time[-1]
        for left, right in pairwise(edges):
            for at in left + (right - left) * PLACES:
                add(begin + at, found.sol(at), paces)
            breaks.append(len(time) - 1)
        now = found.y[:, -1].tolist()
    columns = np.array(nodes).T
    slides = Slides(columns[2], columns[4], columns[3], columns[5])
    turning = wheel_speed(constants, columns[1], slides)
    way = np.sign(turning)
    _, motion = motion_along(np, constants, columns[0], turning, slides, 0.0, 0.0, way)
    trajectory = trajectory_of(
        rig,
        time,
        *columns[:2],
        slides,
        (0.0, 0.0),
        breaks,
        [0, breaks[-1]],
        contacts=(motion.radial_contact, motion.tangential_contact),
    )
    return rig, *pump_task(trajectory, rig, speed)
