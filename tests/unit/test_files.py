# SPDX-License-Identifier: BSD-3-Clause
"""Files that are whole or not there, and places that are checked before the work."""

from __future__ import annotations

import os
import sys

import pytest

from rotorpump.errors import InputError
from rotorpump.solution.files import check_folder, prepare_file, prepare_folder, replacing


@pytest.mark.parametrize("place", ["file", "file/below", "file/deep/below"])
@pytest.mark.parametrize("prepare", [prepare_folder, check_folder])
def test_a_folder_that_is_a_file_is_refused(tmp_path, place, prepare):
    (tmp_path / "file").write_text("mine", encoding="utf-8")
    with pytest.raises(InputError, match=r"^--out: must be a folder.*received '.*file") as caught:
        prepare(tmp_path / place, "--out")
    assert caught.value.field == "--out"
    assert [path.name for path in tmp_path.iterdir()] == ["file"]
    assert (tmp_path / "file").read_text(encoding="utf-8") == "mine"


def test_a_folder_is_checked_without_a_trace(tmp_path):
    wanted = tmp_path / "a" / "b"
    assert check_folder(wanted) == wanted
    assert list(tmp_path.iterdir()) == []
    prepare_folder(wanted)
    assert check_folder(wanted) == wanted
    assert wanted.is_dir()
    assert list(wanted.iterdir()) == []


def test_a_name_that_no_file_can_have_is_refused(tmp_path):
    with pytest.raises(InputError, match="--out"):
        check_folder(tmp_path / "a" / ("x" * 5000), "--out")
    assert list(tmp_path.iterdir()) == []
    with pytest.raises(InputError, match=r"^folder: must be a path; received ''"):
        prepare_folder("")
    with pytest.raises(InputError, match=r"^--out: must"):
        check_folder(f"{tmp_path}/a\0b", "--out")


@pytest.mark.parametrize(
    ("place", "rule"),
    [
        ("", "must be a file, not a folder"),
        ("missing/x.json", "must lie in a folder that exists"),
        ("file/x.json", "must lie in a folder that exists"),
    ],
)
def test_a_file_that_cannot_be_written_is_refused(tmp_path, place, rule):
    (tmp_path / "file").touch()
    with pytest.raises(InputError, match=f"^--json: {rule}"):
        prepare_file(tmp_path / place, "--json")


def test_preparing_a_file_does_not_touch_it(tmp_path):
    path = tmp_path / "x.json"
    assert prepare_file(path) == path
    assert not path.exists()
    path.write_text("old", encoding="utf-8")
    prepare_file(path)
    assert path.read_text(encoding="utf-8") == "old"
    assert list(tmp_path.iterdir()) == [path]


def write_half(path, error):
    with replacing(path) as part:
        part.write_text("half", encoding="utf-8")
        raise error


def test_an_interrupted_write_leaves_the_old_file(tmp_path):
    path = tmp_path / "x.txt"
    path.write_text("old", encoding="utf-8")
    with pytest.raises(KeyboardInterrupt):
        write_half(path, KeyboardInterrupt())
    assert path.read_text(encoding="utf-8") == "old"
    assert list(tmp_path.iterdir()) == [path]


def test_a_full_disk_is_told_and_leaves_nothing(tmp_path):
    with pytest.raises(InputError, match=r"^file: must be writable \(No space left"):
        write_half(tmp_path / "x.txt", OSError(28, "No space left on device"))
    assert list(tmp_path.iterdir()) == []


@pytest.mark.skipif(sys.platform == "win32", reason="links and pipes as on POSIX")
def test_links_are_followed_and_pipes_are_not_replaced(tmp_path):
    target = tmp_path / "target"
    target.touch()
    link = tmp_path / "link"
    link.symlink_to(target)
    with replacing(link) as part:
        part.write_text("new", encoding="utf-8")
    assert link.is_symlink()
    assert target.read_text(encoding="utf-8") == "new"
    pipe = tmp_path / "pipe"
    os.mkfifo(pipe)
    assert prepare_file(pipe) == pipe
    with replacing(pipe) as part:
        assert part == pipe
