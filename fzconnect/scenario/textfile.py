"""Input files as text, with every way a file can be wrong said for people."""

from __future__ import annotations

import hashlib
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from fzconnect.errors import ScenarioError

__all__ = ["LARGEST_FILE", "TextFile", "read_text"]

#: No scenario file comes near this many bytes.
LARGEST_FILE = 5_000_000


@dataclass(frozen=True)
class TextFile:
    """The content of one input file and the SHA-256 of its bytes."""

    path: Path
    text: str
    sha256: str


def read_text(path: Path, what: str, *, inside: str = "") -> TextFile:
    """Return the content of a UTF-8 text file.

    Parameters
    ----------
    path : Path
        As it shall appear in messages.
    what : str
        What the file is, such as "a scenario table".
    inside : str
        Name of the file to point at if the path is a folder that holds it.

    Raises
    ------
    ScenarioError
        If there is no such file, it cannot be read, or it is empty, too large or not text.
    """
    if "\0" in str(path):
        msg = f"{str(path)!r}: cannot be the path of a file"
        raise ScenarioError(msg)
    with _said(path):
        if path.is_dir():
            hint = f"; try {path / inside}" if inside and (path / inside).is_file() else ""
            msg = f"{path}: is a folder, expected the path of {what}{hint}"
            raise ScenarioError(msg)
        if not path.exists():
            msg = f"{path}: no such file, expected {what}"
            raise ScenarioError(msg)
        if not path.is_file():
            msg = f"{path}: is not an ordinary file, expected {what}"
            raise ScenarioError(msg)
        size = path.stat().st_size
        if size > LARGEST_FILE:
            limit = LARGEST_FILE / 1e6
            msg = f"{path}: is {size / 1e6:.3g} MB, {what} is under {limit:g} MB"
            raise ScenarioError(msg)
        content = path.read_bytes()
    return TextFile(path, _decoded(content, path, what), hashlib.sha256(content).hexdigest())


def _decoded(content: bytes, path: Path, what: str) -> str:
    if b"\0" in content and not content.startswith((b"\xff\xfe", b"\xfe\xff")):
        msg = f"{path}: holds binary data, expected {what} as UTF-8 text"
        raise ScenarioError(msg)
    try:
        # "utf-8-sig" drops the byte-order mark that spreadsheets write.
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content.count(b"\n", 0, error.start) + 1
        byte = content[error.start]
        msg = (
            f"{path}, line {line}: is not UTF-8 text (byte 0x{byte:02x}), "
            f"expected {what} saved with the encoding UTF-8"
        )
        raise ScenarioError(msg) from None
    if not text.strip():
        msg = f"{path}: is empty, expected {what}"
        raise ScenarioError(msg)
    return text


@contextmanager
def _said(path: Path) -> Iterator[None]:
    """Turn what the operating system says about a path into a `ScenarioError`."""
    try:
        yield
    except PermissionError:
        msg = f"{path}: may not be read, expected a file with read permission"
        raise ScenarioError(msg) from None
    except OSError as error:
        msg = f"{path}: cannot be read ({error.strerror or error})"
        raise ScenarioError(msg) from None
