# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law: the mass jumps between the ends of its stroke, at no cost of time.

A jump leaves the wheel's angle and angular momentum as they are. At every instant the mass is at
that end of the stroke where the wheel gains the most angular momentum per angle turned: without
friction, or with viscous friction alone, outside while it falls and inside while it rises. With
Coulomb friction it comes in a little before the lowest point and goes out a little after the top;
with quadratic friction it is the other way round. Only the two ends are considered; under
quadratic or Coulomb friction an interior position may be slightly better for a brief stretch.
"""

from __future__ import annotations

from dataclasses import replace

from rotorpump.laws.hybrid import march
from rotorpump.laws.ideal_rotation import rotate_ideally
from rotorpump.laws.ideal_spin_up import spin_up_ideally
from rotorpump.laws.pointwise import pointwise_preference
from rotorpump.laws.stretch import End, Instant, trajectory_along
from rotorpump.physics.beginning import check_beginning
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Measure, Pump, Rotate, SpinUp, Task, measure


def run_ideal(rig: Rig, task: Task, *, objective: str | None = None) -> LawRun:
    """Run the ideal law on a task.

    Parameters
    ----------
    rig : Rig
        The rig; speed and force limits of its slide are ignored.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.

    Returns
    -------
    LawRun
        Pump: the energy above rest at the end [J]. SpinUp: the time to the goal [s]. Rotate: the
        mean speed of steady rotation [rad/s]. If the goal is out of reach, ``reached`` is False,
        the value is not a number (infinity for a rotation that only gets faster), and ``message``
        says why.

    Raises
    ------
    InputError
        If the task cannot begin on this rig, or has no such objective.

    Notes
    -----
    The law is best per half swing and per turn. For a given clock time it need not be: a motion
    that ends with the mass moving, or pulled in at the last instant, may have more energy then.
    """
    wanted = measure(task, objective)
    if isinstance(task, Rotate):
        return rotate_ideally(rig, wanted)
    check_beginning(rig, task)
    radial = task.radial_in(rig)
    momentum = rig.inertia(radial) * task.start_speed
    start = Instant(0.0, task.start_angle, momentum, radial)
    if isinstance(task, SpinUp):
        return spin_up_ideally(rig, task, start, wanted)
    return _pump(rig, task, start, wanted)


def _pump(rig: Rig, task: Pump, start: Instant, wanted: Measure) -> LawRun:
    """Follow the law for the given time."""
    constants = Constants.of(rig)
    preference = pointwise_preference(constants)
    stretches = list(march(constants, preference, start, task.duration))
    last = stretches[-1].last
    energy = last.energy(constants)
    remarks = []
    for stretch in stretches:
        if stretch.end is End.STUCK:
            remarks.append(
                f"friction holds the wheel at {stretch.last.angle:.6g} rad from"
                f" {stretch.time[0]:.6g} s on"
            )
    more = replace(last, radial=constants.inner).energy(constants) - energy
    if last.radial == constants.outer and more > 0.0:
        remarks.append(
            f"the run ends with the mass outside; a jump inward at the end would add {more:.6g} J"
        )
    return LawRun(
        "ideal",
        Objective(wanted.name, energy, wanted.unit),
        trajectory_along(rig, start, stretches),
        True,
        "; ".join(remarks),
    )
