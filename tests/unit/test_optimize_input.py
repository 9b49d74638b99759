# SPDX-License-Identifier: BSD-3-Clause
"""What optimize refuses before it computes anything long."""

from __future__ import annotations

import pytest

import rotorpump as rp

RIG = rp.Rig(
    wheel=rp.Wheel(inertia=0.3, mass=3.0),
    mass=1.0,
    radial=rp.Slide(stroke=(0.15, 0.35), speed=0.8, force=40.0),
    friction=rp.AxleFriction(viscous=0.05),
)
PUMP = rp.Pump(duration=1.0, start_angle=0.4)


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


def test_rig_and_task_must_be_what_they_say():
    with pytest.raises(rp.InputError, match="rig: must be a Rig"):
        rp.optimize("rig", PUMP)
    with pytest.raises(rp.InputError, match="task: must be a Pump"):
        rp.optimize(RIG, "pump")


def test_a_swing_is_no_guess_for_a_rotation():
    swing = rp.run_practical(RIG, PUMP)
    with pytest.raises(rp.InputError, match="guess: must be a whole turn"):
        rp.optimize(RIG, rp.Rotate(), guess=swing)
    with pytest.raises(rp.InputError, match="guess: must take some time"):
        rp.optimize(RIG, PUMP, guess=swing.trajectory.at(0.5))


def test_a_rotation_without_friction_has_no_best_speed():
    free = rp.Rig(RIG.wheel, RIG.mass, RIG.radial, rp.AxleFriction(viscous=0.0))
    with pytest.raises(rp.InputError, match="friction: must not be zero for a Rotate"):
        rp.optimize(free, rp.Rotate())
