# SPDX-License-Identifier: BSD-3-Clause
"""Motions made by direct simulation, phase by phase, for tests of the checking stage.

The phases of a motion are told, not found: the mass rests, is driven by a full force, or moves at
a constant speed. So no logic of contacts is shared with the replay that is tested.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import cache
from itertools import pairwise

import numpy as np
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import (
    accelerations,
    contact_force,
    momentum_rate,
    wheel_speed,
)
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.solution.assembly import trajectory_of
from rotorpump.solution.objective import Objective
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Pump

# Radau IIA points of three stages (formula from memory); any three places would do here.
PLACES = np.array([(4.0 - math.sqrt(6.0)) / 10.0, (4.0 + math.sqrt(6.0)) / 10.0, 1.0])
STEP = 0.02

Force = Callable[[list[float]], float]


def example_rig(**changes) -> Rig:
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0),
        "mass": 1.2,
        "radial": Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0),
        "friction": AxleFriction(viscous=0.05),
    }
    return Rig(**(parts | changes))


class Simulation:
    """Collects the nodes of one phase after the other; a state is [φ, ω, ρ, vρ]."""

    def __init__(self, rig: Rig, state: list[float]) -> None:
        self.rig = rig
        self.constants = Constants.of(rig)
        self.state = state
        self.time = [0.0]
        self.nodes = [[*state, 0.0]]
        self.breaks = [0]

    def solve(self, force: Force, longest: float, until=None, rests=False, direction=None):
        """Integrate one phase from the present state, without keeping it."""
        sign = math.copysign(1.0, self.state[1]) if direction is None else direction

        def rates(_, state):
            wheel, mass = accelerations(math, self.constants, *state, force(state), sign)
            return [state[1], wheel, 0.0, 0.0] if rests else [state[1], wheel, state[3], mass]

        events = None
        if until is not None:

            def events(_, state):
                return until(state)

            events.terminal = True
        return solve_ivp(
            rates,
            (0.0, longest),
            self.state,
            method="DOP853",
            rtol=1e-11,
            atol=1e-12,
            dense_output=True,
            events=events,
        )

    def run(self, force: Force, longest: float, until=None, rests=False, direction=None) -> None:
        """Add a phase: up to ``longest``, or until a function of the state crosses zero."""
        if until is None and longest <= 0.0:
            return
        found = self.solve(force, longest, until, rests, direction)
        assert found.success
        assert until is None or found.status == 1, "the phase never ends"
        begin, length = self.time[-1], found.t[-1]
        edges = np.linspace(0.0, length, max(1, math.ceil(length / STEP)) + 1)
        for left, right in pairwise(edges):
            for at in left + (right - left) * PLACES:
                state = found.sol(at).tolist()
                self.nodes.append([*state, force(state)])
                self.time.append(begin + at)
            self.breaks.append(len(self.time) - 1)
        self.state = found.y[:, -1].tolist()

    def stand(self, duration: float, force: float) -> None:
        """Add a phase in which neither wheel nor mass moves."""
        begin = self.time[-1]
        for at in duration * PLACES:
            self.nodes.append([*self.state, force])
            self.time.append(begin + at)
        self.breaks.append(len(self.time) - 1)

    def stroke(self, goal: float) -> None:
        """Add full force, constant speed and full braking, to rest at ``goal``."""
        way = math.copysign(1.0, goal - self.state[2])
        strength, pace = self.rig.radial.force, self.rig.radial.speed
        self.run(lambda _: way * strength, 1.0, until=lambda s: way * s[3] - pace)
        self.state[3] = way * pace
        before = list(self.state)

        def miss(duration):
            self.state = before
            if duration > 0.0:
                self.state = self.solve(self._steady, duration).y[:, -1].tolist()
            braking = self.solve(lambda _: -way * strength, 1.0, until=lambda s: way * s[3])
            self.state = before
            return way * (braking.y[2, -1] - goal)

        duration = brentq(miss, 0.0, abs(goal - before[2]) / pace, xtol=1e-13)
        self.run(self._steady, duration)
        self.run(lambda _: -way * strength, 1.0, until=lambda s: way * s[3])
        self.state[2], self.state[3] = goal, 0.0

    def _steady(self, state: list[float]) -> float:
        return contact_force(math, self.constants, *state[:3], 0.0)

    def trajectory(self, arcs=None) -> Trajectory:
        angle, speed, radial, slide_speed, force = np.array(self.nodes).T
        momentum = (self.rig.wheel.inertia + self.rig.mass * radial**2) * speed
        return trajectory_of(
            self.rig,
            self.time,
            angle,
            momentum,
            radial,
            slide_speed,
            force,
            self.breaks,
            [0, self.breaks[-1]] if arcs is None else arcs,
        )


def end_energy(rig: Rig, trajectory: Trajectory) -> float:
    """Energy above rest at the end, written out once more."""
    angle, speed = trajectory.angle[-1], trajectory.speed[-1]
    radial, slide_speed = trajectory.radial[-1], trajectory.radial_speed[-1]
    height = rig.radial.stroke[1] - radial * math.cos(angle)
    turning = 0.5 * (rig.wheel.inertia + rig.mass * radial**2) * speed**2
    return float(turning + 0.5 * rig.mass * slide_speed**2 + rig.mass * rig.gravity * height)


Motion = tuple[Rig, Pump, Trajectory, Objective]


def pump_motion(simulation: Simulation, arcs=None) -> Motion:
    """What was simulated, as the answer to the task of pumping like this."""
    rig, trajectory = simulation.rig, simulation.trajectory(arcs)
    task = Pump(
        duration=trajectory.duration,
        start_angle=trajectory.angle[0],
        start_speed=trajectory.speed[0],
        start_radial=trajectory.radial[0],
    )
    return rig, task, trajectory, Objective("energy", end_energy(rig, trajectory), "J")


@cache
def pumping() -> Motion:
    """One stroke in and one out, with rests on both stops, in two arcs."""
    simulation = Simulation(example_rig(), [1.0, 0.0, 0.4, 0.0])
    simulation.run(lambda _: 0.0, 0.5, rests=True, direction=-1.0)
    simulation.stroke(0.2)
    middle = simulation.breaks[-1]
    simulation.run(lambda _: -36.0, 0.15, rests=True)
    simulation.stroke(0.4)
    simulation.run(lambda _: 5.0, 0.3, rests=True)
    return pump_motion(simulation, [0, middle, simulation.breaks[-1]])


def told_speeds(rig: Rig, state: list[float], moves: list[tuple[float, float]]) -> Motion:
    """A motion in which the mass moves as told: (duration, slide speed), or (0, new position).

    Integrated in the momentum form, so that it shares no equation with the replay.
    """
    constants = Constants.of(rig)
    angle, speed, radial = state
    now = [angle, speed * (rig.wheel.inertia + rig.mass * radial**2), radial]
    time, nodes, breaks = [0.0], [[*now, 0.0]], [0]
    for duration, told in moves:
        if duration == 0.0:
            now = [now[0], now[1], told]
            time.append(time[-1])
            nodes.append([*now, 0.0])
            breaks.append(len(time) - 1)
            continue

        def rates(_, y, pace=told):
            turning = wheel_speed(constants, y[1], y[2])
            way = np.sign(turning)
            return [turning, momentum_rate(math, constants, y[0], turning, y[2], way), pace]

        found = solve_ivp(
            rates, (0.0, duration), now, rtol=1e-11, atol=1e-12, method="DOP853", dense_output=True
        )
        edges = np.linspace(0.0, duration, math.ceil(duration / STEP) + 1)
        begin = time[-1]
        for left, right in pairwise(edges):
            for at in left + (right - left) * PLACES:
                time.append(begin + at)
                nodes.append([*found.sol(at), told])
            breaks.append(len(time) - 1)
        now = found.y[:, -1].tolist()
    columns = np.array(nodes).T
    arcs = [0, breaks[-1]]
    trajectory = trajectory_of(rig, time, *columns, np.zeros(len(time)), breaks, arcs)
    task = Pump(
        duration=trajectory.duration,
        start_angle=angle,
        start_speed=speed,
        start_radial=radial,
    )
    return rig, task, trajectory, Objective("energy", end_energy(rig, trajectory), "J")
