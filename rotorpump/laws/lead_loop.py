# SPDX-License-Identifier: BSD-3-Clause
"""The compiled loop of the practical law, one for each structure of rig.

What a rig does not have (a friction, an unbalance, a second axis, a limit) is left out of the
loop's equations, so that a plain rig runs as fast as if nothing else existed.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import Any, NamedTuple

import casadi

from rotorpump.laws.carriage import Carriages, step_forward
from rotorpump.laws.drive import Drive, unlimited
from rotorpump.laws.lead_rule import Present, middle_of, wants_high
from rotorpump.laws.tracking import wanted_acceleration, within_limits
from rotorpump.physics.constants import Constants
from rotorpump.physics.equations import contact_forces, motion_along, wheel_speed
from rotorpump.physics.forces import accelerations
from rotorpump.physics.state import HOLD, Push, Slides
from rotorpump.rig.rig import AXES, Rig

CHUNK = 256
"""Steps that one call of the compiled loop makes."""


class Structure(NamedTuple):
    """What a rig has, as far as it shapes the loop.

    Parameters
    ----------
    axes : tuple of str
        Driven axes.
    absent : tuple of str
        Fields of `Constants` that are zero.
    unlimited : tuple of tuple of str
        Fields of `Drive` that are infinite, for each driven axis.
    relaxed : tuple of bool
        Whether the drive lets a stop bear the load of a seated mass, for each driven axis.
    displaced : bool
        Whether an unbalance or a held offset displaces the rule.
    """

    axes: tuple[str, ...]
    absent: tuple[str, ...]
    unlimited: tuple[tuple[str, ...], ...]
    relaxed: tuple[bool, ...]
    displaced: bool

    @property
    def ramped(self) -> tuple[str, ...]:
        """Axes whose force has a limited rate, and so a memory."""
        pairs = zip(self.axes, self.unlimited, strict=True)
        return tuple(axis for axis, missing in pairs if "force_rate" not in missing)

    @property
    def size(self) -> int:
        """Number of states of the loop."""
        return 2 + 2 * len(self.axes) + len(self.ramped)


def structure_of(
    rig: Rig, constants: Constants, drives: tuple[Drive, ...], offsets: tuple[float, ...]
) -> Structure:
    """Return what shapes the loop of a rig."""
    return Structure(
        rig.driven,
        tuple(name for name, value in constants._asdict().items() if value == 0.0),
        tuple(
            tuple(name for name, value in drive._asdict().items() if unlimited(value))
            for drive in drives
        ),
        tuple(
            slide.bearing
            and (slide.motor_constant is not None or math.isfinite(slide.continuous_force))
            for slide in rig.slides
        ),
        any(offset != 0.0 for offset in offsets),
    )


class Numbers(NamedTuple):
    """Numbers (or symbols) that a run of the loop takes.

    Parameters
    ----------
    constants : Constants
        The rig's numbers.
    drives : tuple of Drive
        The drive of each driven axis.
    offsets : tuple of float
        Angle by which the rule of each driven axis is displaced [rad].
    leads : tuple of float
        The two leads.
    step : float
        Step of the controller [s].
    """

    constants: Constants
    drives: tuple[Drive, ...]
    offsets: tuple[Any, ...]
    leads: tuple[Any, Any]
    step: Any

    def present(self, structure: Structure) -> list[Any]:
        """Those that are not absent, in the order of `named`."""
        flat = [v for k, v in self.constants._asdict().items() if k not in structure.absent]
        for drive, missing in zip(self.drives, structure.unlimited, strict=True):
            flat += [v for k, v in drive._asdict().items() if k not in missing]
        flat += self.offsets if structure.displaced else ()
        return [*flat, *self.leads, self.step]

    @classmethod
    def named(cls, structure: Structure, values: Iterator[Any]) -> Numbers:
        """Numbers from those that are present, with plain ones for those that are absent."""
        constants = Constants(
            *(0.0 if k in structure.absent else next(values) for k in Constants._fields)
        )
        drives = tuple(
            Drive(*(math.inf if k in missing else next(values) for k in Drive._fields))
            for missing in structure.unlimited
        )
        offsets = tuple(next(values) if structure.displaced else 0.0 for _ in structure.axes)
        return cls(constants, drives, offsets, (next(values), next(values)), next(values))

    @classmethod
    def count(cls, structure: Structure) -> int:
        """How many are present."""
        axes = len(structure.axes)
        missing = len(structure.absent) + sum(len(names) for names in structure.unlimited)
        shifts = axes if structure.displaced else 0
        return len(Constants._fields) + axes * len(Drive._fields) - missing + shifts + 3


@cache
def compiled_loop(structure: Structure) -> Any:
    """Compile CHUNK steps: (state, numbers of each step) to histories of state and forces.

    The state is angle, momentum, then position and speed along each driven axis, then the last
    force along each axis whose force has a limited rate.
    """
    state = casadi.SX.sym("x", structure.size)
    symbols = casadi.SX.sym("p", Numbers.count(structure))
    numbers = Numbers.named(structure, iter(casadi.vertsplit(symbols)))
    after, forces = _Loop.of(structure, state, numbers).advanced()
    one = casadi.Function(
        "step",
        [state, symbols],
        [casadi.vertcat(*after), casadi.vertcat(*forces)],
        {"cse": True},
    )
    return one.mapaccum(CHUNK)


@dataclass(frozen=True)
class _Loop:
    """Symbols of one step."""

    structure: Structure
    c: Constants
    drives: dict[str, Drive]
    offsets: dict[str, Any]
    leads: tuple[Any, Any]
    step: Any
    angle: Any
    momentum: Any
    slides: Slides
    last: dict[str, Any]

    @classmethod
    def of(cls, structure: Structure, state: Any, numbers: Numbers) -> _Loop:
        """Name the parts of the state."""
        c, axes = numbers.constants, structure.axes
        parts = casadi.vertsplit(state)
        places = {"radial": (c.radial_low, 0.0), "tangential": (c.tangential_low, 0.0)}
        for k, axis in enumerate(axes):
            places[axis] = (parts[2 + 2 * k], parts[3 + 2 * k])
        first = 2 + 2 * len(axes)
        return cls(
            structure,
            c,
            dict(zip(axes, numbers.drives, strict=True)),
            dict(zip(axes, numbers.offsets, strict=True)),
            numbers.leads,
            numbers.step,
            parts[0],
            parts[1],
            Slides(*places["radial"], *places["tangential"]),
            {axis: parts[first + k] for k, axis in enumerate(structure.ramped)},
        )

    def advanced(self) -> tuple[list[Any], list[Any]]:
        """State after the step, and the drives' forces during it."""
        carriages = Carriages.of(
            self.c, self.structure.axes, self.angle, self.momentum, self.slides
        )
        goals = {axis: self._goal(axis, carriages) for axis in self.structure.axes}
        forces = self._forces(goals, carriages)
        angle, momentum, slides = step_forward(self.c, carriages, forces, self.step)
        after = [angle, momentum]
        for axis in self.structure.axes:
            after += [getattr(slides, axis), getattr(slides, f"{axis}_speed")]
        after += [forces[axis] for axis in self.structure.ramped]
        return after, [forces[axis] for axis in self.structure.axes]

    def _goal(self, axis: str, carriages: Carriages) -> Any:
        """End of the stroke that the law wants."""
        # the momentum of a wheel that friction holds is the sliding mass's alone
        momentum = self.momentum
        if carriages.dry:
            momentum = casadi.if_else(carriages.stuck, 0.0, momentum)
        now = Present(self.angle, momentum, self.slides, carriages.stuck)
        high = wants_high(self.c, axis, now, self.drives[axis], self.leads, self.offsets[axis])
        return casadi.if_else(high, *reversed(self.c.stroke(axis)))

    def _forces(self, goals: dict[str, Any], carriages: Carriages) -> dict[str, Any]:
        """Return the forces of the drives, from the accelerations that they are to give."""
        now = Present(self.angle, self.momentum, self.slides)
        present = self._present_accelerations(carriages)
        wanted: dict[str, Any] = dict.fromkeys(AXES, 0.0)
        for axis, goal in goals.items():
            wanted[axis] = wanted_acceleration(
                self.c, axis, now, self.drives[axis], goal, self.step, present.get(axis)
            )
            if len(goals) == 2:
                # what one drive cannot give would disturb the other one
                most = self.drives[axis].force / self.c.mass
                wanted[axis] = casadi.fmax(-most, casadi.fmin(most, wanted[axis]))
        needed = dict(zip(AXES, self._needed(wanted, carriages), strict=True))
        forces = {}
        for k, axis in enumerate(self.structure.axes):
            speed = getattr(self.slides, f"{axis}_speed")
            rubbing = getattr(self.c, f"{axis}_rubbing")
            # rubbing is made up for in the direction in which the mass is to go on
            onward = casadi.sign(speed + self.step * wanted[axis])
            force = needed[axis] + rubbing * onward
            if self.structure.relaxed[k]:
                force = casadi.if_else(self._borne(axis, goals[axis], needed[axis]), 0.0, force)
            last = self.last.get(axis, 0.0)
            forces[axis] = within_limits(self.drives[axis], force, speed, last, self.step)
        return forces

    def _borne(self, axis: str, goal: Any, needed: Any) -> Any:
        """Whether a mass that rests at its goal presses on the stop there."""
        position = getattr(self.slides, axis)
        outward = casadi.if_else(goal > middle_of(self.c, axis), 1.0, -1.0)
        seated = casadi.logic_and(position == goal, getattr(self.slides, f"{axis}_speed") == 0.0)
        return casadi.logic_and(seated, outward * needed < 0.0)

    def _needed(self, wanted: dict[str, Any], carriages: Carriages) -> tuple[Any, Any]:
        """Return the forces that give the wanted accelerations, in the middle of the step [N]."""
        slides, half = self.slides, 0.5 * self.step
        middle = slides._replace(
            radial=slides.radial + half * slides.radial_speed,
            tangential=slides.tangential + half * slides.tangential_speed,
        )
        angle = self.angle + half * wheel_speed(self.c, self.momentum, slides)
        speed = wheel_speed(self.c, self.momentum, middle)
        pair = wanted["radial"], wanted["tangential"]
        _, motion = motion_along(casadi, self.c, angle, speed, middle, *pair, carriages.direction)
        moving = motion.radial_contact, motion.tangential_contact
        if not carriages.dry:
            return moving
        held = contact_forces(casadi, self.c, self.angle, 0.0, 0.0, slides, *pair)
        radial, tangential = (
            casadi.if_else(carriages.stuck, *both) for both in zip(held, moving, strict=True)
        )
        return radial, tangential

    def _present_accelerations(self, carriages: Carriages) -> dict[str, Any]:
        """Accelerations that the last forces give, where a force has a memory [m/s2]."""
        if not self.last:
            return {}
        radial, tangential = (
            Push(self.last.get(axis, 0.0)) if axis in self.structure.axes else HOLD for axis in AXES
        )
        speed = wheel_speed(self.c, self.momentum, self.slides)
        motion = accelerations(
            casadi, self.c, self.angle, speed, self.slides, radial, tangential, carriages.direction
        )
        return {axis: getattr(motion, axis) for axis in self.last}
