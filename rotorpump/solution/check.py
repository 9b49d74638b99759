# SPDX-License-Identifier: BSD-3-Clause
"""The outcome of one check of a motion."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Check:
    """What one check found, beside what it tolerates.

    Parameters
    ----------
    name : str
        What was checked.
    value : float
        Size of the violation or deviation, never negative; not a number if it could not be found.
    tolerance : float
        Largest value that passes.
    unit : str
        SI unit of value and tolerance; "1" for a relative one.
    detail : str, optional
        Where or why, for a reader.
    """

    name: str
    value: float
    tolerance: float
    unit: str
    detail: str = ""

    @property
    def passed(self) -> bool:
        """Whether the value is within the tolerance; a value that is not a number never is."""
        return bool(self.value <= self.tolerance)

    def __str__(self) -> str:
        verdict = "passed" if self.passed else "FAILED"
        unit = "" if self.unit == "1" else f" {self.unit}"
        detail = f" ({self.detail})" if self.detail else ""
        return f"{self.name}: {verdict}, {self.value:.2e} of {self.tolerance:.0e}{unit}{detail}"
