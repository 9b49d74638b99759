# SPDX-License-Identifier: BSD-3-Clause
"""The commands: read what is asked, call the study, write what comes back."""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

from rotorpump.console import complain, say, watching
from rotorpump.exit_codes import exit_code
from rotorpump.measures import check_measure, measure
from rotorpump.quantities import positive
from rotorpump.rig.example import example_rig
from rotorpump.rig.rig import Rig
from rotorpump.rig.rigfile import read_rig
from rotorpump.solution.files import check_folder, prepare_file, write_text
from rotorpump.solution.solution import Solution
from rotorpump.solution.status import Status
from rotorpump.solution.storage import (
    Document,
    json_text,
    sample_rate,
    save_solution,
    solution_document,
)
from rotorpump.solution.wording import verdict_lines
from rotorpump.studies.comparison import Comparison, compare
from rotorpump.studies.comparison_storage import comparison_document, save_comparison
from rotorpump.studies.optimization import optimize
from rotorpump.tasks import Task

STDOUT = "-"


@dataclass(frozen=True)
class _Request:
    """What both commands are asked, checked before any work is done."""

    rig: Rig
    task: Task
    objective: str
    accuracy: float
    folder: Path | None
    report: str | None

    @classmethod
    def of(cls, arguments: argparse.Namespace) -> _Request:
        """Check the arguments; raises InputError."""
        rig, task = example_rig() if arguments.rig is None else read_rig(arguments.rig)
        wanted = measure(task, arguments.objective)
        check_measure(rig, wanted)
        accuracy = positive("--accuracy", arguments.accuracy)
        folder = None if arguments.out is None else check_folder(arguments.out, "--out")
        report: str | None = arguments.json
        if report not in (None, STDOUT):
            _check_report(report, folder)
        return cls(rig, task, wanted.name, accuracy, folder, report)


def _check_report(report: str, folder: Path | None) -> None:
    """Make sure that the JSON file can be written, also into the folder that is yet to be made."""
    inside = folder is not None and Path(report).parent == folder and not folder.exists()
    if not inside:
        prepare_file(report, "--json")


def run_compare(arguments: argparse.Namespace) -> int:
    """Compare; return the exit code."""
    request = _Request.of(arguments)
    with watching() as progress:
        comparison = compare(
            request.rig,
            request.task,
            objective=request.objective,
            accuracy=request.accuracy,
            attribute=arguments.attribute,
            on_failure="return",
            progress=progress,
        )
        try:
            if request.folder is not None:
                _tell_written(_save_comparison(comparison, request.folder))
        finally:
            _report(request, comparison_document(comparison), str(comparison))
    return _conclude(comparison.solutions)


def run_optimize(arguments: argparse.Namespace) -> int:
    """Optimize; return the exit code."""
    sample = arguments.sample
    if sample is not None:
        sample = sample_rate("--sample", sample)
    request = _Request.of(arguments)
    with watching() as progress:
        solution = optimize(
            request.rig,
            request.task,
            objective=request.objective,
            accuracy=request.accuracy,
            on_failure="return",
            progress=progress,
        )
        try:
            if request.folder is not None:
                _tell_written(_save_solution(solution, request.folder, sample))
        finally:
            _report(request, solution_document(solution, sample), solution.summary())
    return _conclude((solution,))


def _save_comparison(comparison: Comparison, folder: Path) -> tuple[Path, ...]:
    files = save_comparison(comparison, folder)
    if comparison.optimal.status is Status.INTERRUPTED:
        return _without_pictures(files, folder)
    # Matplotlib takes long to load, and is needed for pictures only
    from rotorpump.plotting.pictures import save_comparison_pictures  # noqa: PLC0415

    return *files, *save_comparison_pictures(comparison, folder)


def _save_solution(solution: Solution, folder: Path, sample: float | None) -> tuple[Path, ...]:
    files = save_solution(solution, folder, sample)
    if solution.status is Status.INTERRUPTED:
        return _without_pictures(files, folder)
    from rotorpump.plotting.pictures import save_solution_pictures  # noqa: PLC0415

    return *files, *save_solution_pictures(solution, folder)


def _without_pictures(files: tuple[Path, ...], folder: Path) -> tuple[Path, ...]:
    """Leave no pictures of an earlier run; who interrupts does not want to wait for new ones."""
    for name in ("compare.png", "motion.png", "profiles.png"):
        (folder / name).unlink(missing_ok=True)
    return files


def _tell_written(files: Sequence[Path]) -> None:
    for file in files:
        complain(f"wrote {file}")


def _report(request: _Request, document: Document, text: str) -> None:
    """Write the JSON where it was asked for, and the text to stdout unless the JSON goes there."""
    if request.report == STDOUT:
        say(json_text(document).rstrip("\n"))
        return
    say(text)
    if request.report is not None:
        write_text(Path(request.report), json_text(document), "--json")


def _conclude(solutions: Sequence[Solution]) -> int:
    """Say on stderr what went wrong, and return the exit code."""
    for solution in solutions:
        if solution.status is Status.INTERRUPTED:
            complain(f"rotorpump: interrupted: {solution.message}")
        elif not solution.success:
            complain(f"rotorpump: no solution: {solution.status.name}: {solution.message}")
        elif not solution.verified:
            complain("rotorpump: " + "\n".join(verdict_lines(solution)))
    return exit_code(solutions)
