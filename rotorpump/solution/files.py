# SPDX-License-Identifier: BSD-3-Clause
"""Files that are written whole or not at all, and places that are checked before the work."""

from __future__ import annotations

# os.path rather than Path.exists: it answers for names that no file can have, too
import os
import uuid
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from rotorpump.errors import InputError


def prepare_folder(path: str | os.PathLike[str], field: str = "folder") -> Path:
    """Create a folder if need be, and make sure that files can be written into it.

    Parameters
    ----------
    path : str or path-like
        The folder; missing parents are created, too.
    field : str, optional
        What the user calls it, for the error message.

    Returns
    -------
    Path
        The folder.

    Raises
    ------
    InputError
        If it cannot be created or written into.
    """
    place = _place(path, field)
    try:
        place.mkdir(parents=True, exist_ok=True)
        _try_writing(place)
    except (FileExistsError, NotADirectoryError) as error:
        raise InputError(
            field, "must be a folder, and no part of its path a file", str(place)
        ) from error
    except (OSError, ValueError) as error:
        raise InputError(field, f"must be a writable folder ({_why(error)})", str(place)) from error
    return place


def check_folder(path: str | os.PathLike[str], field: str = "folder") -> Path:
    """Make sure that `prepare_folder` will succeed, and leave everything as it was.

    Parameters
    ----------
    path : str or path-like
        The folder.
    field : str, optional
        What the user calls it, for the error message.

    Returns
    -------
    Path
        The folder, which need not exist.

    Raises
    ------
    InputError
        If it cannot be created or written into.
    """
    place = _place(path, field)
    missing = [folder for folder in (place, *place.parents) if not os.path.exists(folder)]
    try:
        return prepare_folder(place, field)
    finally:
        for folder in missing:
            # one that somebody else has begun to use stays
            if os.path.isdir(folder) and not any(folder.iterdir()):
                folder.rmdir()


def prepare_file(path: str | os.PathLike[str], field: str = "file") -> Path:
    """Make sure that a file can be written, without touching it.

    Parameters
    ----------
    path : str or path-like
        The file; its folder must exist.
    field : str, optional
        What the user calls it, for the error message.

    Returns
    -------
    Path
        The file.

    Raises
    ------
    InputError
        If it is a folder or cannot be written.
    """
    place = _place(path, field)
    try:
        if os.path.isdir(place):
            raise InputError(field, "must be a file, not a folder", str(place))
        if os.path.exists(place):
            if not os.access(place, os.W_OK):
                raise InputError(field, "must be a writable file", str(place))
            if not os.path.isfile(place):
                return place
        folder = Path(os.path.realpath(place)).parent
        if not os.path.isdir(folder):
            raise InputError(field, "must lie in a folder that exists", str(place))
        _try_writing(folder)
    except (OSError, ValueError) as error:
        if isinstance(error, InputError):
            raise
        raise InputError(field, f"must be a writable file ({_why(error)})", str(place)) from error
    return place


@contextmanager
def replacing(path: Path, field: str = "file") -> Iterator[Path]:
    """Give a temporary path to write to; it becomes ``path`` once all is written.

    The temporary file lies in the same folder, and is removed if anything goes wrong. A link is
    followed. What is not a regular file, a pipe or a device, is written to directly.

    Raises
    ------
    InputError
        If the file cannot be written.
    """
    try:
        if os.path.exists(path) and not os.path.isfile(path):
            yield path
            return
        target = Path(os.path.realpath(path))
        part = _temporary(target.parent)
        try:
            yield part
            os.replace(part, target)
        finally:
            part.unlink(missing_ok=True)
    except OSError as error:
        raise InputError(field, f"must be writable ({_why(error)})", str(path)) from error


def write_text(path: Path, text: str, field: str = "file") -> None:
    """Write a text as UTF-8, whole or not at all.

    Raises
    ------
    InputError
        If the file cannot be written.
    """
    with replacing(path, field) as part:
        part.write_text(text, encoding="utf-8", newline="\n")


def _place(path: str | os.PathLike[str], field: str) -> Path:
    name = os.fspath(path)
    if not name:
        raise InputError(field, "must be a path", name)
    return Path(name)


def _temporary(folder: Path) -> Path:
    return folder / f".{uuid.uuid4().hex}.part"


def _try_writing(folder: Path) -> None:
    """Raise OSError unless a file can be made in ``folder``."""
    trial = _temporary(folder)
    try:
        trial.touch(exist_ok=False)
    finally:
        trial.unlink(missing_ok=True)


def _why(error: Exception) -> str:
    return (error.strerror if isinstance(error, OSError) else None) or str(error)
