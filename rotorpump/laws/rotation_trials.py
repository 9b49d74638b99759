# SPDX-License-Identifier: BSD-3-Clause
"""Runs of the practical law that rotate the wheel until its turns repeat."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from rotorpump.laws.costs import cost_of_run, overheats
from rotorpump.laws.drive import controller_step
from rotorpump.laws.lead import LeadRun, Leads, Plan, run_leads
from rotorpump.laws.trials import Trial, slams
from rotorpump.measures import Measure, measure
from rotorpump.rig.rig import Rig
from rotorpump.tasks import Rotate

Array = NDArray[np.float64]

MOST_TURNS = 80
"""Turns after which a rotation that has not become steady is given up."""

STEADY = 1e-3
"""Relative change of the mean time per turn, to come, below which a rotation is steady."""

SPELL = 5
"""Turns over which that mean is taken: the sampled controller makes single turns jitter."""

SHORT = 1e-3
"""Share of the asked mean speed that a rotation may lack."""


def try_rotation(
    rig: Rig,
    speed: float,
    leads: Leads,
    *,
    task: Rotate | None = None,
    objective: str | None = None,
    share: float = 1.0,
) -> Trial:
    """Run from a speed at the lowest point, the mass outside, until the turns repeat.

    Parameters
    ----------
    rig : Rig
        The rig.
    speed : float
        Wheel speed to begin with [rad/s].
    leads : Leads
        The law's two numbers.
    task : Rotate, optional
        Load, direction and mean speed.
    objective : str, optional
        Name of the objective.
    share : float, optional
        Share of the limit on the drives' forces that is used.
    """
    task = Rotate() if task is None else task
    seen = rig if task.direction == 1 else rig.mirrored()
    step = controller_step(rig)

    def done(states: Array) -> bool:
        durations = np.diff(_turn_times(states, step))
        return bool(states[1].min() < 0.0 or _steady(durations) or durations.size >= MOST_TURNS)

    radial, tangential = seen.stroke("radial")[1], seen.stroke("tangential")[0]
    start = (0.0, seen.inertia(radial, tangential) * speed, radial, 0.0, tangential, 0.0)
    steps = math.ceil(MOST_TURNS * rig.pendulum_period / step)
    plan = Plan(leads, step, share, task.load_torque)
    run = run_leads(seen, start, plan, steps, done=done)
    trial = _rated(seen, run, task, measure(task, objective))
    if task.direction == 1:
        return trial
    return replace(trial, run=trial.run.mirrored())


def _rated(rig: Rig, run: LeadRun, task: Rotate, wanted: Measure) -> Trial:
    """Cut out the last turn of a run, and say what it is worth."""
    times = _turn_times(run.states, run.step)
    if run.states[1].min() < 0.0 or not _steady(np.diff(times)):
        return Trial(run, math.nan, -math.inf, False)
    first, last = (int(time / run.step) for time in times[-2:])
    turn = _part(run, first, last + 2)
    mean = 2.0 * math.pi * SPELL / float(times[-1] - times[-1 - SPELL])
    spell = _part(run, int(times[-1 - SPELL] / run.step), int(times[-1] / run.step))
    limits = slams(rig, run), overheats(rig, spell)
    value = _worth(rig, spell, task, wanted, mean)
    if mean < (task.mean_speed or 0.0) * (1.0 - SHORT):
        return Trial(turn, value, mean, *limits, mean, fast_enough=False)
    return Trial(turn, value, value if wanted.more_is_better else -value, *limits, mean)


def _worth(rig: Rig, spell: LeadRun, task: Rotate, wanted: Measure, mean: float) -> float:
    """Objective of a steady rotation, costs per turn."""
    if wanted.name == "speed":
        return mean
    if wanted.name == "load power":
        return task.load_torque * mean
    return cost_of_run(rig, spell, wanted) / SPELL


def _part(run: LeadRun, first: int, last: int) -> LeadRun:
    """Return the steps from ``first`` to ``last``."""
    states, forces = run.states[:, first : last + 1], run.forces[:, first:last]
    return LeadRun(run.leads, run.step, states, forces)


def _turn_times(states: Array, step: float) -> Array:
    """Return the times at which the turns end [s]."""
    turns = np.arange(1, math.floor(states[0].max() / (2.0 * math.pi)) + 1)
    reached = np.maximum.accumulate(states[0])
    samples = np.arange(reached.size) * step
    return np.asarray(np.interp(2.0 * math.pi * turns, reached, samples))


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
