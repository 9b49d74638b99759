# SPDX-License-Identifier: BSD-3-Clause
"""Steady rotation under the ideal law."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from rotorpump.laws.idealization import cost_of
from rotorpump.laws.moves import Instant, placed
from rotorpump.laws.stretch import Stretch, trajectory_along, work_along
from rotorpump.laws.turns import FULL_TURN, slowest_turn, steady_momentum, turn_from
from rotorpump.laws.turns import lowest_passes as passes_of
from rotorpump.measures import Measure
from rotorpump.physics.constants import Constants
from rotorpump.rig.rig import Rig
from rotorpump.solution.law_run import LawRun
from rotorpump.solution.objective import Objective
from rotorpump.tasks import Rotate

SHORT = 1e-3
"""Share of the asked mean speed that a rotation may lack."""


@dataclass(frozen=True)
class _Turn:
    """A turn of a rotation, or the attempt at one.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    start : Instant
        Where the mass is before the first stretch.
    stretches : sequence of Stretch
        The motion.
    """

    constants: Constants
    start: Instant
    stretches: Sequence[Stretch]

    @property
    def speed(self) -> float:
        """Mean speed of a whole turn [rad/s]."""
        return FULL_TURN / float(self.stretches[-1].time[-1])

    def balance(self) -> tuple[float, str]:
        """Energy that the moves add [J], and words on it and on what takes it.

        Counted from the first place of the mass to the same place, so that the figures do not
        depend on where a move falls.
        """
        constants, first = self.constants, self.stretches[0].first
        taken = sum(s.first.energy(constants) - s.last.energy(constants) for s in self.stretches)
        end = placed(constants, self.stretches[-1].last, first.slides)
        pumped = end.energy(constants) - first.energy(constants) + taken
        turned = sum(abs(float(s.angle[-1] - s.angle[0])) for s in self.stretches)
        load = constants.load_torque * turned
        words = f"friction takes {taken - load:.6g} J"
        return pumped, f"{words} and the load {load:.6g} J" if load > 0.0 else words


def rotate_ideally(rig: Rig, task: Rotate, measure: Measure, remarks: list[str]) -> LawRun:
    """Find the steady rotation of the ideal law.

    Parameters
    ----------
    rig : Rig
        The rig as the law sees it; the limits of its drives are ignored.
    task : Rotate
        Direction and load; a mean speed is compared with the law's own, which it cannot choose.
    measure : Measure
        The objective.
    remarks : list of str
        What has been said about the law on this rig.

    Returns
    -------
    LawRun
        With one turn that begins at the lowest point, before the move that may be due there. If
        the slowest turn fails: not a number, and that turn. If no friction grows with speed: an
        infinite speed, and one turn of the climb.

    Notes
    -----
    The slowest turn is the one of a wheel let go where the weight just overcomes friction and load
    again, past the stretch in which it cannot. No part of the friction torque falls with speed, so
    H² gains no more over a turn the larger it is: if the slowest turn does not come round again
    none is steady, and if it does exactly one is, and stable, unless friction has no part that
    grows.
    """
    if task.direction == -1:
        other = rotate_ideally(rig.mirrored(), replace(task, direction=1), measure, remarks)
        return replace(other, trajectory=other.trajectory.mirrored())
    constants = Constants.of(rig, task.load_torque)
    slowest = slowest_turn(constants)
    passes = passes_of(slowest)
    if len(passes) < 2:
        failed = _Turn(constants, slowest[0].first, slowest)
        return _run(rig, measure, math.nan, failed, [*remarks, _infeasible(failed)])
    if constants.viscous == 0.0 and constants.quadratic == 0.0:
        climbing = _Turn(constants, *turn_from(constants, passes[1]))
        value = _value(measure, climbing, math.inf)
        return _run(rig, measure, value, climbing, [*remarks, _unbounded(climbing)], reached=False)
    turn = _Turn(constants, *turn_from(constants, steady_momentum(constants, passes[0])))
    if task.mean_speed is not None:
        remarks = [*remarks, _own_speed(task.mean_speed, turn.speed)]
    fast_enough = turn.speed >= (task.mean_speed or 0.0) * (1.0 - SHORT)
    value = _value(measure, turn, turn.speed)
    return _run(rig, measure, value, turn, remarks, reached=fast_enough)


def _value(measure: Measure, turn: _Turn, speed: float) -> float:
    """Return what a turn is worth that is made at this mean speed [rad/s]."""
    if measure.name == "speed":
        return speed
    if measure.name == "load power":
        return float(turn.constants.load_torque * speed)
    return cost_of(measure, work_along(turn.constants, turn.start, turn.stretches))


def _own_speed(asked: float, own: float) -> str:
    return (
        f"the instantaneous law turns at {own:.6g} rad/s on average, which it cannot choose;"
        f" {asked:.6g} rad/s is asked for"
    )


def _infeasible(turn: _Turn) -> str:
    if turn.stretches[0].direction == 0:
        return "no steady rotation: friction holds the wheel wherever it stands"
    pumped, taken = turn.balance()
    return (
        "no steady rotation: in the slowest turn, let go where it just starts, pumping adds"
        f" {pumped:.6g} J and {taken} until the wheel stops"
        f" {math.pi - turn.stretches[-1].last.angle:.6g} rad short of the top; faster turns fare"
        " worse"
    )


def _unbounded(turn: _Turn) -> str:
    pumped, taken = turn.balance()
    return (
        "the speed is unbounded: no friction grows with it, and pumping adds"
        f" {pumped:.6g} J per turn where {taken}; the trajectory is one turn of the climb"
    )


def _run(
    rig: Rig,
    measure: Measure,
    value: float,
    turn: _Turn,
    remarks: Sequence[str],
    *,
    reached: bool | None = None,
) -> LawRun:
    load = float(turn.constants.load_torque)
    return LawRun(
        "ideal",
        Objective(measure.name, value, measure.unit),
        trajectory_along(rig, turn.start, turn.stretches, load),
        not math.isnan(value) if reached is None else reached,
        "; ".join(remarks),
    )
