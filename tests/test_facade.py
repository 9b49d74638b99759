# SPDX-License-Identifier: BSD-3-Clause
"""The public names: documented, and quick to import."""

from __future__ import annotations

import re
import subprocess
import sys
from pathlib import Path

import pytest

import rotorpump

ROOT = Path(__file__).resolve().parents[1]


def unmentioned(names, page):
    """Public names that a page never writes as code."""
    return [name for name in names if not re.search(rf"`(rp\.)?{name}\b", page)]


def loaded_by(statement, package):
    """Whether a fresh interpreter has loaded ``package`` after ``statement``."""
    code = f"import sys\n{statement}\nprint({package!r} in sys.modules)"
    run = subprocess.run(
        [sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=False
    )
    assert run.returncode == 0, run.stderr
    return run.stdout.strip() == "True"


def test_public_names_are_documented():
    assert len(rotorpump.__all__) > 10
    page = (ROOT / "docs" / "interface.md").read_text(encoding="utf-8")
    assert unmentioned(rotorpump.__all__, page) == []


@pytest.mark.parametrize("package", ["matplotlib", "scipy.integrate", "scipy.optimize"])
@pytest.mark.parametrize("module", ["rotorpump", "rotorpump.cli"])
def test_what_takes_long_to_load_is_loaded_when_needed(module, package):
    assert not loaded_by(f"import {module}", package)


def test_a_missing_name_and_a_loaded_package_are_found():
    assert unmentioned(["Wheel", "Slide"], "`Wheel(inertia)`, `Slides` and Slide") == ["Slide"]
    assert loaded_by("import json.decoder", "json")
