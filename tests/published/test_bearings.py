# SPDX-License-Identifier: BSD-3-Clause
"""Bearing coefficients and the handbook moment against published values."""

from __future__ import annotations

import pytest

from rotorpump.errors import InputError
from rotorpump.physics.constants import Constants
from rotorpump.physics.friction import friction_torque
from rotorpump.rig.bearings import BEARINGS, bearing_friction
from rotorpump.rig.rig import Rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel


def test_torque_is_the_handbook_moment() -> None:
    # M = 0.5 mu P d: P = 200 N, d = 25 mm, mu = 0.0015 give 3.75 N mm (worked from the formula)
    friction = bearing_friction("deep groove ball", 0.025)
    rig = Rig(Wheel(0.3), 1.0, Slide((0.1, 0.3)), friction)
    torque = friction_torque(Constants.of(rig), 2.0, 1.0, 200.0)
    assert torque == pytest.approx(-3.75e-3, rel=1e-12)


@pytest.mark.parametrize(
    ("kind", "coefficient"),
    [
        # SKF, Rolling Bearings (catalogue), page 100, open bearings
        ("deep groove ball", 0.0015),
        ("self-aligning ball", 0.0010),
        ("cylindrical roller, full complement", 0.0020),
        ("spherical roller", 0.0018),
        ("thrust ball", 0.0013),
        ("needle roller thrust", 0.0050),
    ],
)
def test_coefficients_are_those_of_the_catalogue(kind: str, coefficient: float) -> None:
    assert bearing_friction(kind, 0.02).load == coefficient


def test_other_catalogue_agrees_on_the_size() -> None:
    # JTEKT/Koyo, Table 8-1: deep groove ball 0.0010 to 0.0015, spherical roller 0.0020 to 0.0025
    assert 0.0010 <= BEARINGS["deep groove ball"] <= 0.0015
    assert BEARINGS["spherical roller"] == pytest.approx(0.0020, rel=0.15)


def test_other_terms_are_passed_on() -> None:
    friction = bearing_friction("thrust ball", 0.03, viscous=0.01, coulomb=0.02, quadratic=0.003)
    assert (friction.viscous, friction.coulomb, friction.quadratic) == (0.01, 0.02, 0.003)
    assert friction.journal_radius == 0.015


@pytest.mark.parametrize(
    ("kind", "bore", "field"), [("magnetic", 0.02, "kind"), ("thrust ball", 0.0, "bore")]
)
def test_bad_input_is_named(kind: str, bore: float, field: str) -> None:
    with pytest.raises(InputError, match=f"^{field}: "):
        bearing_friction(kind, bore)
