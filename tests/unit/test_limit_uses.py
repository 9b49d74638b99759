# SPDX-License-Identifier: BSD-3-Clause
"""Which limits are reported, under which names, and what is said of each."""

from __future__ import annotations

import math
from dataclasses import replace

import pytest
from simulated_motion import example_rig, pumping, weaving

from rotorpump.rig.slide import Slide
from rotorpump.studies.limit_uses import UNITS, limit_uses

EVERYTHING = {
    "speed": 0.8,
    "force": 40.0,
    "power": 20.0,
    "force_rate": 900.0,
    "continuous_force": 25.0,
    "stall_force": 60.0,
    "no_load_speed": 1.5,
}
NAMES = {
    "speed": (0.8, "m/s"),
    "force": (40.0, "N"),
    "power": (20.0, "W"),
    "force rate": (900.0, "N/s"),
    "continuous force": (25.0, "N"),
    "motor line": (60.0, "N"),
    "high stop": (0.4, "m"),
    "low stop": (0.2, "m"),
}


def test_every_limit_is_reported_with_its_value_and_unit():
    _, _, trajectory, _ = pumping()
    rig = example_rig(radial=Slide((0.2, 0.4), **EVERYTHING))
    found = {use.name: (use.value, use.unit) for use in limit_uses(rig, trajectory, {})}
    assert found == {f"radial {name}": entry for name, entry in NAMES.items()}
    assert len(UNITS) == len(NAMES)


def test_what_is_not_limited_is_not_reported():
    _, _, trajectory, _ = pumping()
    rig = example_rig(radial=Slide((0.2, 0.4), speed=0.8))
    names = [use.name for use in limit_uses(rig, trajectory, {})]
    assert names == ["radial speed", "radial high stop", "radial low stop"]


def test_prices_go_to_their_axis_and_limit():
    rig, _, trajectory, _ = weaving()
    prices = {("radial", "force"): 1.5, ("tangential", "force"): 2.5, ("radial", "speed"): 9.0}
    found = {use.name: use.price for use in limit_uses(rig, trajectory, prices)}
    assert list(found) == [
        f"{axis} {name}"
        for axis in ("radial", "tangential")
        for name in ("force", "high stop", "low stop")
    ]
    assert (found["radial force"], found["tangential force"]) == (1.5, 2.5)
    assert math.isnan(found["radial high stop"])


def test_shares_are_those_of_the_time():
    rig, _, trajectory, _ = pumping()
    found = {use.name: use.active_share for use in limit_uses(rig, trajectory, {})}
    assert found["radial high stop"] + found["radial low stop"] < 1.0
    # both rests are 0.8 s and 0.15 s of the motion at least
    assert found["radial high stop"] >= 0.8 / trajectory.duration
    assert found["radial low stop"] >= 0.15 / trajectory.duration
    assert found["radial speed"] > 0.1
    looser = replace(rig, radial=replace(rig.radial, speed=0.9, stroke=(0.19, 0.45)))
    shares = {use.name: use.active_share for use in limit_uses(looser, trajectory, {})}
    assert shares.pop("radial force") > 0.0
    assert set(shares.values()) == {0.0}


@pytest.mark.parametrize("axis", ["radial", "tangential"])
def test_a_rig_of_one_slide_reports_that_one(axis):
    rig, _, trajectory, _ = weaving()
    other = {"radial": "tangential", "tangential": "radial"}[axis]
    held = replace(rig, **{other: 0.1})
    assert all(use.name.startswith(axis) for use in limit_uses(held, trajectory, {}))
