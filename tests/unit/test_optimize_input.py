# SPDX-License-Identifier: BSD-3-Clause
"""What optimize refuses before it computes anything long."""

from __future__ import annotations

from dataclasses import replace

import pytest
from made_results import made_solution

import rotorpump as rp
from rotorpump.studies import optimization

RIG = rp.Rig(
    wheel=rp.Wheel(inertia=0.3, mass=3.0),
    mass=1.0,
    radial=rp.Slide(stroke=(0.15, 0.35), speed=0.8, force=40.0),
    friction=rp.AxleFriction(viscous=0.05),
)
FREE = replace(RIG, radial=rp.Slide(stroke=(0.15, 0.35)))
WITHOUT_FORCE_LIMIT = replace(
    RIG,
    radial=rp.Slide(stroke=(0.15, 0.35), speed=0.8),
    friction=rp.AxleFriction(viscous=0.05, load=0.002, journal_radius=0.01),
)
PUMP = rp.Pump(duration=1.0, start_angle=0.4)


class _Reached:
    """In place of the work: the input has passed."""

    def __init__(self, *_):
        self.run = lambda _: made_solution()


@pytest.mark.parametrize(
    ("changes", "field"),
    [
        ({"accuracy": 0.0}, "accuracy"),
        ({"accuracy": 0.5}, "accuracy"),
        ({"objective": "noise"}, "objective"),
        ({"on_failure": "shrug"}, "on_failure"),
        ({"guess": 3}, "guess"),
    ],
)
def test_a_bad_argument_is_named(changes, field):
    with pytest.raises(rp.InputError, match=rf"^{field}: ") as caught:
        rp.optimize(RIG, PUMP, **changes)
    assert caught.value.field == field


@pytest.mark.parametrize("study", [rp.optimize, rp.compare])
def test_rig_and_task_must_be_what_they_say(study):
    with pytest.raises(rp.InputError, match="rig: must be a Rig"):
        study("rig", PUMP)
    with pytest.raises(rp.InputError, match="task: must be a Pump"):
        study(RIG, "pump")


def test_a_swing_is_no_guess_for_a_rotation():
    swing = rp.run_practical(RIG, PUMP)
    with pytest.raises(rp.InputError, match="guess: must be a whole turn"):
        rp.optimize(RIG, rp.Rotate(), guess=swing)
    with pytest.raises(rp.InputError, match="guess: must take some time"):
        rp.optimize(RIG, PUMP, guess=swing.trajectory.at(0.5))


def test_a_rotation_without_friction_has_no_best_speed():
    free = rp.Rig(RIG.wheel, RIG.mass, RIG.radial, rp.AxleFriction(viscous=0.0))
    words = "friction: must not be zero for a Rotate without load_torque"
    with pytest.raises(rp.InputError, match=words):
        rp.optimize(free, rp.Rotate())
    # a journal without a coefficient rubs nothing
    smooth = replace(free, friction=rp.AxleFriction(viscous=0.0, journal_radius=0.01))
    with pytest.raises(rp.InputError, match=words):
        rp.optimize(smooth, rp.Rotate())


@pytest.mark.parametrize(
    ("rig", "field", "words"),
    [
        (WITHOUT_FORCE_LIMIT, "force", "where friction depends on the axle's load; received inf"),
        (replace(RIG, tangential=rp.Slide((-0.1, 0.1))), "speed", "on the tangential slide, or"),
        (replace(FREE, radial=replace(FREE.radial, rubbing=2.0)), "speed", "on the radial slide, "),
        (replace(FREE, tangential=rp.Slide((-0.1, 0.1))), "speed", "on the radial slide, or its"),
        (replace(FREE, tangential=0.05), "speed", "on the radial slide, or its force"),
        (replace(RIG, radial=0.3, tangential=FREE.radial), "speed", "on the tangential slide, or"),
    ],
    ids=["load", "one limited", "rubbing", "two slides", "mass aside", "tangential alone"],
)
def test_what_has_no_finite_best_motion_is_refused(rig, field, words):
    with pytest.raises(rp.InputError, match=f"^{field}: must be limited {words}"):
        rp.optimize(rig, PUMP)


@pytest.mark.parametrize(
    ("rig", "task", "objective"),
    [
        (FREE, PUMP, None),
        (WITHOUT_FORCE_LIMIT, rp.SpinUp(start_angle=0.4, energy=2.0), "work"),
        (replace(RIG, tangential=rp.Slide((-0.1, 0.1), speed=0.5)), PUMP, None),
        (replace(RIG, tangential=rp.Slide((-0.1, 0.1), power=20.0)), PUMP, None),
        (replace(FREE, tangential=FREE.radial), rp.Rotate(mean_speed=5.0), "work"),
    ],
)
def test_what_has_one_is_solved(rig, task, objective, monkeypatch):
    monkeypatch.setattr(optimization, "Work", _Reached)
    assert rp.optimize(rig, task, objective=objective).success


@pytest.mark.parametrize(
    ("task", "objective", "message"),
    [
        (PUMP, "heat", "objective: must be one of 'energy', 'momentum', 'speed'"),
        (rp.SpinUp(start_angle=0.4, energy=2.0), "heat", "motor_constant: is required of the rad"),
        (rp.Rotate(), "work", "objective: needs a mean_speed"),
        (rp.Rotate(mean_speed=5.0), "speed", "objective: must not be 'speed' where mean_speed"),
    ],
)
def test_an_objective_must_suit_task_and_rig(task, objective, message):
    with pytest.raises(rp.InputError, match=f"^{message}"):
        rp.optimize(RIG, task, objective=objective)
