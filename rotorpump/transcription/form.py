# SPDX-License-Identifier: BSD-3-Clause
"""Structure of an interval: all that changes its functions rather than their parameters."""

from __future__ import annotations

import math
from dataclasses import dataclass

from rotorpump.physics.control import force_driven
from rotorpump.rig.rig import Rig
from rotorpump.transcription.path import FORCE_LIMITED, RATE_LIMITED, SPEED_LIMITED, rung_of

TIME, ANGLE = "time", "angle"

POWER_PLACES = tuple(k / 16 for k in range(17))
LINE_PLACES = tuple(k / 4 for k in range(5))
"""Places within an interval at which power, a quartic, and motor line, a parabola, are held."""

SQUARE = "{axis}_square"
"""Name of the sum of a drive's squared force, ∫F² dt."""


@dataclass(frozen=True)
class AxisForm:
    """Structure of one slide.

    Parameters
    ----------
    name : {"radial", "tangential"}
        The axis.
    rung : int
        Rung of its ladder.
    power, motor_line : bool
        Whether the drive has these limits.
    rubs : bool
        Whether the mass rubs along the rail.
    bears : bool
        Whether the end stops may bear what the drive, whose force has a limit, cannot.
    """

    name: str
    rung: int
    power: bool = False
    motor_line: bool = False
    rubs: bool = False
    bears: bool = False

    @property
    def forceful(self) -> bool:
        """Whether the mass is accelerated by a force, not moved at will."""
        return self.rung >= FORCE_LIMITED

    @property
    def node(self) -> tuple[str, ...]:
        """Names of the continuous variables, which every node has."""
        chain = (self.name, f"{self.name}_speed", f"{self.name}_acceleration")
        return (*chain, f"{self.name}_drive") if self.rung == RATE_LIMITED else chain[: self.rung]

    @property
    def controls(self) -> int:
        """Variables inside an interval: the control at both ends, unless that is continuous."""
        return 0 if self.rung == RATE_LIMITED else 2


@dataclass(frozen=True)
class Form:
    """Structure of an interval.

    Parameters
    ----------
    independent : {"time", "angle"}
        The independent variable.
    axes : tuple of AxisForm
        The slides.
    degree : int
        Number of Radau points.
    relaxed : bool
        Whether the end stops bear load by a relaxed complementarity everywhere, rather than only
        in intervals known to rest on a stop.
    sums : tuple of str
        Integrals over the motion: "work", "heat", and the squared forces of the drives.
    loaded : bool
        Whether the axle's friction depends on its load.
    unbalanced : bool
        Whether the wheel has an unbalance.
    centred : bool
        Whether the mass moves along the radial axis alone, through the axle.
    """

    independent: str
    axes: tuple[AxisForm, ...]
    degree: int = 3
    relaxed: bool = False
    sums: tuple[str, ...] = ()
    loaded: bool = False
    unbalanced: bool = False
    centred: bool = True

    @classmethod
    def of(cls, rig: Rig, independent: str, objective: str, *, relaxed: bool = False) -> Form:
        """Structure that a rig and an objective ask for."""
        axes, forced = [], force_driven(rig, objective)
        for name in rig.driven:
            slide = rig.slide(name)
            axes.append(
                AxisForm(
                    name,
                    rung_of(slide, forced=forced),
                    power=math.isfinite(slide.power),
                    motor_line=slide.stall_force is not None,
                    rubs=slide.rubbing > 0.0,
                    bears=slide.bearing and math.isfinite(slide.standing_force),
                )
            )
        sums: list[str] = [name for name in ("work", "heat") if name in objective.split("+")]
        sums += [
            SQUARE.format(axis=name)
            for name in rig.driven
            if math.isfinite(rig.slide(name).continuous_force)
        ]
        return cls(
            independent,
            tuple(axes),
            relaxed=relaxed,
            sums=() if relaxed else tuple(sums),
            loaded=rig.friction.load_arm > 0.0,
            unbalanced=rig.wheel.unbalance > 0.0,
            centred=rig.driven == ("radial",) and rig.tangential == 0.0,
        )

    @property
    def node(self) -> tuple[str, ...]:
        """Names of a node's variables; in a periodic motion the leading ones are not shared."""
        slides = [name for axis in self.axes for name in axis.node]
        return ("time", "angle", *self.sums, "momentum", *slides)

    def index(self, name: str) -> int:
        """Place of a variable within its node."""
        return self.node.index(name)

    @property
    def collocated(self) -> int:
        """Inner variables of the wheel: two for each inner point."""
        return 2 * (self.degree - 1)

    @property
    def slacks(self) -> int:
        """Inner variables that hold the positive part of a drive's power."""
        return self.degree * len(self.axes) if "work" in self.sums else 0

    @property
    def inner(self) -> int:
        """Variables inside an interval."""
        return self.collocated + sum(axis.controls for axis in self.axes) + self.slacks

    def control(self, axis: int) -> slice:
        """Places of an axis's control among the inner variables."""
        first = self.collocated + sum(a.controls for a in self.axes[:axis])
        return slice(first, first + self.axes[axis].controls)

    @property
    def rated(self) -> bool:
        """Whether the force of some drive changes at a limited rate."""
        return any(axis.rung == RATE_LIMITED for axis in self.axes)

    @property
    def ratings(self) -> tuple[str, ...]:
        """Sums that the continuous ratings of the drives bound."""
        return tuple(name for name in self.sums if name.endswith("_square"))

    @property
    def jumps(self) -> bool:
        """Whether the wheel's speed, or a position, may jump where intervals meet."""
        return any(
            axis.rung < (SPEED_LIMITED if self.centred else FORCE_LIMITED) for axis in self.axes
        )

    @property
    def own(self) -> int:
        """Parameters of one interval: its direction; resting stop and direction of each slide."""
        return 1 + 2 * len(self.axes)

    @property
    def rows(self) -> dict[str, int]:
        """Number of rows by group, in their order."""
        points = self.degree + 1
        rows = {"wheel": 2 * self.degree, "turning": 0}
        if not self.centred:
            # where the speed cannot jump, an interval's start has that of the one before: a row
            # there would have no interior after a standstill
            rows["turning"] = points if self.jumps else self.degree
        for axis in self.axes:
            loose = self.relaxed and axis.forceful and axis.bears
            strict = axis.forceful and not loose
            rated = axis.rung == RATE_LIMITED
            rows |= {
                f"{axis.name} path": min(max(axis.rung, 1), FORCE_LIMITED),
                f"{axis.name} stroke": min(axis.rung, FORCE_LIMITED),
                f"{axis.name} arrival": 2 if loose else 0,
                f"{axis.name} speed": 1 if axis.forceful else 0,
                f"{axis.name} stops": 2 * self.degree if loose else 0,
                f"{axis.name} force": points if strict else 0,
                f"{axis.name} power": len(POWER_PLACES) if axis.forceful and axis.power else 0,
                f"{axis.name} line": len(LINE_PLACES) if strict and axis.motor_line else 0,
                f"{axis.name} rate": points + 1 if rated else 0,
                f"{axis.name} drive": 2 if rated else 0,
                f"{axis.name} bearing": points if rated else 0,
            }
        rows["sums"] = len(self.sums)
        rows["slacks"] = self.slacks
        return rows
