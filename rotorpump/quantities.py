# SPDX-License-Identifier: BSD-3-Clause
"""Name, symbol and SI unit of every quantity, and the validators of user input.

Axis labels, CSV headings and tables take their units from here, so that each has one origin.
"""

from __future__ import annotations

import math
import operator
from collections.abc import Sequence
from dataclasses import dataclass
from numbers import Real

from rotorpump.errors import InputError


@dataclass(frozen=True)
class Quantity:
    """A physical quantity: name in code, symbol, SI unit, words for a reader."""

    name: str
    symbol: str
    unit: str
    words: str

    @property
    def label(self) -> str:
        """Words and unit, for an axis."""
        return f"{self.words} [{self.unit}]"

    @property
    def heading(self) -> str:
        """Name and unit, for a CSV column."""
        return f"{self.name} [{self.unit}]"


QUANTITIES: dict[str, Quantity] = {
    q.name: q
    for q in (
        Quantity("time", "t", "s", "time"),
        Quantity("angle", "φ", "rad", "wheel angle from hanging"),
        Quantity("speed", "ω", "rad/s", "wheel speed"),
        Quantity("momentum", "H", "kg m2/s", "angular momentum about the axle"),
        Quantity("radial", "ρ", "m", "radial position of the mass"),
        Quantity("radial_speed", "vρ", "m/s", "radial speed of the mass"),
        Quantity("radial_force", "Fρ", "N", "radial drive force"),
        Quantity("tangential", "τ", "m", "tangential position of the mass"),
        Quantity("tangential_speed", "vτ", "m/s", "tangential speed of the mass"),
        Quantity("tangential_force", "Fτ", "N", "tangential drive force"),
        Quantity("energy", "E", "J", "energy above rest"),
        Quantity("axle_load", "|R|", "N", "load on the axle"),
    )
}


def real(field: str, value: object) -> float:
    """Return ``value`` as a float, which may be infinite or not a number."""
    if isinstance(value, bool) or not isinstance(value, Real):
        raise InputError(field, "must be a number", value)
    try:
        return float(value)
    except OverflowError as error:
        rule = "must be a number that a float can hold"
        raise InputError(field, rule, _printable(value)) from error


def finite(field: str, value: object) -> float:
    """Return ``value`` as a float; it must be a finite number."""
    number = real(field, value)
    if not math.isfinite(number):
        raise InputError(field, "must be finite", value)
    return number


def positive(field: str, value: object) -> float:
    """Return ``value`` as a float; it must be finite and above zero."""
    number = finite(field, value)
    if number <= 0.0:
        raise InputError(field, "must be greater than 0", value)
    return number


def non_negative(field: str, value: object) -> float:
    """Return ``value`` as a float; it must be finite and not below zero."""
    number = finite(field, value)
    if number < 0.0:
        raise InputError(field, "must not be negative", value)
    return number


def limit(field: str, value: object) -> float:
    """Return ``value`` as a float; it must be above zero and may be infinite (no limit)."""
    number = real(field, value)
    if math.isnan(number):
        raise InputError(field, "must be greater than 0, or inf for no limit", value)
    return number if number == math.inf else positive(field, value)


def interval(field: str, value: object) -> tuple[float, float]:
    """Return ``value`` as a pair (lo, hi) of finite numbers with lo < hi."""
    if not isinstance(value, Sequence) or isinstance(value, str) or len(value) != 2:
        raise InputError(field, "must be two numbers (lo, hi)", value)
    low, high = (finite(field, entry) for entry in value)
    if low >= high:
        raise InputError(field, "must satisfy lo < hi", value)
    return low, high


def choice(field: str, value: object, allowed: Sequence[str]) -> str:
    """Return ``value``; it must be one of the allowed words."""
    if not isinstance(value, str) or value not in allowed:
        words = ", ".join(repr(word) for word in allowed)
        raise InputError(field, f"must be one of {words}", value)
    return value


def instance(field: str, value: object, kind: type) -> None:
    """Raise unless ``value`` is an instance of ``kind``."""
    if not isinstance(value, kind):
        raise InputError(field, f"must be a {kind.__name__}", value)


def _printable(value: Real) -> object:
    """Return ``value``, or its size in words where Python refuses to write out all its digits."""
    try:
        repr(value)
    except ValueError:
        size: int = operator.index(math.floor(value)).bit_length()
        return f"a number of {size} bits"
    return value
