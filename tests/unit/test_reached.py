# SPDX-License-Identifier: BSD-3-Clause
"""What a motion reaches, in the unit of each objective."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from simulated_motion import weaving

from rotorpump.measures import MEASURES, measure
from rotorpump.solution.reached import reached_value
from rotorpump.solution.usage import drive_uses
from rotorpump.tasks import Pump, Rotate, SpinUp


@pytest.fixture
def motion():
    """A rig with motor constants, and a motion that ends turning clockwise."""
    rig, _, trajectory, _ = weaving()
    rig = rig.with_slides(lambda slide: replace(slide, motor_constant=8.0))
    return rig.mirrored(), trajectory.mirrored()


def reached(motion, task, name):
    rig, trajectory = motion
    return reached_value(rig, task, measure(task, name), trajectory)


def test_a_pump_counts_the_size_of_what_is_there_at_the_end(motion):
    task, last = Pump(duration=1.0, start_angle=0.3), motion[1].at(motion[1].time[-1])
    assert last.speed[0] < 0.0
    assert reached(motion, task, "energy") == pytest.approx(last.energy[0])
    assert reached(motion, task, "momentum") == pytest.approx(-last.momentum[0])
    assert reached(motion, task, "speed") == pytest.approx(-last.speed[0])


def test_a_spin_up_counts_time_or_cost(motion):
    task, uses = SpinUp(start_angle=0.3, energy=5.0), drive_uses(*motion)
    work, heat = (math.fsum(getattr(use, name) for use in uses) for name in ("work", "heat"))
    assert work > 1.0
    assert heat > 1.0
    assert reached(motion, task, "time") == motion[1].duration
    assert reached(motion, task, "work") == pytest.approx(work)
    assert reached(motion, task, "heat") == pytest.approx(heat)
    assert reached(motion, task, "work+heat") == pytest.approx(work + heat)


def test_a_rotation_counts_turns_per_time(motion):
    mean = 2.0 * math.pi / motion[1].duration
    assert reached(motion, Rotate(direction=-1), "speed") == pytest.approx(mean)
    loaded = Rotate(load_torque=0.2)
    assert reached(motion, loaded, "load power") == pytest.approx(0.2 * mean)
    work = reached(motion, Rotate(mean_speed=3.0), None)
    assert work == reached(motion, SpinUp(start_angle=0.3, energy=5.0), "work")


def test_every_objective_has_a_value(motion):
    tasks = {
        Pump: [Pump(duration=1.0, start_angle=0.3)],
        SpinUp: [SpinUp(start_angle=0.3, speed=5.0)],
        Rotate: [Rotate(mean_speed=3.0), Rotate(load_torque=0.2)],
    }
    for kind, offered in MEASURES.items():
        for entry in offered:
            values = [reached_value(motion[0], task, entry, motion[1]) for task in tasks[kind]]
            assert np.isfinite(values).all()
