# SPDX-License-Identifier: BSD-3-Clause
"""A value with the name and unit of what it measures."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Objective:
    """Name, value and SI unit of an objective."""

    name: str
    value: float
    unit: str

    def __str__(self) -> str:
        return f"{self.value:.6g} {self.unit} ({self.name})"
