# SPDX-License-Identifier: BSD-3-Clause
"""Runs of the practical law with given leads, one function per kind of task."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.lead import LeadRun, Leads, controller_step, run_leads, usable_drive
from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import wheel_speed
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Pump, SpinUp

Array = NDArray[np.float64]

LONGEST_SPIN_UP = 120.0
"""Small-swing periods after which a spin-up that has not met its goal is given up."""

STALE = 6.0
"""Small-swing periods without growth of energy after which a spin-up is given up."""

MOST_TURNS = 80
"""Turns after which a rotation that has not become steady is given up."""

STEADY = 1e-3
"""Relative change of the mean time per turn, to come, below which a rotation is steady."""

SPELL = 5
"""Turns over which that mean is taken: the sampled controller makes single turns jitter."""

SLAM = 2.0
"""Steps of full braking to which the speed of a mass that arrives at a stop may amount."""


@dataclass(frozen=True, eq=False)
class Trial:
    """A run of the practical law on a task.

    Parameters
    ----------
    run : LeadRun
        The samples; for a rotation, those of about one turn.
    value : float
        What it reaches: energy [J], time [s] or mean speed [rad/s]; not a number if the goal is
        not met or the rotation is lost.
    merit : float
        Larger is better, also among runs without a value.
    slams : bool
        Whether the mass ran into an end stop that the drive should have stopped it at.
    """

    run: LeadRun
    value: float
    merit: float
    slams: bool

    @property
    def reached(self) -> bool:
        """Whether the goal is met."""
        return not math.isnan(self.value)


def energy_of(rig: Rig, states: Array) -> Array:
    """Energy above rest of sampled states [J].

    A slide without any limit moves within one step of the controller; such a speed means nothing.
    """
    angle, momentum, radial, slide_speed = states
    if math.isinf(rig.radial.speed) and math.isinf(rig.radial.force):
        slide_speed = np.zeros_like(slide_speed)
    return np.asarray(
        energy_above_rest(np, Constants.of(rig), angle, momentum, radial, slide_speed)
    )


def begin(rig: Rig, task: Pump | SpinUp) -> tuple[float, float, float, float]:
    """State in which a task begins: angle, momentum, position and speed of the mass."""
    radial = task.radial_in(rig)
    return task.start_angle, rig.inertia(radial) * task.start_speed, radial, 0.0


def slams(rig: Rig, run: LeadRun) -> bool:
    """Whether an end stop stopped the mass in place of the drive."""
    inner, outer = rig.radial.stroke
    position, speed = run.states[2], run.states[3]
    seated = ((position >= outer) | (position <= inner)) & (speed == 0.0)
    arriving = np.flatnonzero(seated[1:] & ~seated[:-1])
    fastest = float(np.abs(speed[arriving]).max(initial=0.0))
    _, force = usable_drive(rig, run.step)
    return fastest > SLAM * force / rig.mass * run.step


def try_pump(rig: Rig, task: Pump, leads: Leads) -> Trial:
    """Run for the given time."""
    steps = math.ceil(task.duration / controller_step(rig))
    run = run_leads(rig, begin(rig, task), leads, task.duration / steps, steps)
    energy = float(energy_of(rig, run.states[:, -1:])[0])
    return Trial(run, energy, energy, slams(rig, run))


def goal_measure(rig: Rig, task: SpinUp) -> tuple[Callable[[Array], Array], float]:
    """Return the quantity that a spin-up has to raise, as a function of states, and its goal."""
    if task.energy is not None:
        return lambda states: energy_of(rig, states), task.energy
    if task.speed is not None:
        constants = Constants.of(rig)
        return lambda states: np.abs(wheel_speed(constants, states[1], states[2])), task.speed
    return lambda states: np.abs(states[0]), math.pi


def try_spin_up(rig: Rig, task: SpinUp, leads: Leads) -> Trial:
    """Run until the goal is met, or the energy has long stopped growing."""
    step = controller_step(rig)
    swing = rig.pendulum_period
    measure, goal = goal_measure(rig, task)
    stale = math.ceil(STALE * swing / step)

    def done(states: Array) -> bool:
        if np.any(measure(states[:, 1:]) >= goal):
            return True
        energy = energy_of(rig, states)
        if energy.size <= 2 * stale:
            return False
        return bool(energy[-stale:].max() <= 1.001 * energy[:-stale].max())

    steps = math.ceil(LONGEST_SPIN_UP * swing / step)
    run = run_leads(rig, begin(rig, task), leads, step, steps, done=done)
    values = measure(run.states)
    met = np.flatnonzero(values[1:] >= goal) + 1
    if met.size == 0:
        return Trial(run, math.nan, float(values.max()), slams(rig, run))
    k = int(met[0])
    share = (goal - values[k - 1]) / (values[k] - values[k - 1])
    time = float((k - 1 + share) * step)
    run = run.cut(k)
    return Trial(run, time, -time, slams(rig, run))


def try_rotation(rig: Rig, speed: float, leads: Leads) -> Trial:
    """Run from a speed at the lowest point, mass outside, until the turns repeat."""
    outer = rig.radial.stroke[1]
    step = controller_step(rig)

    def turn_times(states: Array) -> Array:
        turns = np.arange(1, math.floor(states[0].max() / (2.0 * math.pi)) + 1)
        reached = np.maximum.accumulate(states[0])
        samples = np.arange(reached.size) * step
        return np.asarray(np.interp(2.0 * math.pi * turns, reached, samples))

    def done(states: Array) -> bool:
        durations = np.diff(turn_times(states))
        return bool(states[1].min() < 0.0 or _steady(durations) or durations.size >= MOST_TURNS)

    start = (0.0, rig.inertia(outer) * speed, outer, 0.0)
    steps = math.ceil(MOST_TURNS * rig.pendulum_period / step)
    run = run_leads(rig, start, leads, step, steps, done=done)
    times = turn_times(run.states)
    if run.states[1].min() < 0.0 or not _steady(np.diff(times)):
        return Trial(run, math.nan, -math.inf, False)
    first, last = (int(time / step) for time in times[-2:])
    turn = LeadRun(leads, step, run.states[:, first : last + 3], run.forces[first : last + 2])
    value = 2.0 * math.pi * SPELL / float(times[-1] - times[-1 - SPELL])
    return Trial(turn, value, value, slams(rig, run))


def _steady(durations: Array) -> bool:
    """Whether the mean time per turn has come close to where it tends.

    From one spell to the next its changes shrink geometrically, which tells what is still to come.
    """
    if durations.size < 3 * SPELL:
        return False
    spells = durations[-3 * SPELL :].reshape(3, SPELL).mean(axis=1)
    before, last = np.abs(np.diff(spells))
    ratio = min(last / before, 0.99) if before > 0.0 else 0.0
    return bool(last * max(ratio / (1.0 - ratio), 1.0) < STEADY * spells[-1])
