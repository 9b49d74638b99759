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
from dataclasses import dataclass
from pathlib import Path

from solves import Table, shortfall, timed_solve

from rotorpump.errors import InputError
from rotorpump.measures import measure
from rotorpump.rig.rigfile import read_rig

COLUMNS = {
    "case": "<14",
    "value": ">15",
    "ratio": ">7",
    "tolerance": "<9",
    "verified": "<8",
    "iterations": ">10",
    "starts": ">6",
    "seconds": ">7",
}


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
        table = Table(COLUMNS)
        table.head()
        rows = [run(table, folder, name, reference) for name, reference in references.items()]
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


def run(table: Table, folder: Path, name: str, reference: Reference) -> Row:
    """Optimize one case, and print its line of the table."""
    rig, task = read_rig(folder / f"{name}.toml")
    unit = measure(task).unit
    if not reference.objective.endswith(f"[{unit}]"):
        raise InputError("objective", f"must be in [{unit}]", reference.objective, name)
    solve = timed_solve(rig, task)
    value, counts = solve.solution.objective.value, solve.solution.statistics
    met = (
        solve.solution.success
        and shortfall(task, value, reference.reference) <= reference.tolerance
    )
    table.row(
        name,
        solve.value,
        f"{value / reference.reference:.4f}",
        "met" if met else "MISSED",
        solve.verdict,
        f"{counts.iterations}",
        f"{counts.starts}",
        f"{solve.seconds:.2f}",
    )
    solve.explain()
    return Row(met, solve.solution.verified, solve.seconds)


if __name__ == "__main__":
    sys.exit(main())
