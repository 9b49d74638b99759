# SPDX-License-Identifier: BSD-3-Clause
"""The ideal law: the mass jumps along its slides, at no cost of time.

A jump leaves the wheel's angular momentum as it is. At every instant the mass is where the wheel
gains the most angular momentum per angle turned: without friction, or with viscous friction alone,
outside while it falls and inside while it rises; sideways on the falling side, and next to the axle
where a heavy mass rises steeply. With Coulomb friction it comes in a little before the lowest point
and goes out a little after the top; with quadratic friction it is the other way round. The ends of
a stroke and the point closest to the axle are considered; another position may be slightly better
for a stretch.
"""

from __future__ import annotations

from rotorpump.laws.hybrid import march
from rotorpump.laws.ideal_rotation import rotate_ideally
from rotorpump.laws.ideal_spin_up import spin_up_ideally
from rotorpump.laws.idealization import idealized, remarks_on
from rotorpump.laws.moves import Instant, corners_of, placed
from rotorpump.laws.pointwise import pointwise_rule
from rotorpump.laws.stretch import End, trajectory_along
from rotorpump.measures import Measure, measure
from rotorpump.physics.beginning import check_beginning
from rotorpump.physics.constants import Constants
from rotorpump.physics.state import Slides
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Pump, Rotate, SpinUp, Task


def run_ideal(rig: Rig, task: Task, *, objective: str | None = None) -> LawRun:
    """Run the ideal law on a task.

    Parameters
    ----------
    rig : Rig
        The rig; the limits of its drives are ignored.
    task : Pump, SpinUp or Rotate
        What is to be achieved.
    objective : str, optional
        Name of the objective; the default one of the task if not given.

    Returns
    -------
    LawRun
        With what the law reaches, see `rotorpump.measures`. Heat is infinite. If the goal is out of
        reach, ``reached`` is False, the value is not a number (infinity for the speed of a
        rotation that only gets faster), and ``message`` says why.

    Raises
    ------
    InputError
        If the task cannot begin on this rig, or has no such objective.

    Notes
    -----
    The law is best per half swing and per turn, in swing and momentum. For a given clock time it
    need not be: a motion that ends with the mass moving, or pulled in at the last instant, may have
    more energy then, and one with the mass inside for longer turns faster at the same momentum. It
    does not look for the least work: that is what this law takes.

    Three simplifications are named in ``message`` where they matter. Friction that grows with the
    axle's load is taken at the static load. Two driven axes follow the two laws of one axis, each
    with the mass where it is along the other. A sideways jump, which turns the wheel, does so
    without drag. Dry friction takes nothing from a jump; a move that takes its time it may even
    help, so that under much of it the law is no bound.
    """
    wanted = measure(task, objective)
    check_beginning(rig, task)
    ideal, remarks = idealized(rig), remarks_on(rig, wanted)
    if isinstance(task, Rotate):
        return rotate_ideally(ideal, task, wanted, remarks)
    radial, tangential = task.place_in(rig)
    place = Slides(radial, 0.0, tangential)
    momentum = rig.inertia(radial, tangential) * task.start_speed
    start = Instant(0.0, task.start_angle, momentum, place)
    if isinstance(task, SpinUp):
        return spin_up_ideally(ideal, task, start, wanted, remarks)
    return _pump(ideal, task, start, wanted, remarks)


def _pump(rig: Rig, task: Pump, start: Instant, wanted: Measure, remarks: list[str]) -> LawRun:
    """Follow the law for the given time."""
    constants = Constants.of(rig)
    stretches = list(march(constants, pointwise_rule(constants), start, task.duration))
    last = stretches[-1].last
    value = _value(constants, wanted, last)
    if stretches[-1].end is End.STUCK:
        where = f"{last.angle:.6g} rad from {stretches[-1].time[0]:.6g} s on"
        remarks = [*remarks, f"friction holds the wheel at {where}"]
    corners = [placed(constants, last, slides) for slides in corners_of(constants)]
    most = max(_value(constants, wanted, corner) for corner in corners)
    if most > value * (1.0 + 1e-12):
        words = f"a last jump at the end would add {most - value:.6g} {wanted.unit}"
        remarks = [*remarks, words]
    return LawRun(
        "ideal",
        Objective(wanted.name, value, wanted.unit),
        trajectory_along(rig, start, stretches),
        True,
        "; ".join(remarks),
    )


def _value(constants: Constants, wanted: Measure, instant: Instant) -> float:
    """Return what a pumped motion is worth that ends like this."""
    if wanted.name == "energy":
        return instant.energy(constants)
    return abs(instant.momentum) if wanted.name == "momentum" else instant.pace(constants)
