# SPDX-License-Identifier: BSD-3-Clause
"""Any rig and task, written as a rig file, reads back as it was."""

from __future__ import annotations

import math

from hypothesis import given
from hypothesis import strategies as st

from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import Rig
from rotorpump.rig.rigfile import parse_rig, write_rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp

sizes = st.floats(1e-6, 1e6)
limits = sizes | st.just(math.inf)
losses = st.floats(0.0, 1e3)
lines = st.just({}) | st.fixed_dictionaries({"stall_force": sizes, "no_load_speed": sizes})


def slides(lowest):
    return st.builds(
        lambda low, length, line, **rest: Slide((low, low + length), **line, **rest),
        st.floats(lowest, 10.0),
        st.floats(1e-3, 10.0),
        lines,
        speed=limits,
        force=limits,
        power=limits,
        force_rate=limits,
        continuous_force=limits,
        motor_constant=st.none() | sizes,
        rubbing=losses,
        end_stops=st.sampled_from(["bear", "avoid"]),
    )


def rigs(radial, tangential):
    return st.builds(
        Rig,
        wheel=st.builds(
            Wheel,
            inertia=sizes,
            mass=st.floats(0.0, 1e6),
            unbalance=losses,
            unbalance_angle=st.floats(-10.0, 10.0),
        ),
        mass=sizes,
        radial=radial,
        friction=st.builds(
            AxleFriction,
            viscous=losses,
            coulomb=losses,
            quadratic=losses,
            load=losses,
            journal_radius=sizes,
        ),
        tangential=tangential,
        gravity=sizes,
    )


all_rigs = st.one_of(
    rigs(slides(0.0), st.floats(-10.0, 10.0)),
    rigs(st.floats(0.0, 10.0), slides(-10.0)),
    rigs(slides(0.0), slides(-10.0)),
)
starts = {
    "start_angle": st.floats(0.01, 1.5) | st.floats(-3.0, -1.6),
    "start_speed": st.floats(-100.0, 100.0),
}
goals = st.one_of(
    st.fixed_dictionaries({"energy": sizes}),
    st.fixed_dictionaries({"speed": sizes}),
    st.just({"full_turn": True}),
)
all_tasks = st.one_of(
    st.builds(Pump, duration=sizes, **starts),
    st.builds(
        lambda goal, **rest: SpinUp(**goal, **rest),
        goals,
        deadline=st.none() | sizes,
        **starts,
    ),
    st.builds(
        Rotate,
        mean_speed=st.none() | sizes,
        load_torque=losses,
        direction=st.sampled_from([1, -1]),
    ),
)


@given(all_rigs, all_tasks)
def test_what_is_written_reads_back(rig, task):
    assert parse_rig(write_rig(rig, task), "rig.toml") == (rig, task)


def test_a_start_within_the_strokes_reads_back():
    slide = Slide((0.2, 0.4))
    rig = Rig(Wheel(0.25), 1.2, slide, AxleFriction(0.05), Slide((-0.1, 0.1)))
    task = Pump(duration=1.0, start_angle=0.5, start_radial=0.3, start_tangential=-0.1)
    assert parse_rig(write_rig(rig, task), "rig.toml") == (rig, task)
