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

from rotorpump.checking.case import Case
from rotorpump.checking.first_principles import angular_momentum
from rotorpump.physics.constants import Constants
from rotorpump.physics.forces import accelerations
from rotorpump.physics.state import HOLD, Push, Slides
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


def nothing(_):
    return 0.0


def example_rig(**changes) -> Rig:
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0),
        "mass": 1.2,
        "radial": Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0),
        "friction": AxleFriction(viscous=0.05),
    }
    return Rig(**(parts | changes))


def two_axes(**changes) -> Rig:
    """Both slides, an unbalance, and all kinds of friction."""
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0, unbalance=0.06, unbalance_angle=0.8),
        "radial": Slide(stroke=(0.2, 0.4), force=60.0, rubbing=1.5),
        "tangential": Slide(stroke=(-0.15, 0.1), force=50.0, rubbing=1.0),
        "friction": AxleFriction(0.03, 0.05, 0.01, 0.02, 0.008),
    }
    return example_rig(**(parts | changes))


class Simulation:
    """Collects the nodes of one phase after the other; a state is [φ, ω, ρ, vρ, τ, vτ]."""

    def __init__(self, rig: Rig, state: list[float], load_torque=0.0, step=STEP) -> None:
        self.rig = rig
        self.load_torque, self.step = load_torque, step
        self.constants = Constants.of(rig, load_torque)
        self.state = [*state, rig.stroke("tangential")[0], 0.0] if len(state) == 4 else state
        self.time = [0.0]
        self.nodes = [[*self.state, 0.0, 0.0, 0.0, 0.0]]
        self.breaks = [0]

    def motion(self, forces, rests=(False, False), direction=None, ways=(0, 0)):
        """The motion of one phase as a function of the state."""
        sign = math.copysign(1.0, self.state[1]) if direction is None else direction
        rubbing = [way * _rubbing(self.rig, axis) for axis, way in self.axes(ways)]
        held = [rest or axis not in self.rig.driven for axis, rest in self.axes(rests)]

        def motion(state):
            pushes = [
                HOLD if stays else Push(force(state) - rubbed)
                for stays, force, rubbed in zip(held, forces, rubbing, strict=True)
            ]
            return accelerations(
                math, self.constants, *state[:2], Slides(*state[2:]), *pushes, sign
            )

        return motion

    def solve(self, motion, longest, until=None):
        """Integrate one phase from the present state, without keeping it."""

        def rates(_, state):
            found = motion(state)
            return [state[1], found.wheel, state[3], found.radial, state[5], found.tangential]

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

    def axes(self, values):
        return zip(("radial", "tangential"), values, strict=True)

    def run(self, force: Force, longest: float, until=None, rests=False, across=None, **known):
        """Add a phase: up to ``longest``, or until a function of the state crosses zero.

        ``force`` is that of the radial drive and ``across`` that of the tangential one; ``rests``
        holds the mass along the radial axis, or along both if it is a pair.
        """
        if until is None and longest <= 0.0:
            return
        forces = force, nothing if across is None else across
        rests = rests if isinstance(rests, tuple) else (rests, False)
        motion = self.motion(forces, rests, **known)
        found = self.solve(motion, longest, until)
        assert found.success
        assert until is None or found.status == 1, "the phase never ends"
        begin, length = self.time[-1], found.t[-1]
        edges = np.linspace(0.0, length, max(1, math.ceil(length / self.step)) + 1)
        for left, right in pairwise(edges):
            for at in left + (right - left) * PLACES:
                state = found.sol(at).tolist()
                there = motion(state)
                contacts = there.radial_contact, there.tangential_contact
                self.nodes.append([*state, *(push(state) for push in forces), *contacts])
                self.time.append(begin + at)
            self.breaks.append(len(self.time) - 1)
        self.state = found.y[:, -1].tolist()

    def stand(self, duration: float, force: float) -> None:
        """Add a phase in which neither wheel nor mass moves."""
        begin = self.time[-1]
        still = accelerations(
            math,
            self.constants,
            self.state[0],
            0.0,
            Slides(*self.state[2:]),
            HOLD,
            HOLD,
            0.0,
            stuck=True,
        )
        for at in duration * PLACES:
            contacts = still.radial_contact, still.tangential_contact
            self.nodes.append([*self.state, force, 0.0, *contacts])
            self.time.append(begin + at)
        self.breaks.append(len(self.time) - 1)

    def stroke(self, goal: float) -> None:
        """Add full force, constant speed and full braking, to rest at the radial ``goal``."""
        way = math.copysign(1.0, goal - self.state[2])
        strength, pace = self.rig.radial.force, self.rig.radial.speed
        self.run(lambda _: way * strength, 1.0, until=lambda s: way * s[3] - pace)
        self.state[3] = way * pace
        before = list(self.state)

        def solve(force, longest, until=None):
            return self.solve(self.motion((force, nothing)), longest, until)

        def miss(duration):
            self.state = before
            if duration > 0.0:
                self.state = solve(self.steady, duration).y[:, -1].tolist()
            braking = solve(lambda _: -way * strength, 1.0, until=lambda s: way * s[3])
            self.state = before
            return way * (braking.y[2, -1] - goal)

        duration = brentq(miss, 0.0, abs(goal - before[2]) / pace, xtol=1e-13)
        self.run(self.steady, duration)
        self.run(lambda _: -way * strength, 1.0, until=lambda s: way * s[3])
        self.state[2], self.state[3] = goal, 0.0

    def steady(self, state: list[float]) -> float:
        """Radial force at which a mass on the radial axis is not accelerated."""
        angle, speed, radial = state[:3]
        return -self.rig.mass * (self.rig.gravity * math.cos(angle) + radial * speed**2)

    def trajectory(self, arcs=None) -> Trajectory:
        columns = np.array(self.nodes).T
        slides = Slides(*columns[2:6])
        return trajectory_of(
            self.rig,
            self.time,
            columns[0],
            angular_momentum(self.rig, columns[1], slides),
            slides,
            (columns[6], columns[7]),
            self.breaks,
            [0, self.breaks[-1]] if arcs is None else arcs,
            contacts=(columns[8], columns[9]),
            load_torque=self.load_torque,
        )


def _rubbing(rig: Rig, axis: str) -> float:
    return rig.slide(axis).rubbing if axis in rig.driven else 0.0


def end_energy(rig: Rig, trajectory: Trajectory) -> float:
    """Energy above rest at the end, written out once more in fixed axes for a balanced wheel."""
    angle, speed = trajectory.angle[-1], trajectory.speed[-1]
    radial, radial_speed, tangential, tangential_speed = (
        column[-1] for column in trajectory.slides
    )
    along = np.array([math.sin(angle), -math.cos(angle)])
    across = np.array([math.cos(angle), math.sin(angle)])
    velocity = (radial_speed - tangential * speed) * along
    velocity = velocity + (tangential_speed + radial * speed) * across
    place = radial * along + tangential * across
    reach = math.hypot(*rig.lowest_place)
    kinetic = 0.5 * rig.wheel.inertia * speed**2 + 0.5 * rig.mass * float(velocity @ velocity)
    return float(kinetic + rig.mass * rig.gravity * (reach + place[1]))


def case_of(rig: Rig) -> Case:
    """A rig that pumps for energy."""
    return Case(rig, Pump(duration=1.0, start_angle=1.0), "energy")


Motion = tuple[Rig, Pump, Trajectory, Objective]


def pump_motion(simulation: Simulation, arcs=None) -> Motion:
    """What was simulated, as the answer to the task of pumping like this."""
    rig, trajectory = simulation.rig, simulation.trajectory(arcs)
    return rig, *pump_task(trajectory, rig)


def pump_task(trajectory: Trajectory, rig: Rig, start_speed: float | None = None):
    task = Pump(
        duration=trajectory.duration,
        start_angle=trajectory.angle[0],
        start_speed=trajectory.speed[0] if start_speed is None else start_speed,
        start_radial=trajectory.radial[0],
        start_tangential=trajectory.tangential[0],
    )
    if rig.wheel.unbalance == 0.0:
        return task, trajectory, Objective("energy", end_energy(rig, trajectory), "J")
    return task, trajectory, Objective("energy", float(trajectory.energy[-1]), "J")


@cache
def pumping() -> Motion:
    """One stroke in and one out, with rests on both stops, in two arcs."""
    simulation = Simulation(example_rig(), [1.0, 0.0, 0.4, 0.0])
    simulation.run(nothing, 0.5, rests=True, direction=-1.0)
    simulation.stroke(0.2)
    middle = simulation.breaks[-1]
    simulation.run(lambda _: -36.0, 0.15, rests=True)
    simulation.stroke(0.4)
    simulation.run(lambda _: 5.0, 0.3, rests=True)
    return pump_motion(simulation, [0, middle, simulation.breaks[-1]])


@cache
def weaving() -> Motion:
    """Both slides at work, with everything on that rubs: off one stop, braked, off the other."""
    simulation = Simulation(two_axes(), [0.6, 3.0, 0.4, 0.0, 0.1, 0.0], step=0.01)
    aside = {"across": lambda _: 45.0}
    simulation.run(lambda _: 5.0, 0.1, rests=(True, True), **aside)
    seated = {"rests": (False, True), "ways": (-1, 0)} | aside
    simulation.run(lambda _: -58.0, 1.0, until=lambda s: s[2] - 0.33, **seated)
    middle = simulation.breaks[-1]
    simulation.run(lambda _: 30.0, 1.0, until=lambda s: s[3], **seated)
    simulation.state[3] = 0.0
    simulation.run(lambda _: 20.0, 0.05, across=lambda _: -48.0, ways=(1, -1))
    return pump_motion(simulation, [0, middle, simulation.breaks[-1]])
