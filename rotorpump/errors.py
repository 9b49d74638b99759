# SPDX-License-Identifier: BSD-3-Clause
"""Exceptions and warnings of the package."""

from __future__ import annotations

from typing import Any


class RotorpumpError(Exception):
    """Base of every error that rotorpump raises on purpose."""


class InputError(RotorpumpError, ValueError):
    """The input breaks a rule.

    Parameters
    ----------
    field : str
        Name of the offending field, as the user wrote it.
    rule : str
        What the field must satisfy.
    received : object
        The value that was received.
    where : str, optional
        The file and table in which the field stands.
    """

    def __init__(self, field: str, rule: str, received: object, where: str = "") -> None:
        self.field = field
        self.rule = rule
        self.received = received
        self.where = where
        place = f"{where}: " if where else ""
        super().__init__(f"{place}{field}: {rule}; received {_shown(received)}")

    def at(self, where: str) -> InputError:
        """Return the same error, placed in a file and table."""
        return InputError(self.field, self.rule, self.received, where)


def _shown(value: object) -> str:
    """Return the value as it is written, or its kind if Python refuses to write it."""
    try:
        return repr(value)
    except ValueError:
        return f"a {type(value).__name__} too long to show"


class SolveError(RotorpumpError):
    """No solution was found; ``solution`` holds what there is, its status the reason.

    Parameters
    ----------
    message : str
        The reason, in one sentence.
    solution : Solution
        The unsuccessful result.
    """

    def __init__(self, message: str, solution: Any) -> None:
        super().__init__(message)
        self.solution = solution


class SolveWarning(UserWarning):
    """The result is usable, but weaker than asked for."""
