"""Results and scenarios to disk: all of it or nothing, and nobody else's files touched."""

from __future__ import annotations

import errno
import json
import os
import secrets
import shutil
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path

from fzconnect.errors import OutputError

__all__ = [
    "MARKER",
    "check_folder",
    "create_folder",
    "write_file",
    "write_files",
    "write_folder",
]

#: File that marks a folder as written by fzconnect; it lists the files.
MARKER = ".fzconnect-output"

_REASONS = {
    errno.EACCES: "no write permission",
    errno.EPERM: "no write permission",
    errno.EROFS: "it is on a read-only disk",
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "the disk quota is used up",
    errno.EFBIG: "the file is too large for the disk",
    errno.ENOTDIR: "a part of the path is a file, expected a folder",
    errno.EEXIST: "a file of that name is in the way",
    errno.EISDIR: "it is a folder, expected a file",
    errno.ENOENT: "there is no such folder",
    errno.ENAMETOOLONG: "the name is too long",
}


def write_file(path: str | os.PathLike[str], content: str | bytes) -> Path:
    """Write one file beside its place and move it in; an old file stays until that has worked.

    Parameters
    ----------
    path : path
        The file; its folder must exist.
    content : str or bytes
        Text is written as UTF-8.

    Raises
    ------
    OutputError
        If it cannot be written; an old file is then as it was.
    """
    target = Path(path)
    return write_files(target.parent, {target.name: content})[0]


def write_files(folder: Path, files: Mapping[str, str | bytes]) -> tuple[Path, ...]:
    """Write several files into an existing folder: all of them, or none.

    Raises
    ------
    OutputError
        If one of them cannot be written; all files are then as they were.
    """
    _check_names(files, folder)
    # Through a link, the file that it leads to is replaced, not the link.
    targets = {name: Path(os.path.realpath(folder / name)) for name in files}
    for name, target in targets.items():
        if target.is_dir():
            msg = f"{folder / name}: is a folder, expected a file or nothing there"
            raise OutputError(msg)
    staged: dict[str, Path] = {}
    with _said(folder):
        try:
            for name, content in files.items():
                staged[name] = _beside(targets[name], "new")
                _write(staged[name], content)
            _move_in(staged, targets)
        finally:
            for path in staged.values():
                _remove(path)
    return tuple(folder / name for name in files)


def check_folder(out: str | os.PathLike[str], *, overwrite: bool = False) -> bool:
    """Return whether a folder of results is there already, if `write_folder` may write it.

    For refusing before long work what would be refused after it.

    Raises
    ------
    OutputError
        If it is a file, or holds files and was not written by fzconnect.
    """
    folder = Path(out)
    with _said(folder):
        if not folder.is_dir():
            if os.path.lexists(folder):
                msg = f"{folder}: is a file, expected a folder"
                raise OutputError(msg)
            return False
        if not overwrite and _written_before(folder) is None and any(folder.iterdir()):
            msg = (
                f"{folder}: is not empty and was not written by fzconnect, expected a new or "
                "empty folder, or leave to overwrite this one (--overwrite)"
            )
            raise OutputError(msg)
    return True


def create_folder(folder: str | os.PathLike[str], files: Mapping[str, str | bytes]) -> Path:
    """Write files that are the user's own from now on into a new or an empty folder.

    Raises
    ------
    OutputError
        If the folder holds anything or cannot be written.
    """
    target = Path(folder)
    _check_names(files, target)
    with _said(target):
        if not os.path.lexists(target):
            _make_folder(target, files)
        elif not target.is_dir() or any(target.iterdir()):
            msg = f"{target}: is there already, expected a new or an empty folder"
            raise OutputError(msg)
        else:
            write_files(target, files)
    return target


def write_folder(
    out: str | os.PathLike[str], files: Mapping[str, str | bytes], *, overwrite: bool = False
) -> Path:
    """Write a folder of results beside its place and move it in, with a marker file.

    A folder that fzconnect wrote before is brought up to date: its files are replaced, those that
    are no longer produced are removed, files of other origin stay.

    Parameters
    ----------
    out : path
        The folder; missing parents are made.
    files : mapping of str to str or bytes
        Content by file name.
    overwrite : bool
        Also write into a folder that fzconnect did not write.

    Returns
    -------
    Path
        The folder.

    Raises
    ------
    OutputError
        If the folder belongs to somebody else, or cannot be written; everything is then as it was.
    """
    folder = Path(out)
    _check_names(files, folder)
    marked = {**files, MARKER: json.dumps({"files": sorted(files)}, indent=1) + "\n"}
    stale: set[str] = set()
    with _said(folder):
        if not check_folder(folder, overwrite=overwrite):
            _make_folder(folder, marked)
        else:
            old = _written_before(folder)
            write_files(folder, marked)
            stale = (old or set()) - set(files)
    for path in sorted(folder / name for name in stale):
        try:
            path.unlink(missing_ok=True)
        except OSError as error:
            msg = f"{path}: is left from an earlier run and cannot be removed: {_reason(error)}"
            raise OutputError(msg) from None
    return folder


def _make_folder(folder: Path, files: Mapping[str, str | bytes]) -> None:
    missing = [parent for parent in folder.parents if not parent.exists()]
    staged = None
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        staged = _beside(folder, "new")
        staged.mkdir()
        for name, content in files.items():
            _write(staged / name, content)
        os.replace(staged, folder)
    except BaseException:
        if staged is not None:
            shutil.rmtree(staged, ignore_errors=True)
        for parent in missing:
            with suppress(OSError):
                parent.rmdir()
        raise


def _move_in(staged: Mapping[str, Path], targets: Mapping[str, Path]) -> None:
    """Move staged files to their places; if one fails, give every place its old file back."""
    backups: dict[Path, Path | None] = {}
    try:
        for name, path in staged.items():
            target = targets[name]
            backup = _beside(target, "old") if target.exists() else None
            if backup is not None:
                _keep(target, backup)
            backups[target] = backup
            os.replace(path, target)
    except BaseException:
        for target, backup in backups.items():
            # A second failure must not hide the first, nor stop the other files' return.
            with suppress(OSError):
                if backup is None:
                    _remove(target)
                else:
                    os.rename(backup, target)
        raise
    finally:
        for backup in backups.values():
            if backup is not None:
                _remove(backup)


def _keep(target: Path, backup: Path) -> None:
    try:
        os.link(target, backup)
    except OSError:
        # Not every disk knows hard links.
        shutil.copy2(target, backup)


def _write(path: Path, content: str | bytes) -> None:
    data = content.encode() if isinstance(content, str) else content
    with open(path, "xb") as file:
        file.write(data)
        file.flush()
        # Some disks report that they are full only now; better here than after the move.
        os.fsync(file.fileno())


def _beside(target: Path, role: str) -> Path:
    return target.with_name(f".fzconnect-{secrets.token_hex(6)}.{role}")


def _remove(path: Path) -> None:
    with suppress(OSError):
        path.unlink(missing_ok=True)


def _written_before(folder: Path) -> set[str] | None:
    """Return the files that fzconnect wrote into a folder; None if it did not write it."""
    marker = folder / MARKER
    if not marker.is_file():
        return None
    try:
        names = json.loads(marker.read_text(encoding="utf-8"))["files"]
        return {name for name in names if _is_plain(name)}
    except (ValueError, KeyError, TypeError):
        # A damaged list still marks the folder, but nothing may be removed by it.
        return set()


def _is_plain(name: object) -> bool:
    return isinstance(name, str) and name not in ("", ".", "..") and not set(name) & set("/\\\0")


def _check_names(files: Mapping[str, str | bytes], folder: Path) -> None:
    for name in files:
        if not _is_plain(name):
            msg = f"{folder}: cannot hold a file named {name!r}, expected a plain file name"
            raise OutputError(msg)


def _reason(error: OSError) -> str:
    return _REASONS.get(error.errno or 0, error.strerror or str(error))


@contextmanager
def _said(place: Path) -> Iterator[None]:
    """Turn what the operating system says into an `OutputError`."""
    try:
        yield
    except OSError as error:
        msg = f"{place}: cannot be written: {_reason(error)}; nothing was changed"
        raise OutputError(msg) from None
