# SPDX-License-Identifier: BSD-3-Clause
"""Every rig file that the documents show can be read."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from rotorpump.errors import InputError
from rotorpump.rig.rig import Rig
from rotorpump.rig.rigfile import parse_rig

ROOT = Path(__file__).resolve().parents[2]
PAGES = (ROOT / "README.md", *sorted((ROOT / "docs").glob("*.md")))


def rig_files(text):
    """Blocks of TOML in a page."""
    return re.findall(r"^```toml\n(.*?)^```$", text, flags=re.DOTALL | re.MULTILINE)


SHOWN = [
    pytest.param(block, id=f"{page.name} {number}")
    for page in PAGES
    for number, block in enumerate(rig_files(page.read_text(encoding="utf-8")), 1)
]


def test_there_are_some():
    assert {parameter.id.split(" ")[0] for parameter in SHOWN} >= {"README.md", "two-slides.md"}


@pytest.mark.parametrize("text", SHOWN)
def test_a_rig_file_that_is_shown_can_be_read(text):
    rig, _ = parse_rig(text, "a page")
    assert isinstance(rig, Rig)


def test_one_with_an_unknown_key_cannot():
    with pytest.raises(InputError, match="unknown"):
        parse_rig(SHOWN[0].values[0].replace("inertia", "heaviness"), "a page")
