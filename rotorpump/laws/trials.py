# SPDX-License-Identifier: BSD-3-Clause
"""Runs of the practical law on a task that begins somewhere: pumping and spinning up."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.costs import cost_of_run, overheats
from rotorpump.laws.drive import controller_step, usable_drive
from rotorpump.laws.lead import ROWS, LeadRun, Leads, Plan, run_leads
from rotorpump.measures import Measure, measure
from rotorpump.physics.constants import Constants
from rotorpump.physics.energy import energy_above_rest
from rotorpump.physics.equations import wheel_speed
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Pump, SpinUp

Array = NDArray[np.float64]

LONGEST_SPIN_UP = 120.0
"""Small-swing periods after which a spin-up that has not met its goal is given up."""

STALE = 6.0
"""Small-swing periods without growth of energy after which a spin-up is given up."""

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
        What it reaches, in the unit of the objective; not a number if the goal is not met or the
        rotation is lost.
    merit : float
        Larger is better, also among runs without a value.
    slams : bool
        Whether the mass ran into an end stop that the drive should have stopped it at.
    overheats : bool, optional
        Whether a drive exceeds its continuous force.
    mean_speed : float, optional
        Mean speed of a rotation [rad/s].
    fast_enough : bool, optional
        Whether that is the mean speed that is asked for, or more.
    """

    run: LeadRun
    value: float
    merit: float
    slams: bool
    overheats: bool = False
    mean_speed: float = math.nan
    fast_enough: bool = True

    @property
    def reached(self) -> bool:
        """Whether the goal is met."""
        return self.fast_enough and not math.isnan(self.value)

    @property
    def within_limits(self) -> bool:
        """Whether the drives keep their limits."""
        return not (self.slams or self.overheats)


def energy_of(rig: Rig, states: Array) -> Array:
    """Energy above rest of sampled states, shape (6, n) [J]."""
    constants, slides = Constants.of(rig), _seen_slides(rig, states)
    return np.asarray(energy_above_rest(np, constants, states[0], states[1], slides))


def pace_of(rig: Rig, states: Array) -> Array:
    """Magnitude of the wheel speed of sampled states, shape (6, n) [rad/s]."""
    speed = wheel_speed(Constants.of(rig), states[1], _seen_slides(rig, states))
    return np.asarray(np.abs(speed))


def _seen_slides(rig: Rig, states: Array) -> Slides:
    """Place and speed of the mass in sampled states.

    A slide without any limit moves within one step of the controller; such a speed means nothing.
    """
    seen = states.copy()
    for axis in rig.driven:
        slide = rig.slide(axis)
        if math.isinf(slide.top_speed) and not slide.forceful:
            seen[ROWS[axis][1]] = 0.0
    return Slides(*seen[2:])


def begin(rig: Rig, task: Pump | SpinUp) -> tuple[float, ...]:
    """State in which a task begins, see `LeadRun`."""
    radial, tangential = task.place_in(rig)
    momentum = rig.inertia(radial, tangential) * task.start_speed
    return task.start_angle, momentum, radial, 0.0, tangential, 0.0


def slams(rig: Rig, run: LeadRun) -> bool:
    """Whether an end stop stopped the mass in place of a drive."""
    for axis in rig.driven:
        low, high = rig.stroke(axis)
        position, speed = (run.states[row] for row in ROWS[axis])
        seated = ((position >= high) | (position <= low)) & (speed == 0.0)
        arriving = np.flatnonzero(seated[1:] & ~seated[:-1])
        fastest = float(np.abs(speed[arriving]).max(initial=0.0))
        if fastest > SLAM * usable_drive(rig, axis, run.step).force / rig.mass * run.step:
            return True
    return False


def try_pump(
    rig: Rig, task: Pump, leads: Leads, *, objective: str | None = None, share: float = 1.0
) -> Trial:
    """Run for the given time.

    Parameters
    ----------
    rig, task : Rig, Pump
        What is to be done.
    leads : Leads
        The law's two numbers.
    objective : str, optional
        Name of the objective.
    share : float, optional
        Share of the limit on the drives' forces that is used.
    """
    steps = math.ceil(task.duration / controller_step(rig))
    plan = Plan(leads, task.duration / steps, share)
    run = run_leads(rig, begin(rig, task), plan, steps)
    value = _pumped(rig, run, measure(task, objective))
    return Trial(run, value, value, slams(rig, run), overheats(rig, run))


def _pumped(rig: Rig, run: LeadRun, wanted: Measure) -> float:
    """Objective of a pumped motion at its end."""
    if wanted.name == "energy":
        return float(energy_of(rig, run.states[:, -1:])[0])
    if wanted.name == "momentum":
        return abs(float(run.states[1, -1]))
    return float(pace_of(rig, run.states[:, -1:])[0])


def goal_measure(rig: Rig, task: SpinUp) -> tuple[Callable[[Array], Array], float]:
    """Return the quantity that a spin-up has to raise, as a function of states, and its goal."""
    if task.energy is not None:
        return lambda states: energy_of(rig, states), task.energy
    if task.speed is not None:
        return lambda states: pace_of(rig, states), task.speed
    return lambda states: np.abs(states[0]), math.pi


def try_spin_up(
    rig: Rig, task: SpinUp, leads: Leads, *, objective: str | None = None, share: float = 1.0
) -> Trial:
    """Run until the goal is met, or the energy has long stopped growing.

    Parameters
    ----------
    rig, task : Rig, SpinUp
        What is to be done.
    leads, objective, share
        See `try_pump`.
    """
    step = controller_step(rig)
    swing = rig.pendulum_period
    raised, goal = goal_measure(rig, task)
    stale = math.ceil(STALE * swing / step)

    def done(states: Array) -> bool:
        if np.any(raised(states[:, 1:]) >= goal):
            return True
        energy = energy_of(rig, states)
        if energy.size <= 2 * stale:
            return False
        return bool(energy[-stale:].max() <= 1.001 * energy[:-stale].max())

    steps = math.ceil(LONGEST_SPIN_UP * swing / step)
    run = run_leads(rig, begin(rig, task), Plan(leads, step, share), steps, done=done)
    values = raised(run.states)
    met = np.flatnonzero(values[1:] >= goal) + 1
    if met.size == 0:
        shortfall = float(values.max()) / goal - 1.0
        return Trial(run, math.nan, shortfall, slams(rig, run), overheats(rig, run))
    k = int(met[0])
    share_of_step = (goal - values[k - 1]) / (values[k] - values[k - 1])
    time = float((k - 1 + share_of_step) * step)
    run = run.cut(k)
    limits = slams(rig, run), overheats(rig, run)
    if task.deadline is not None and time > task.deadline:
        return Trial(run, math.nan, task.deadline / time, *limits)
    wanted = measure(task, objective)
    value = time if wanted.name == "time" else cost_of_run(rig, run, wanted)
    return Trial(run, value, -value, *limits)
