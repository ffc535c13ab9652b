from __future__ import annotations

import errno
import json
import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from fzconnect.errors import OutputError
from fzconnect.scenario import demo, load, save
from fzconnect.scenario.store import MARKER, write_file, write_files, write_folder

FILES = {"a.txt": "new a", "b.bin": b"\0new b", "c.txt": "new ç"}


def _content(folder: Path) -> dict[str, bytes]:
    """Everything below a folder, temporary leftovers included."""
    paths = folder.rglob("*")
    return {str(p.relative_to(folder)): p.read_bytes() if p.is_file() else b"" for p in paths}


def _fail(
    monkeypatch: pytest.MonkeyPatch, name: str, code: int, after: int = 0, module: Any = os
) -> None:
    """Let a function of the operating system fail, after some calls that work."""
    calls = 0
    works: Callable[..., Any] = getattr(module, name)

    def fail(*args: Any, **kwargs: Any) -> Any:
        nonlocal calls
        calls += 1
        if calls > after:
            raise OSError(code, os.strerror(code))
        return works(*args, **kwargs)

    monkeypatch.setattr(module, name, fail)


def test_write_file(tmp_path: Path) -> None:
    path = tmp_path / "a.txt"
    assert write_file(path, "ä") == path
    assert path.read_bytes() == "ä".encode()
    write_file(path, b"\0")
    assert _content(tmp_path) == {"a.txt": b"\0"}


def test_write_file_through_a_link(tmp_path: Path) -> None:
    (tmp_path / "real.txt").write_text("old")
    (tmp_path / "link.txt").symlink_to("real.txt")
    write_file(tmp_path / "link.txt", "new")
    assert (tmp_path / "link.txt").is_symlink()
    assert (tmp_path / "real.txt").read_text() == "new"


def test_write_file_where_it_cannot_be(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("old")
    (tmp_path / "folder").mkdir()
    with pytest.raises(OutputError, match=r"folder: is a folder, expected a file or nothing there"):
        write_file(tmp_path / "folder", "x")
    with pytest.raises(OutputError, match=r"none: cannot be written: there is no such folder; no"):
        write_file(tmp_path / "none" / "a.txt", "x")
    with pytest.raises(OutputError, match=r"file: cannot be written: a part of the path is a file"):
        write_file(tmp_path / "file" / "a.txt", "x")
    with pytest.raises(OutputError, match=r"cannot hold a file named '\.\.', expected a plain"):
        write_files(tmp_path, {"..": "x"})
    with pytest.raises(OutputError, match=r"cannot hold a file named 'a/b', expected a plain"):
        write_files(tmp_path, {"a/b": "x"})
    assert _content(tmp_path) == {"file": b"old", "folder": b""}


DISK_FAULTS = [
    ("fsync", errno.ENOSPC, 0, "the disk is full"),
    ("fsync", errno.ENOSPC, 2, "the disk is full"),
    ("fsync", errno.EDQUOT, 1, "the disk quota is used up"),
    ("replace", errno.EACCES, 0, "no write permission"),
    ("replace", errno.EIO, 1, "Input/output error"),
    ("replace", errno.ENOSPC, 2, "the disk is full"),
]


@pytest.mark.parametrize(("name", "code", "after", "reason"), DISK_FAULTS)
def test_a_fault_of_the_disk_leaves_old_files_as_they_were(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, name: str, code: int, after: int, reason: str
) -> None:
    (tmp_path / "a.txt").write_text("old a")
    (tmp_path / "b.bin").write_text("old b")
    before = _content(tmp_path)
    _fail(monkeypatch, name, code, after)
    with pytest.raises(OutputError, match=f"cannot be written: {reason}; nothing was changed"):
        write_files(tmp_path, FILES)
    assert _content(tmp_path) == before


def test_disks_without_hard_links(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "a.txt").write_text("old a")
    before = _content(tmp_path)
    _fail(monkeypatch, "link", errno.EPERM)
    with monkeypatch.context() as patch:
        _fail(patch, "replace", errno.EIO, 1)
        with pytest.raises(OutputError, match="Input/output error; nothing was changed"):
            write_files(tmp_path, FILES)
    assert _content(tmp_path) == before
    write_files(tmp_path, FILES)
    assert set(_content(tmp_path)) == set(FILES)


def test_no_permission_to_make_a_file(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    _fail(monkeypatch, "open", errno.EACCES, module=__import__("builtins"))
    with pytest.raises(OutputError, match="cannot be written: no write permission; nothing was"):
        write_folder(tmp_path / "out", FILES)
    monkeypatch.undo()
    assert _content(tmp_path) == {}


def test_an_interrupt_leaves_old_files_as_they_were(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "a.txt").write_text("old a")
    replace = os.replace

    def interrupt(source: Path, target: Path) -> None:
        if target.name == "b.bin":
            raise KeyboardInterrupt
        replace(source, target)

    monkeypatch.setattr(os, "replace", interrupt)
    with pytest.raises(KeyboardInterrupt, match=r"^$"):
        write_files(tmp_path, FILES)
    assert _content(tmp_path) == {"a.txt": b"old a"}


# Folders


def test_a_new_folder_is_marked(tmp_path: Path) -> None:
    out = write_folder(tmp_path / "deep" / "out", FILES)
    assert {path.name for path in out.iterdir()} == {*FILES, MARKER}
    assert (out / "c.txt").read_text(encoding="utf-8") == "new ç"
    assert json.loads((out / MARKER).read_text()) == {"files": sorted(FILES)}
    assert [path.name for path in out.parent.iterdir()] == ["out"]


def test_an_empty_folder_is_filled(tmp_path: Path) -> None:
    write_folder(tmp_path, FILES)
    assert set(_content(tmp_path)) == {*FILES, MARKER}


def test_a_folder_of_ours_is_brought_up_to_date(tmp_path: Path) -> None:
    out = write_folder(tmp_path / "out", {**FILES, "stale.txt": "x"})
    (out / "notes.txt").write_text("mine")
    write_folder(out, {"a.txt": "newer"})
    assert _content(out).keys() == {"a.txt", "notes.txt", MARKER}
    assert (out / "a.txt").read_text() == "newer"
    assert (out / "notes.txt").read_text() == "mine"


def test_a_strange_folder_is_refused_unless_told(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_text("mine")
    (tmp_path / "thesis.txt").write_text("mine")
    before = _content(tmp_path)
    message = "is not empty and was not written by fzconnect, expected a new or empty folder"
    with pytest.raises(OutputError, match=message):
        write_folder(tmp_path, FILES)
    assert _content(tmp_path) == before
    write_folder(tmp_path, FILES, overwrite=True)
    after = _content(tmp_path)
    assert after["thesis.txt"] == b"mine"
    assert after["a.txt"] == b"new a"


@pytest.mark.parametrize(
    "marker", ["", "{", "[]", '{"files": ["../outside.txt", "notes.txt/", 3]}', "\xff"]
)
def test_a_damaged_marker_removes_nothing(tmp_path: Path, marker: str) -> None:
    out = tmp_path / "out"
    out.mkdir()
    (tmp_path / "outside.txt").write_text("mine")
    (out / "notes.txt").write_text("mine")
    (out / MARKER).write_bytes(marker.encode("latin-1"))
    write_folder(out, FILES)
    assert (tmp_path / "outside.txt").exists()
    assert (out / "notes.txt").exists()


def test_a_file_where_the_folder_should_be(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("mine")
    with pytest.raises(OutputError, match="out: is a file, expected a folder"):
        write_folder(tmp_path / "out", FILES, overwrite=True)
    with pytest.raises(OutputError, match="deep: cannot be written: a file of that name is in"):
        write_folder(tmp_path / "out" / "deep", FILES)
    assert _content(tmp_path) == {"out": b"mine"}


@pytest.mark.parametrize(("name", "code", "after", "reason"), [*DISK_FAULTS[:4], DISK_FAULTS[3]])
def test_a_fault_of_the_disk_leaves_no_new_folder(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, name: str, code: int, after: int, reason: str
) -> None:
    _fail(monkeypatch, name, code, after)
    with pytest.raises(OutputError, match=f"cannot be written: {reason}; nothing was changed"):
        write_folder(tmp_path / "deep" / "out", FILES)
    assert _content(tmp_path) == {}


@pytest.mark.parametrize(("name", "code", "after", "reason"), DISK_FAULTS)
def test_a_fault_of_the_disk_leaves_a_folder_of_ours_as_it_was(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, name: str, code: int, after: int, reason: str
) -> None:
    out = write_folder(tmp_path / "out", {"a.txt": "old a", "stale.txt": "old"})
    before = _content(tmp_path)
    _fail(monkeypatch, name, code, after)
    with pytest.raises(OutputError, match=f"cannot be written: {reason}; nothing was changed"):
        write_folder(out, FILES)
    assert _content(tmp_path) == before


def test_a_stale_file_that_cannot_be_removed_is_said(tmp_path: Path) -> None:
    out = write_folder(tmp_path / "out", {"a.txt": "x", "stale.txt": "x"})
    (out / "stale.txt").unlink()
    (out / "stale.txt").mkdir()
    message = r"stale.txt: is left from an earlier run and cannot be removed: "
    with pytest.raises(OutputError, match=message):
        write_folder(out, {"a.txt": "y"})
    assert (out / "a.txt").read_text() == "y"


@pytest.mark.parametrize(("name", "code", "after", "reason"), DISK_FAULTS)
def test_a_full_disk_keeps_the_old_scenario(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, name: str, code: int, after: int, reason: str
) -> None:
    path = tmp_path / "scenario.toml"
    save(demo(), path)
    _fail(monkeypatch, name, code, after)
    with pytest.raises(OutputError, match=f"cannot be written: {reason}; nothing was changed"):
        save(demo().with_throw_factor(0.5), path)
    monkeypatch.undo()
    assert load(path) == demo()
    assert len(list(tmp_path.iterdir())) == 4
