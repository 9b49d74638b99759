# SPDX-License-Identifier: BSD-3-Clause
"""Rig files: what is read, what is refused and in which words, and the round trip."""

from __future__ import annotations

import math
import re

import pytest

from rotorpump.errors import InputError
from rotorpump.rig.friction import AxleFriction
from rotorpump.rig.rig import STANDARD_GRAVITY, Rig
from rotorpump.rig.rigfile import parse_rig, read_rig
from rotorpump.rig.slide import Slide
from rotorpump.rig.wheel import Wheel
from rotorpump.tasks import Pump, Rotate, SpinUp

TEXT = """
[wheel]
inertia = 0.25          # kg m2
mass = 3                # kg, an integer is a number
[mass]
mass = 1.2
[radial]
stroke = [0.20, 0.40]
speed = 0.8
force = 40.0
[friction]
viscous = 0.05
[task]
kind = "pump"
duration = 8.0
start_angle = 0.3
"""

RIG = Rig(
    wheel=Wheel(inertia=0.25, mass=3.0),
    mass=1.2,
    radial=Slide(stroke=(0.2, 0.4), speed=0.8, force=40.0),
    friction=AxleFriction(viscous=0.05),
)


def test_reads_a_rig_and_a_task(tmp_path):
    path = tmp_path / "rig.toml"
    path.write_text(TEXT, encoding="utf-8")
    rig, task = read_rig(path)
    assert rig == RIG
    assert rig.gravity == STANDARD_GRAVITY
    assert isinstance(rig.wheel.mass, float)
    assert task == Pump(duration=8.0, start_angle=0.3)
    assert read_rig(str(path)) == (rig, task)


def test_a_byte_order_mark_and_other_line_ends_do_no_harm(tmp_path):
    path = tmp_path / "rig.toml"
    path.write_bytes(b"\xef\xbb\xbf" + TEXT.replace("\n", "\r\n").encode())
    assert read_rig(path)[0] == RIG


WIDE = """
[wheel]
inertia = 0.25
mass = 3
unbalance = 0.1
unbalance_angle = -0.5
[mass]
mass = 1.2
[radial]
stroke = [0.20, 0.40]
power = 20.0
force_rate = 900.0
continuous_force = 25.0
stall_force = 60.0
no_load_speed = 1.5
motor_constant = 8.0
rubbing = 0.5
end_stops = "avoid"
[tangential]
stroke = [-0.1, 0.15]
speed = 0.5
[friction]
viscous = 0.05
load = 0.002
journal_radius = 0.0125
[task]
kind = "rotate"
mean_speed = 7.0
load_torque = 0.2
direction = -1
"""


def test_reads_every_key():
    rig, task = parse_rig(WIDE, "rig.toml")
    assert rig == Rig(
        wheel=Wheel(0.25, 3.0, 0.1, -0.5),
        mass=1.2,
        radial=Slide(
            (0.2, 0.4),
            power=20.0,
            force_rate=900.0,
            continuous_force=25.0,
            stall_force=60.0,
            no_load_speed=1.5,
            motor_constant=8.0,
            rubbing=0.5,
            end_stops="avoid",
        ),
        tangential=Slide((-0.1, 0.15), speed=0.5),
        friction=AxleFriction(0.05, load=0.002, journal_radius=0.0125),
    )
    assert task == Rotate(mean_speed=7.0, load_torque=0.2, direction=-1)


RADIAL = WIDE[WIDE.index("[radial]") : WIDE.index("[tangential]")]


def test_a_position_holds_the_mass():
    held = WIDE.replace(RADIAL, "[radial]\nposition = 0.3\n")
    assert parse_rig(held, "rig.toml")[0].radial == 0.3
    aside = TEXT + "[tangential]\nposition = -0.05"
    assert parse_rig(aside, "rig.toml")[0].tangential == -0.05
    assert parse_rig(TEXT, "rig.toml")[0].tangential == 0.0


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("stroke = [-0.1, 0.15]", "", "[tangential]: stroke: is required; received"),
        ("[-0.1, 0.15]", "[0.15, -0.1]", "[tangential]: stroke: must satisfy lo < hi; received"),
        ("speed = 0.5", "position = 0.1", "[tangential]: stroke: is unknown here; allowed: pos"),
        ("speed = 0.5", "speed = -0.5", "[tangential]: speed: must be greater than 0; received"),
        ("speed = 0.5", "sped = 0.5", "[tangential]: sped: is unknown here; allowed: stroke,"),
        ("[0.20, 0.40]", "[-0.2, 0.4]", "[radial]: stroke: must satisfy 0 <= lo < hi for the rad"),
        ("power = 20.0", "power = 0", "[radial]: power: must be greater than 0; received 0"),
        ("force_rate = 900.0", 'force_rate = "x"', "[radial]: force_rate: must be a number; rec"),
        ("stall_force = 60.0", "", "[radial]: stall_force: is required: it makes the motor line"),
        ("no_load_speed = 1.5", "", "[radial]: no_load_speed: is required: it makes the motor li"),
        ("motor_constant = 8.0", "motor_constant = inf", "[radial]: motor_constant: must be finit"),
        ("rubbing = 0.5", "rubbing = -0.5", "[radial]: rubbing: must not be negative; received"),
        ('"avoid"', '"hit"', "[radial]: end_stops: must be one of 'bear', 'avoid'; received 'hit'"),
        (RADIAL, "[radial]\nposition = -0.3\n", "[radial]: position: must not be negative; rece"),
        (RADIAL, '[radial]\nposition = "in"\n', "[radial]: position: must be a number; received"),
        (RADIAL, "[radial]\n", "[radial]: stroke: is required; received"),
        ("unbalance = 0.1", "unbalance = -0.1", "[wheel]: unbalance: must not be negative; receiv"),
        ("journal_radius = 0.0125", "", "[friction]: journal_radius: must be greater than 0 where"),
        ("mean_speed = 7.0", "mean_speed = 0", "[task]: mean_speed: must be greater than 0; rec"),
        ("load_torque = 0.2", "load_torque = -1", "[task]: load_torque: must not be negative; re"),
        ("direction = -1", "direction = 2", "[task]: direction: must be 1 or -1; received 2"),
        ("direction = -1", "deadline = 3.0", "[task]: deadline: is unknown here; allowed: kind, m"),
    ],
)
def test_an_error_in_a_wide_rig_names_place_rule_and_value(old, new, message):
    assert WIDE.count(old) == 1
    with pytest.raises(InputError, match=rf"^rig.toml {re.escape(message)}"):
        parse_rig(WIDE.replace(old, new), "rig.toml")


def test_a_rig_that_nothing_drives_is_refused():
    held = re.sub(r"stroke[^\[]*\[[^\[]*", "position = 0.3\n", TEXT)
    with pytest.raises(InputError, match=r"rig.toml \[radial\]: position: must be a slide where"):
        parse_rig(held, "rig.toml")


def test_a_start_aside_must_lie_within_the_stroke():
    text = TEXT + "start_tangential = 0.2\n[tangential]\nstroke = [-0.1, 0.15]"
    with pytest.raises(InputError, match=r"rig.toml \[task\]: start_tangential: must lie within"):
        parse_rig(text, "rig.toml")


def test_gravity_and_missing_limits():
    text = TEXT.replace("speed = 0.8", "speed = inf").replace("force = 40.0", "")
    rig, _ = parse_rig("[rig]\ngravity = 4.9\n" + text, "rig.toml")
    assert rig.gravity == 4.9
    assert rig.radial.speed == math.inf
    assert rig.radial.force == math.inf


@pytest.mark.parametrize(
    ("table", "task"),
    [
        ('kind = "rotate"', Rotate()),
        (
            'kind = "spin-up"\nstart_angle = 0.3\nenergy = 5',
            SpinUp(start_angle=0.3, energy=5.0),
        ),
        (
            'kind = "spin-up"\nstart_angle = 0.3\nfull_turn = true',
            SpinUp(start_angle=0.3, full_turn=True),
        ),
    ],
)
def test_every_kind_of_task(table, task):
    text = TEXT[: TEXT.index("[task]")] + "[task]\n" + table
    assert parse_rig(text, "rig.toml")[1] == task


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ("speed = 0.8", "sped = 0.8", "rig.toml [radial]: sped: is unknown here; allowed: stroke,"),
        ("[friction]", "[fricton]", "rig.toml: fricton: is unknown here; allowed: rig, wheel,"),
        ("speed = 0.8", "speed = -0.8", "rig.toml [radial]: speed: must be greater than 0;"),
        ("speed = 0.8", "speed = true", "[radial]: speed: must be a number; received True"),
        ("speed = 0.8", 'speed = "0.8"', "[radial]: speed: must be a number; received '0.8'"),
        ("speed = 0.8", "speed = nan", "rig.toml [radial]: speed: must be greater than 0"),
        ("speed = 0.8", "speed = 2026-01-01", "[radial]: speed: must be a number; received"),
        ("speed = 0.8", "speed = {limit = 1}", "[radial]: speed: must be a number; received {"),
        ("force = 40.0", f"force = 1{'0' * 400}", "[radial]: force: must be a number that a"),
        ("[0.20, 0.40]", "[0.40, 0.20]", "[radial]: stroke: must satisfy lo < hi; received"),
        ("[0.20, 0.40]", "[0.20]", "[radial]: stroke: must be two numbers (lo, hi); received [0.2"),
        ("[0.20, 0.40]", "0.4", "[radial]: stroke: must be two numbers (lo, hi); received 0.4"),
        ("[0.20, 0.40]", f"[0.2, 1{'0' * 400}]", "[radial]: stroke: must be a number that a"),
        ("inertia = 0.25", "inertia = 0", "rig.toml [wheel]: inertia: must be greater than 0; rec"),
        ("inertia = 0.25", "", "rig.toml [wheel]: inertia: is required; received"),
        ("mass = 1.2", "", "rig.toml [mass]: mass: is required; received"),
        ("mass = 1.2", "mass = -1.2", "rig.toml [mass]: mass: must be greater than 0; received"),
        ("mass = 1.2", "mass = 1.2\ng = 9.8", "rig.toml [mass]: g: is unknown here; allowed: mass"),
        ("[mass]", "[rig]\ngravity = 0\n[mass]", "rig.toml [rig]: gravity: must be greater than"),
        ("viscous = 0.05", "coulomb = 0.1", "rig.toml [friction]: viscous: is required; received"),
        ("viscous = 0.05", "viscous = -1", "[friction]: viscous: must not be negative; received"),
        ('kind = "pump"', "", "rig.toml [task]: kind: is required; received"),
        (
            'kind = "pump"',
            'kind = "swing"',
            "[task]: kind: must be one of 'pump', 'spin-up', 'rota",
        ),
        ('kind = "pump"', "kind = 3", "rig.toml [task]: kind: must be one of 'pump', 'spin-up'"),
        ('kind = "pump"', 'kind = "rotate"', "[task]: duration: is unknown here; allowed: kind, m"),
        ("duration = 8.0", "duration = 0.0", "[task]: duration: must be greater than 0; received"),
        ("duration = 8.0", "", "rig.toml [task]: duration: is required; received"),
        ("duration = 8.0", "duration = 8\nlength = 1", "length: is unknown here; allowed: kind,"),
        ("start_angle = 0.3", "start_angle = 4", "[task]: start_angle: must lie within -pi and pi"),
        ("start_angle = 0.3", "start_angle = 0", "[task]: start_angle: must differ from 0 and"),
        ("start_angle = 0.3", "start_angle = 1\nstart_radial = 0.5", "start_radial: must lie with"),
    ],
)
def test_an_error_names_place_rule_and_value(old, new, message):
    assert TEXT.count(old) == 1
    with pytest.raises(InputError, match=re.escape(message)) as caught:
        parse_rig(TEXT.replace(old, new), "rig.toml")
    assert str(caught.value).startswith("rig.toml")
    assert "; received " in str(caught.value)


@pytest.mark.parametrize("table", ["wheel", "mass", "radial", "friction", "task"])
def test_each_table_is_required_and_must_be_one(table):
    blocks = re.split(r"(?m)^(?=\[)", TEXT)
    rest = "".join(block for block in blocks if not block.startswith(f"[{table}]"))
    with pytest.raises(InputError, match=rf"rig.toml: \[{table}\]: is a required table"):
        parse_rig(rest, "rig.toml")
    for wrong in (f"{table} = 3\n{rest}", TEXT.replace(f"[{table}]", f"[[{table}]]")):
        with pytest.raises(InputError, match=rf"rig.toml: \[{table}\]: must be a table"):
            parse_rig(wrong, "rig.toml")


@pytest.mark.parametrize(
    "goals", ["", "energy = 5.0\nspeed = 3.0", "full_turn = false", "full_turn = 1"]
)
def test_a_spin_up_needs_one_goal(goals):
    text = TEXT[: TEXT.index("[task]")] + f'[task]\nkind = "spin-up"\nstart_angle = 1\n{goals}'
    with pytest.raises(InputError, match=r"rig.toml \[task\]: (goal|full_turn): "):
        parse_rig(text, "rig.toml")


@pytest.mark.parametrize(
    "text", ["[wheel", "a = ", "a = 1\na = 2", "a = 1" + "0" * 5000, "a = " + "[" * 100_000, "\0"]
)
def test_broken_toml_is_one_error(text):
    with pytest.raises(InputError, match=r"rig.toml: rig file: must be valid TOML; received"):
        parse_rig(text, "rig.toml")


def test_files_that_cannot_be_read(tmp_path):
    with pytest.raises(InputError, match=r"rig file: must exist; received '.*none.toml'"):
        read_rig(tmp_path / "none.toml")
    with pytest.raises(InputError, match=r"rig file: must be a file, not a directory; received"):
        read_rig(tmp_path)
    with pytest.raises(InputError, match=r"rig file: must be a path"):
        read_rig("a\0b")
    latin = tmp_path / "latin.toml"
    latin.write_bytes(TEXT.replace("kg m2", "kg m²").encode("latin-1"))
    with pytest.raises(InputError, match=r"latin.toml: rig file: must be UTF-8 text; received b'"):
        read_rig(latin)
