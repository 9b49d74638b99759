# SPDX-License-Identifier: BSD-3-Clause
"""Rig files: a rig and a task as TOML text, and back.

A table for each part of the rig ([wheel], [radial], [tangential], [friction]), [mass] for the
moving mass, [rig] for its other numbers (optional), and [task], whose ``kind`` says what is to be
achieved. Keys are the field names of the classes, so a new field needs no change here. The table of
an axis is that of its slide, or has the one key ``position`` that holds the mass there; a rig file
without [tangential] holds it at zero.
"""

from __future__ import annotations

import math
import os
import tomllib
from dataclasses import MISSING, Field, fields, is_dataclass
from pathlib import Path
from typing import Any, get_type_hints

from rotorpump.errors import InputError
from rotorpump.quantities import choice, finite
from rotorpump.rig.rig import AXES, Rig
from rotorpump.rig.slide import Slide
from rotorpump.tasks import Pump, Rotate, SpinUp, Start, Task

KINDS: dict[str, type[Pump] | type[SpinUp] | type[Rotate]] = {
    "pump": Pump,
    "spin-up": SpinUp,
    "rotate": Rotate,
}
"""Kinds of task by the word that a rig file uses."""

PARTS: dict[str, Any] = {
    name: hint for name, hint in get_type_hints(Rig).items() if is_dataclass(hint)
}
"""Parts of a rig, each with a table of its own."""

POSITION = "position"
"""Key that holds the mass along an axis [m]."""

NUMBERS = tuple(f for f in fields(Rig) if f.name not in (*PARTS, *AXES, "mass"))
"""Numbers of a rig that stand in [rig]."""

MASS = tuple(f for f in fields(Rig) if f.name == "mass")
"""The number of a rig that stands in [mass]."""

TABLES = ("rig", "wheel", "mass", *AXES, *(name for name in PARTS if name != "wheel"), "task")

Table = dict[str, Any]


def read_rig(path: str | os.PathLike[str]) -> tuple[Rig, Task]:
    """Read a rig file.

    Parameters
    ----------
    path : str or path-like
        The TOML file.

    Returns
    -------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.

    Raises
    ------
    InputError
        If the file cannot be read or its content breaks a rule; the message names file, table,
        key, rule and the value received.
    """
    place = os.fspath(path)
    if Path(place).is_dir():
        raise InputError("rig file", "must be a file, not a directory", place)
    try:
        # a byte order mark, as some editors write it, is no part of the text
        text = Path(place).read_text(encoding="utf-8-sig")
    except FileNotFoundError as error:
        raise InputError("rig file", "must exist", place) from error
    except OSError as error:
        raise InputError("rig file", f"must be readable ({error.strerror})", place) from error
    except UnicodeDecodeError as error:
        wrong = error.object[error.start : error.end]
        raise InputError("rig file", "must be UTF-8 text", wrong, place) from error
    except ValueError as error:
        raise InputError("rig file", f"must be a path ({error})", place) from error
    return parse_rig(text, place)


def parse_rig(text: str, where: str) -> tuple[Rig, Task]:
    """Parse the text of a rig file.

    Parameters
    ----------
    text : str
        TOML text.
    where : str
        Name of the file, for error messages.

    Returns
    -------
    rig : Rig
        The machine.
    task : Pump, SpinUp or Rotate
        What is to be achieved.

    Raises
    ------
    InputError
        If the text breaks a rule; the message names file, table, key, rule and value received.
    """
    try:
        content = tomllib.loads(text)
    except (ValueError, RecursionError) as error:
        raise InputError("rig file", "must be valid TOML", str(error), where) from error
    _known(content, TABLES, where)
    parts = {
        name: _build(kind, _table(content, name, where), f"{where} [{name}]")
        for name, kind in PARTS.items()
    }
    for axis in AXES:
        if axis in content or axis == "radial":
            parts[axis] = _axis(_table(content, axis, where), f"{where} [{axis}]")
    mass = _keys(MASS, _table(content, "mass", where), f"{where} [mass]")
    numbers = _keys(NUMBERS, _table(content, "rig", where, required=False), f"{where} [rig]")
    rig = _rig(parts, mass, numbers, where)
    return rig, _task(rig, _table(content, "task", where), f"{where} [task]")


def write_rig(rig: Rig, task: Task) -> str:
    """Return the text of a rig file that reads back as this rig and task."""
    kind = next(word for word, kind in KINDS.items() if isinstance(task, kind))
    tables: dict[str, Table] = {name: {} for name in TABLES}
    tables["rig"] = {f.name: getattr(rig, f.name) for f in NUMBERS}
    tables["mass"] = {f.name: getattr(rig, f.name) for f in MASS}
    for name in PARTS:
        tables[name] = _values(getattr(rig, name))
    for axis in AXES:
        part = getattr(rig, axis)
        tables[axis] = _values(part) if isinstance(part, Slide) else {POSITION: part}
    tables["task"] = {"kind": kind, **_values(task)}
    blocks = []
    for name, table in tables.items():
        lines = [f"{key} = {_toml(value)}" for key, value in table.items() if value is not None]
        blocks.append("\n".join([f"[{name}]", *lines, ""]))
    return "\n".join(blocks)


def _known(table: Table, allowed: tuple[str, ...], where: str) -> None:
    for key, value in table.items():
        if key not in allowed:
            words = ", ".join(allowed)
            raise InputError(key, f"is unknown here; allowed: {words}", value, where)


def _table(content: Table, name: str, where: str, required: bool = True) -> Table:
    if name not in content:
        if required:
            raise InputError(f"[{name}]", "is a required table", "none", where)
        return {}
    table = content[name]
    if not isinstance(table, dict):
        raise InputError(f"[{name}]", "must be a table", table, where)
    return table


def _keys(known: tuple[Field[Any], ...], table: Table, where: str) -> Table:
    """Return ``table``; its keys must be known and the required ones there, its numbers sane."""
    _known(table, tuple(f.name for f in known), where)
    for entry in known:
        optional = entry.default is not MISSING or entry.default_factory is not MISSING
        if entry.name not in table and not optional:
            raise InputError(entry.name, "is required", "none", where)
    for key, value in table.items():
        for number in value if isinstance(value, list) else [value]:
            if isinstance(number, int) and abs(number) >= 2**1023:
                raise InputError(key, "must be a number that a float can hold", number, where)
    return table


def _build(kind: Any, table: Table, where: str) -> Any:
    """Construct a dataclass from its table; its own error gets the place."""
    _keys(fields(kind), table, where)
    try:
        return kind(**table)
    except InputError as error:
        raise error.at(where) from error


def _axis(table: Table, where: str) -> Any:
    """Construct a slide, or return the position that holds the mass."""
    if POSITION not in table:
        return _build(Slide, table, where)
    _known(table, (POSITION,), where)
    try:
        return finite(POSITION, table[POSITION])
    except InputError as error:
        raise error.at(where) from error


def _rig(parts: Table, mass: Table, numbers: Table, where: str) -> Rig:
    """Construct the rig; an error of its own rules gets the place where the user wrote it."""
    try:
        return Rig(**parts, **mass, **numbers)
    except InputError as error:
        if error.field in AXES:
            place = f"{where} [{error.field}]"
            raise InputError(POSITION, error.rule, error.received, place) from error
        table = "radial" if error.field == "stroke" else "mass" if error.field in mass else "rig"
        raise error.at(f"{where} [{table}]") from error


def _task(rig: Rig, table: Table, where: str) -> Task:
    """Construct the task, and check that it can begin on this rig."""
    if "kind" not in table:
        raise InputError("kind", "is required", "none", where)
    rest = {key: value for key, value in table.items() if key != "kind"}
    try:
        kind = KINDS[choice("kind", table["kind"], tuple(KINDS))]
        _known(table, ("kind", *(f.name for f in fields(kind))), where)
        task: Task = _build(kind, rest, where)
        if isinstance(task, Start):
            task.check(rig)
    except InputError as error:
        raise error.at(where) from error
    return task


def _values(part: Any) -> Table:
    return {f.name: getattr(part, f.name) for f in fields(part)}


def _toml(value: Any) -> str:
    """Return a field's value as TOML."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, tuple):
        return f"[{', '.join(map(_toml, value))}]"
    return "inf" if math.isinf(value) else repr(float(value))
