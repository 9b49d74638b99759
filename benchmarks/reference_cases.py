# SPDX-License-Identifier: BSD-3-Clause
"""Run a folder of rig files with default settings, and hold the results against references.

The folder has one rig file (``NAME.toml``) for each entry of its ``reference.json``:
``{NAME: {"objective": "WORDS [UNIT]", "reference": NUMBER, "tolerance": RELATIVE}}``.
"""

from __future__ import annotations

import argparse
import json
import statistics
import sys
import time
from dataclasses import dataclass
from pathlib import Path

import rotorpump
from rotorpump.errors import InputError
from rotorpump.measures import measure
from rotorpump.rig.rigfile import read_rig
from rotorpump.solution.wording import verdict_lines

COLUMNS = "{:<14} {:>12} {:<6} {:>8}  {:<9} {:<9} {:>10} {:>7} {:>8}"
HEAD = (
    "case",
    "value",
    "unit",
    "ratio",
    "tolerance",
    "verified",
    "iterations",
    "starts",
    "seconds",
)


@dataclass(frozen=True)
class Reference:
    """What a case is held against; the tolerance is relative."""

    objective: str
    reference: float
    tolerance: float


@dataclass(frozen=True)
class Row:
    """What came of one case; ``met`` is whether the value is good enough."""

    met: bool
    verified: bool
    seconds: float


def main() -> int:
    """Run all cases; return 0 if each is verified and within its tolerance, 1 otherwise."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0] if __doc__ else None)
    parser.add_argument("folder", type=Path, help="folder with NAME.toml files and reference.json")
    folder: Path = parser.parse_args().folder
    try:
        references = read_references(folder)
        print(COLUMNS.format(*HEAD), flush=True)
        rows = [run(folder, name, reference) for name, reference in references.items()]
    except InputError as error:
        print(error, file=sys.stderr)
        return 2
    good = sum(row.met and row.verified for row in rows)
    print(f"{good} of {len(rows)} verified and within tolerance")
    print(f"median {statistics.median(row.seconds for row in rows):.2f} s")
    return 0 if good == len(rows) else 1


def read_references(folder: Path) -> dict[str, Reference]:
    """Read ``reference.json``; it must name the rig files of the folder, all of them."""
    place = folder / "reference.json"
    try:
        content = json.loads(place.read_text(encoding="utf-8"))
        references = {name: Reference(**entry) for name, entry in content.items()}
    except (OSError, ValueError, AttributeError, TypeError) as error:
        raise InputError("reference file", f"must be readable ({error})", str(place)) from error
    files = {path.stem for path in folder.glob("*.toml")}
    if not references or files != set(references):
        odd = sorted(files ^ set(references))
        raise InputError("reference file", "must name every rig file and no other", odd, str(place))
    return references


def run(folder: Path, name: str, reference: Reference) -> Row:
    """Optimize one case, and print its line of the table."""
    rig, task = read_rig(folder / f"{name}.toml")
    wanted = measure(task)
    if not reference.objective.endswith(f"[{wanted.unit}]"):
        raise InputError("objective", f"must be in [{wanted.unit}]", reference.objective, name)
    began = time.perf_counter()
    solution = rotorpump.optimize(rig, task, on_failure="return")
    seconds = time.perf_counter() - began
    ratio = solution.objective.value / reference.reference
    shortfall = 1.0 - ratio if wanted.more_is_better else ratio - 1.0
    met = solution.success and shortfall <= reference.tolerance
    counts = solution.statistics
    print(
        COLUMNS.format(
            name,
            f"{solution.objective.value:.6g}",
            wanted.unit,
            f"{ratio:.4f}",
            "met" if met else "MISSED" if solution.success else solution.status.name,
            "yes" if solution.verified else "NO",
            counts.iterations,
            counts.starts,
            f"{seconds:.2f}",
        ),
        flush=True,
    )
    if not solution.success:
        print(f"  {solution.message}", flush=True)
    elif not solution.verified:
        print(*verdict_lines(solution), sep="\n", flush=True)
    return Row(met, solution.verified, seconds)


if __name__ == "__main__":
    sys.exit(main())
