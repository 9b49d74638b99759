# SPDX-License-Identifier: BSD-3-Clause
"""A comparison as lines of text."""

from __future__ import annotations

import math

from rotorpump.solution.law_run import LawRun
from rotorpump.solution.solution import Solution
from rotorpump.solution.wording import (
    NOTHING,
    align,
    drive_lines,
    limit_lines,
    quantity,
    share,
    task_words,
    verdict_lines,
)
from rotorpump.studies.comparison import OPTIMAL_STEP, Comparison


def tabulate(comparison: Comparison) -> str:
    """Return values, overstatement, limits, checks and remarks as lines of text.

    Parameters
    ----------
    comparison : Comparison
        The comparison, with or without a best motion.
    """
    blocks = [
        [f"{task_words(comparison.task)}: {comparison.measure.name}"],
        _values(comparison),
        [_overstatement(comparison)],
        _verdict(comparison.optimal),
        limit_lines(comparison.optimal.limits, comparison.measure.unit),
        drive_lines(comparison.optimal.drives),
        _attribution(comparison),
        _remarks(comparison),
    ]
    return "\n\n".join("\n".join(block) for block in blocks if block)


def _values(comparison: Comparison) -> list[str]:
    unit = comparison.measure.unit
    values = {
        "ideal law": comparison.ideal.objective.value,
        "practical law": comparison.practical.objective.value,
        "optimal": comparison.optimal_value,
    }
    rows = [
        (name, quantity(value, unit), share(comparison.share_of_ideal(value)))
        for name, value in values.items()
    ]
    return align([("motion", comparison.measure.name, "share of ideal"), *rows])


def _overstatement(comparison: Comparison) -> str:
    factor = comparison.overstatement
    if math.isnan(factor):
        return f"overstatement of the ideal law: {NOTHING} (one of the two has no value)"
    words = f"overstatement of the ideal law: {factor:.4g}"
    if factor >= 1.0:
        return words
    if len(comparison.rig.driven) > 1:
        return f"{words}\n  below 1: with both slides no instantaneous law is best, nor is this one"
    return (
        f"{words}\n  below 1: the law is best per half swing and turn, but not for every instant at"
        " which a motion may end"
    )


def _verdict(solution: Solution) -> list[str]:
    if not solution.success:
        return [f"NO SOLUTION: {solution.status.name}: {solution.message}"]
    return verdict_lines(solution)


def _attribution(comparison: Comparison) -> list[str]:
    """Tell what each step of the ladder of limits takes of the gap."""
    if not comparison.attributed:
        return []
    steps = comparison.attribution
    gap = steps[-1][1] - steps[0][1]
    rows = [("limits", comparison.measure.name, "share of the gap")]
    before = steps[0][1]
    for step, value in steps:
        part = (value - before) / gap if gap != 0.0 and math.isfinite(gap) else math.nan
        taken = NOTHING if step == steps[0][0] else share(part)
        rows.append((step, quantity(value, comparison.measure.unit), taken))
        before = value
    return align(rows)


def _remarks(comparison: Comparison) -> list[str]:
    lines = [*_law_remark(comparison.ideal), *_law_remark(comparison.practical)]
    between = comparison.speed_limited
    if between is not None and not (between.success and between.verified):
        kind = "not verified" if between.success else between.status.name
        lines.append(f"the step before {OPTIMAL_STEP!r} ({kind}): {between.message}")
    return lines


def _law_remark(run: LawRun) -> list[str]:
    words = []
    if run.leads is not None:
        bottom, turn = run.leads
        words.append(f"leads {bottom:.3g} before the lowest, {turn:.3g} before the turning point")
    if run.message:
        words.append(run.message)
    return [f"{run.law} law: {'; '.join(words)}"] if words else []
