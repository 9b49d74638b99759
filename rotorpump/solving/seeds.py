# SPDX-License-Identifier: BSD-3-Clause
"""Starting motions: runs of the practical law, one for each sequence of events."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace
from functools import partial

import numpy as np

from rotorpump.errors import InputError
from rotorpump.laws.lead import LeadRun
from rotorpump.laws.practical import rehearse
from rotorpump.laws.trials import Trial
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.solution.trajectory import Trajectory
from rotorpump.tasks import Rotate, SpinUp, Task
from rotorpump.transcription.arcs import Arc, Chain, cut_into_arcs, signature
from rotorpump.transcription.guess import Guess

STRONGER, WEAKER = (2.0, 4.0), (0.7, 0.5, 0.35)
"""Factors on force and speed with which the law makes a spin-up in fewer swings, or in more."""

BEYOND = (3.0, 1.5)
"""Factors on a continuous rating within which the law may use the drive's force for seeds."""

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


def guess_of(rig: Rig, run: LeadRun) -> Guess:
    """Return a run of the practical law as a guess."""
    return Guess.from_states(rig, run.time, run.states)


def seeds_from(rig: Rig, task: Task, trials: Iterable[Trial]) -> list[Seed]:
    """Cut the trials into seeds: the best of each sequence of events first, then the seconds."""
    groups: dict[str, list[Seed]] = {}
    for trial in trials:
        if not trial.reached or trial.run.forces.size < 2:
            continue
        seed = seed_of(task, guess_of(rig, trial.run))
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
        return _turn(guess, task.mean_speed)
    final = None
    if isinstance(task, SpinUp) and task.full_turn:
        final = math.copysign(math.pi, float(guess.angle[-1]))
    chain, ends = cut_into_arcs(guess, final_angle=final)
    return Seed(guess, chain, ends)


def seed_from(task: Task, motion: Trajectory) -> Seed:
    """Cut a motion that the user gives into arcs.

    Raises
    ------
    InputError
        If it does not suit the task.
    """
    sampled = Guess.from_trajectory(motion)
    if isinstance(task, Rotate):
        turned = np.diff(sampled.angle)
        if not (np.all(turned > 0.0) and turned.sum() >= 2.0 * math.pi * (1.0 - 1e-9)):
            raise InputError("guess", "must be a whole turn in the positive direction", "less")
    return seed_of(task, sampled)


def _turn(guess: Guess, mean_speed: float | None) -> Seed:
    """Take one turn of a rotation, from a lowest point to the next, at the speed that is wanted."""
    full = 2.0 * math.pi
    whole = full * math.ceil(float(guess.angle[0]) / full - 1e-9)
    start, end = np.interp([whole, whole + full], guess.angle, guess.time).tolist()
    slower = 1.0 if mean_speed is None else full / mean_speed / (end - start)
    shifted = replace(
        guess,
        time=(guess.time - start) * slower,
        angle=guess.angle - whole,
        momentum=guess.momentum / slower,
        speed=guess.speed / slower,
        radial_speed=guess.radial_speed / slower,
        tangential_speed=guess.tangential_speed / slower,
    )
    ends = [math.pi, full]
    return Seed(shifted, tuple(Arc(1, "angle", end) for end in ends), ends)


def rehearse_with_other_drives(rig: Rig, task: SpinUp, factors: Iterable[float]) -> list[Trial]:
    """Run the law on stronger or weaker drives: motions that take fewer or more swings."""
    trials: list[Trial] = []
    for factor in factors:
        other = rig.with_slides(partial(_scaled, factor))
        trials += rehearse(other, task, rounds=0, coarse=True)[:3]
    return trials


def _scaled(factor: float, slide: Slide) -> Slide:
    """Return a slide whose drive is stronger and faster by a factor."""
    return replace(slide, force=slide.force * factor, speed=slide.speed * factor)


def rehearse_beyond_ratings(rig: Rig, task: Task) -> list[Trial]:
    """Run the law on drives that may exceed their continuous ratings, within a plain force limit.

    The law keeps a rating by moving with little force throughout; the best motions use much force
    for short times.
    """
    trials: list[Trial] = []
    if any(math.isfinite(slide.continuous_force) for slide in rig.slides):
        for factor in BEYOND:
            trials += rehearse(rig.with_slides(partial(_unrated, factor)), task, rounds=0)[:3]
    return trials


def _unrated(factor: float, slide: Slide) -> Slide:
    """Return a slide whose rating is a plain limit, higher by a factor."""
    force = min(slide.force, factor * slide.continuous_force)
    return replace(slide, continuous_force=math.inf, force=force)
