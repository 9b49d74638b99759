# SPDX-License-Identifier: BSD-3-Clause
"""Starting motions: runs of the practical law, one for each sequence of events."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace

import numpy as np

from rotorpump.errors import InputError
from rotorpump.laws.lead import LeadRun
from rotorpump.laws.practical import rehearse
from rotorpump.laws.trials import Trial
from rotorpump.rig.rig import Rig
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Rotate, SpinUp, Task
from rotorpump.transcription.arcs import Arc, Chain, cut_into_arcs, signature
from rotorpump.transcription.guess import Guess

STRONGER = (2.0, 4.0)
"""Factors on force and speed with which the law makes a spin-up in fewer swings."""

PER_SIGNATURE = 3
"""Starting motions kept for each sequence of events."""


@dataclass(frozen=True, eq=False)
class Seed:
    """A starting motion cut into arcs.

    Parameters
    ----------
    guess : Guess
        The motion.
    chain : tuple of Arc
        Its arcs.
    ends : list of float
        Where each arc ends: time [s], or angle [rad] for a rotation.
    """

    guess: Guess
    chain: Chain
    ends: list[float]

    @property
    def word(self) -> str:
        """The sequence of events."""
        return signature(self.chain)


def guess_of(run: LeadRun) -> Guess:
    """Return a run of the practical law as a guess."""
    return Guess(run.time, *run.states)


def seeds_from(task: Task, trials: Iterable[Trial]) -> list[Seed]:
    """Cut the trials into seeds: the best of each sequence of events first, then the seconds."""
    groups: dict[str, list[Seed]] = {}
    for trial in trials:
        if not trial.reached or trial.run.forces.size < 2:
            continue
        seed = seed_of(task, guess_of(trial.run))
        group = groups.setdefault(seed.word, [])
        if len(group) < PER_SIGNATURE:
            group.append(seed)
    return [
        group[rank]
        for rank in range(PER_SIGNATURE)
        for group in groups.values()
        if len(group) > rank
    ]


def seed_of(task: Task, guess: Guess) -> Seed:
    """Cut one motion into arcs, as the task wants them."""
    if isinstance(task, Rotate):
        return _turn(guess)
    final = None
    if isinstance(task, SpinUp) and task.full_turn:
        final = math.copysign(math.pi, float(guess.angle[-1]))
    chain, ends = cut_into_arcs(guess, final_angle=final)
    return Seed(guess, chain, ends)


def seed_from(task: Task, guess: object) -> Seed:
    """Cut a motion that the user gives into arcs.

    Raises
    ------
    InputError
        If it is no motion, or does not suit the task.
    """
    motion = guess if isinstance(guess, Trajectory) else getattr(guess, "trajectory", None)
    if not isinstance(motion, Trajectory):
        raise InputError("guess", "must be a Trajectory, or have one", type(guess).__name__)
    if not motion.duration > 0.0:
        raise InputError("guess", "must take some time", motion.duration)
    sampled = Guess.from_trajectory(motion)
    if isinstance(task, Rotate):
        turned = np.diff(sampled.angle)
        if not (np.all(turned > 0.0) and turned.sum() >= 2.0 * math.pi * (1.0 - 1e-9)):
            raise InputError("guess", "must be a whole turn in the positive direction", "less")
    return seed_of(task, sampled)


def _turn(guess: Guess) -> Seed:
    """Take one turn of a rotation, from a lowest point to the next."""
    full = 2.0 * math.pi
    whole = full * math.ceil(float(guess.angle[0]) / full - 1e-9)
    start = float(np.interp(whole, guess.angle, guess.time))
    shifted = Guess(
        guess.time - start,
        guess.angle - whole,
        guess.momentum,
        guess.radial,
        guess.radial_speed,
    )
    ends = [math.pi, full]
    return Seed(shifted, tuple(Arc(1, "angle", end) for end in ends), ends)


def rehearse_stronger(rig: Rig, task: SpinUp) -> list[Trial]:
    """Run the law on stronger drives: motions that reach the goal in fewer swings."""
    trials: list[Trial] = []
    for factor in STRONGER:
        slide = replace(
            rig.radial, force=rig.radial.force * factor, speed=rig.radial.speed * factor
        )
        trials += rehearse(replace(rig, radial=slide), task, rounds=0, coarse=True)[:3]
    return trials
