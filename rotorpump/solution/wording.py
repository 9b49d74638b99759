# SPDX-License-Identifier: BSD-3-Clause
"""Tasks, limits and checks in words, for terminals: plain ASCII, so that any can show it."""

from __future__ import annotations

import math
from collections.abc import Sequence

from rotorpump.rig.rigfile import KINDS
from rotorpump.solution.solution import LimitUse, Solution
from rotorpump.solution.usage import DriveUse
from rotorpump.tasks import Pump, Rotate, SpinUp, Task

NOTHING = "-"
"""Stands for what is not a number."""


def task_word(task: Task) -> str:
    """Return the kind of a task as a rig file writes it."""
    return next(word for word, kind in KINDS.items() if isinstance(task, kind))


def task_words(task: Task) -> str:
    """Return a task in words."""
    if isinstance(task, Rotate):
        words = "rotate steadily, one turn"
        words += "" if task.direction > 0 else " clockwise"
        words += "" if task.mean_speed is None else f", at {task.mean_speed:g} rad/s"
        return words + ("" if task.load_torque == 0.0 else f", against {task.load_torque:g} N m")
    begin = f"from {task.start_angle:g} rad"
    if task.start_speed != 0.0:
        begin += f" and {task.start_speed:g} rad/s"
    if isinstance(task, Pump):
        return f"pump for {task.duration:g} s {begin}"
    within = "" if task.deadline is None else f" within {task.deadline:g} s"
    return f"spin up to {_goal(task)} {begin}{within}"


def _goal(task: SpinUp) -> str:
    if task.energy is not None:
        return f"{task.energy:g} J"
    return "a full turn" if task.speed is None else f"{task.speed:g} rad/s"


def quantity(value: float, unit: str) -> str:
    """Return a value with its unit; a dash for what is not a number."""
    if math.isnan(value):
        return NOTHING
    return f"{value:.6g} {unit}"


def share(value: float) -> str:
    """Return a share in percent; a dash for what is not a number."""
    return NOTHING if math.isnan(value) else f"{100.0 * value:.1f} %"


def align(rows: Sequence[Sequence[str]]) -> list[str]:
    """Return rows of cells as lines with aligned columns: the first to the left, others right."""
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    lines = []
    for row in rows:
        rest = [cell.rjust(width) for cell, width in zip(row[1:], widths[1:], strict=True)]
        lines.append("  ".join([row[0].ljust(widths[0]), *rest]).rstrip())
    return lines


def limit_lines(limits: Sequence[LimitUse], unit: str) -> list[str]:
    """Return a table of the limits of the drives; ``unit`` is that of the objective."""
    if not limits:
        return []
    head = ("limit", "value", "share of time at it", "gain from loosening it")
    rows = [
        (
            limit.name,
            quantity(limit.value, limit.unit),
            share(limit.active_share),
            _price(limit, unit),
        )
        for limit in limits
    ]
    return align([head, *rows])


def _price(limit: LimitUse, unit: str) -> str:
    if math.isnan(limit.price):
        return NOTHING
    return f"{limit.price:.3g} {unit} per {limit.unit}"


def drive_lines(drives: Sequence[DriveUse]) -> list[str]:
    """Return a table of what a motion asks of the drives."""
    if not drives:
        return []
    head = ("drive", "peak force", "rms force", "peak power", "work", "heat")
    rows = [
        (
            use.axis,
            quantity(use.peak_force, "N"),
            quantity(use.rms_force, "N"),
            quantity(use.peak_power, "W"),
            quantity(use.work, "J"),
            quantity(use.heat, "J"),
        )
        for use in drives
    ]
    return align([head, *rows])


def verdict_lines(solution: Solution) -> list[str]:
    """Say whether the checks passed, and list those that did not."""
    if solution.verified:
        return [f"verified: {len(solution.checks)} independent checks passed"]
    if solution.checks and not solution.success:
        return ["NOT VERIFIED: this is no solution"]
    if not solution.checks:
        return ["NOT VERIFIED: no independent check has run"]
    failed = [check for check in solution.checks if not check.passed]
    count = f"{len(failed)} of {len(solution.checks)} independent checks failed"
    return [f"NOT VERIFIED: {count}", *(f"  {check}" for check in failed)]
