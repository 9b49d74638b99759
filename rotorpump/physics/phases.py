# SPDX-License-Identifier: BSD-3-Clause
"""Integration of a motion whose equations change at events."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
State = list[float]

RELATIVE_TOLERANCE = 1e-9
ABSOLUTE_TOLERANCE = 1e-10
MOST_PHASES = 60
"""Phases within one stretch beyond which the contact is said to chatter."""

LEAST_STEPS = 2
"""Steps at least made in a stretch, so that two events close together are not jumped over."""


class SimulationFailure(Exception):  # noqa: N818 (caught by whoever simulates, never shown)
    """The integration cannot go on; the message is the reason."""


@dataclass(frozen=True)
class Ending:
    """An event that ends a phase: ``margin`` rises through zero, ``settle`` gives what follows."""

    margin: Callable[[float, State], float]
    settle: Callable[[State], State]
    terminal: ClassVar[bool] = True
    direction: ClassVar[float] = 1.0

    def __call__(self, time: float, state: Array) -> float:
        """Margin in the form in which the integrator asks for it."""
        return self.margin(time, state.tolist())


@dataclass(frozen=True)
class Phase:
    """One set of equations, and the events that end it."""

    rates: Callable[[float, State], Sequence[float]]
    endings: tuple[Ending, ...]

    def __call__(self, time: float, state: Array) -> Sequence[float]:
        """Rates in the form in which the integrator asks for them."""
        return self.rates(time, state.tolist())


def follow(begin: float, end: float, state: State, plan: Callable[[float, State], Phase]) -> State:
    """Integrate from ``begin`` to ``end`` [s], asking ``plan`` for the phase after each event.

    Raises
    ------
    SimulationFailure
        If the integrator fails or the phases never end.
    """
    # SciPy's subpackages take longer to load than all the rest: only when needed
    from scipy.integrate import solve_ivp  # noqa: PLC0415

    step = (end - begin) / LEAST_STEPS
    for _ in range(MOST_PHASES):
        phase = plan(begin, state)
        run = solve_ivp(
            phase,
            (begin, end),
            np.array(state),
            method="DOP853",
            rtol=RELATIVE_TOLERANCE,
            atol=ABSOLUTE_TOLERANCE,
            first_step=min(step, end - begin),
            max_step=step,
            events=phase.endings,
        )
        state = run.y[:, -1].tolist()
        if run.status == 0:
            return state
        if run.status < 0:
            raise SimulationFailure(f"integration fails at {run.t[-1]:.6g} s: {run.message}")
        begin = float(run.t[-1])
        for ending, times in zip(phase.endings, run.t_events, strict=True):
            if times.size:
                state = ending.settle(state)
        if begin >= end:
            return state
    raise SimulationFailure(f"contact changes more than {MOST_PHASES} times near {begin:.6g} s")
