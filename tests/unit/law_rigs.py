# SPDX-License-Identifier: BSD-3-Clause
"""Rigs on which the practical law is tried, and the balance of energy of its runs."""

from __future__ import annotations

import math

import numpy as np

from rotorpump.laws.drive import controller_step
from rotorpump.laws.lead import ROWS, LeadRun, Leads, Plan, run_leads
from rotorpump.laws.practical import sampled_trajectory
from rotorpump.laws.trials import begin, energy_of
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import AXES, Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump

HALF = Leads(0.5, 0.5)


def rig_on(**changes) -> Rig:
    parts = {
        "wheel": Wheel(inertia=0.25, mass=3.0),
        "mass": 1.2,
        "radial": Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0),
        "friction": AxleFriction(viscous=0.05, coulomb=0.04, quadratic=0.003),
    }
    return Rig(**(parts | changes))


def slide_on(half: float = 0.1, **changes) -> Slide:
    """A tangential slide, the radial axis in its middle."""
    return Slide(stroke=(-half, half), **({"speed": 0.6, "force": 40.0} | changes))


RIG = rig_on()


def run_for(rig: Rig, task: Pump, *, finer: int = 1, leads: Leads = HALF) -> LeadRun:
    step = controller_step(rig) / finer
    steps = math.ceil(task.duration / step)
    return run_leads(rig, begin(rig, task), Plan(leads, task.duration / steps), steps)


def audit(rig: Rig, run: LeadRun) -> tuple[float, float]:
    """Drive work less friction losses less rise of energy, and the work of the drives [J].

    A drive's force is constant within a step, so its work there is force times way. A stop does
    no work: it holds a mass at rest.
    """
    trajectory, axle = sampled_trajectory(rig, run), rig.friction
    spin = np.abs(trajectory.speed)
    smooth = axle.coulomb * spin + axle.viscous * spin**2 + axle.quadratic * spin**3
    # a node holds the load on its left; the one on its right may differ by a jump of the force
    load = axle.load_arm * trajectory.axle_load[1:] * 0.5 * (spin[1:] + spin[:-1])
    loss = float(np.sum(0.5 * (smooth[1:] + smooth[:-1]) + load) * run.step)
    work = 0.0
    for axis in rig.driven:
        way = np.diff(run.states[ROWS[axis][0]])
        work += float(run.forces[AXES.index(axis)] @ way)
        loss += rig.slide(axis).rubbing * float(np.abs(way).sum())
    energy = energy_of(rig, run.states)
    return work - loss - float(energy[-1] - energy[0]), work
