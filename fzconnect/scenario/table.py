"""Scenario tables: CSV with a header, one row a layer or a distance."""

from __future__ import annotations

import io
import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from fzconnect.errors import ScenarioError, nearest
from fzconnect.scenario.quantity import show
from fzconnect.scenario.textfile import read_text

__all__ = ["MOST_ROWS", "Table", "read_table", "write_table"]

#: Rows that are read at all; layers and cutoffs have tighter limits.
MOST_ROWS = 20_000

_MOST_COLUMNS = 100

# Words that float() understands are numbers too: the models refuse them as not finite.
_NUMBER = re.compile(
    r"[+-]?(?:(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?|nan|inf|infinity)", re.IGNORECASE
)


@dataclass(frozen=True)
class Table:
    """The rows of a table and where each came from.

    Attributes
    ----------
    path : Path
        File of the table.
    rows : tuple of dict
        Column name to number or text; an empty cell of an optional column is left out.
    lines : tuple of int
        Line of each row in the file; the header is line 1.
    sha256 : str
        Hash of the file's bytes.
    """

    path: Path
    rows: tuple[dict[str, Any], ...]
    lines: tuple[int, ...]
    sha256: str

    def place(self, row: int, column: str | None = None) -> str:
        """Return where a cell is, as "column.csv, row 5, column thickness"."""
        where = f"{self.path}, row {self.lines[row]}"
        return f"{where}, column {column}" if column else where


def read_table(
    path: Path, *, required: Sequence[str], optional: Sequence[str] = (), text: Sequence[str] = ()
) -> Table:
    """Return a table from a CSV file; cells that are numbers become numbers.

    Parameters
    ----------
    path : Path
        As it shall appear in messages.
    required, optional : sequence of str
        Columns that must and may be there, in any order; cells of required columns are filled.
    text : sequence of str
        Columns whose cells stay text whatever they look like.

    Raises
    ------
    ScenarioError
        If the file cannot be read, or its columns or cells are not as expected.
    """
    source = read_text(path, "a scenario table (CSV)")
    cells, lines = _cells(source.text, path)
    header = [name.strip() for name in cells[0]]
    _check_header(header, required, optional, path, lines[0])
    if len(cells) == 1:
        msg = f"{path}: has a header and no rows, expected one row for each entry"
        raise ScenarioError(msg)
    rows: list[dict[str, Any]] = []
    faults = []
    for line, values in zip(lines[1:], cells[1:], strict=True):
        row: dict[str, Any] = {}
        for column, value in zip(header, map(str.strip, values), strict=True):
            if value:
                row[column] = value if column in text else _number_or_text(value)
            elif column in required:
                faults.append(f"{path}, row {line}, column {column}: is empty, expected a value")
        rows.append(row)
    if faults:
        more = [f"and {len(faults) - 10} more"] if len(faults) > 10 else []
        raise ScenarioError("\n".join(faults[:10] + more))
    return Table(path, tuple(rows), tuple(lines[1:]), source.sha256)


def _number_or_text(value: str) -> float | str:
    return float(value) if _NUMBER.fullmatch(value) else value


def _cells(text: str, path: Path) -> tuple[list[list[str]], list[int]]:
    """Return the cells of all rows that are not blank, and the line of each row."""
    import pandas as pd

    # pandas counts the columns on the first line, so blank lines before it have to go.
    body = text.lstrip()
    skipped = text[: len(text) - len(body)].count("\n")
    _check_separator(body.splitlines()[0], path, skipped + 1)
    _check_size(body, path)
    try:
        # Cells are read as text: only then can a message show what really stands there.
        frame = pd.read_csv(
            io.StringIO(body),
            header=None,
            dtype=str,
            na_filter=False,
            skip_blank_lines=False,
            skipinitialspace=True,
        )
    except pd.errors.ParserError as error:
        found = re.search(r"Expected (\d+) fields in line (\d+), saw (\d+)", str(error))
        if found is None:
            msg = f"{path}: is not a CSV table, a quotation mark may be left open"
            raise ScenarioError(msg) from None
        line = int(found[2]) + skipped
        msg = (
            f"{path}, row {line}: has {found[3]} cells, the header has {found[1]}; "
            "expected as many, a text with a comma belongs in quotes"
        )
        raise ScenarioError(msg) from None
    rows = [[str(cell) for cell in row] for row in frame.itertuples(index=False)]
    kept = [(row, i + 1 + skipped) for i, row in enumerate(rows) if any(map(str.strip, row))]
    if not kept:
        msg = f"{path}: has separators and no cells, expected a scenario table (CSV)"
        raise ScenarioError(msg)
    return [row for row, _ in kept], [line for _, line in kept]


def _check_separator(header: str, path: Path, line: int) -> None:
    for mark, name in ((";", "semicolons"), ("\t", "tabs")):
        if mark in header and "," not in header:
            msg = (
                f"{path}, row {line}: columns are separated by {name}, expected commas; "
                "save it as CSV with commas between columns and points in numbers"
            )
            raise ScenarioError(msg)


def _check_size(body: str, path: Path) -> None:
    """Refuse, before the slow part, what is a table of something else."""
    rows = len(body.splitlines())
    if rows > MOST_ROWS:
        msg = f"{path}: has {rows} rows, expected at most {MOST_ROWS}"
        raise ScenarioError(msg)
    columns = body.splitlines()[0].count(",") + 1
    if columns > _MOST_COLUMNS:
        msg = f"{path}, row 1: has {columns} columns, expected at most {_MOST_COLUMNS}"
        raise ScenarioError(msg)


def _check_header(
    header: Sequence[str],
    required: Sequence[str],
    optional: Sequence[str],
    path: Path,
    line: int,
) -> None:
    allowed = [*required, *optional]
    where = f"{path}, row {line}"
    for i, name in enumerate(header):
        if not name:
            msg = (
                f"{where}: column {i + 1} has no name, allowed are {', '.join(allowed)}; "
                "a comma at the end of each line makes a column too many"
            )
            raise ScenarioError(msg)
        if name not in allowed:
            absent = [column for column in allowed if column not in header]
            hint = nearest(name.lower(), absent) or f", allowed are {', '.join(allowed)}"
            msg = f"{where}: unknown column {show(name)}{hint}"
            raise ScenarioError(msg)
        if name in header[:i]:
            msg = f"{where}: found the column {show(name)} twice, expected it once"
            raise ScenarioError(msg)
    missing = [column for column in required if column not in header]
    if missing:
        msg = (
            f"{where}: the column {show(missing[0])} is missing, expected the header "
            f"{','.join(required)}" + "".join(f"[,{column}]" for column in optional)
        )
        raise ScenarioError(msg)


def write_table(rows: Sequence[Mapping[str, Any]], columns: Sequence[str]) -> str:
    """Return rows as CSV text; None is an empty cell, numbers keep every digit."""
    import pandas as pd

    # Numbers are turned to text here, by the shortest form that reads back the same.
    cells = [["" if row[name] is None else str(row[name]) for name in columns] for row in rows]
    frame = pd.DataFrame(cells, columns=list(columns), dtype=object)
    return frame.to_csv(index=False, lineterminator="\n")
