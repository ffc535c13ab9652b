"""From a scenario file and its tables to a `Scenario`."""

from __future__ import annotations

import os
import tomllib
from collections.abc import Mapping
from importlib import resources
from pathlib import Path
from typing import Any

from pydantic import TypeAdapter, ValidationError

from fzconnect.errors import ScenarioError, nearest
from fzconnect.scenario.model import Scenario
from fzconnect.scenario.part import Place, dotted, refusal
from fzconnect.scenario.quantity import Fraction, show
from fzconnect.scenario.table import Table, read_table
from fzconnect.scenario.textfile import TextFile, read_text

__all__ = ["demo", "input_files", "load"]

# Keys of the file whose values the models hold in another form.
_KEYS = {
    "column": ("file", "hanging_wall_file", "top", "sand_cutoff"),
    "throw": ("total", "length", "profile", "file"),
}
_FRACTION: TypeAdapter[float] = TypeAdapter(Fraction)
_OPTIONAL = ("permeability", "porosity", "kind")


def load(path: str | os.PathLike[str]) -> Scenario:
    """Return the scenario of a TOML file and the tables that it names.

    Parameters
    ----------
    path : path
        The TOML file. Tables are looked for relative to its folder.

    Returns
    -------
    Scenario
        In m, fractions, mD, MPa, kg/m3, degC and degrees, whatever units the file states.

    Raises
    ------
    ScenarioError
        If a file cannot be read or does not describe a fault zone. One line for each finding:
        the file, the key (list entries counted from one) or the row (the header is row 1) and
        column, what was found and what is allowed.
    """
    return _Reading(Path(path)).scenario()


def input_files(path: str | os.PathLike[str]) -> dict[str, str]:
    """Return the SHA-256 of each file of a scenario, by the name that the scenario gives it.

    Parameters
    ----------
    path : path
        The TOML file.

    Raises
    ------
    ScenarioError
        As `load`.
    """
    reading = _Reading(Path(path))
    reading.scenario()
    tables = {name: table.sha256 for name, table in reading.named.items()}
    return {Path(path).name: reading.source.sha256, **tables}


def demo() -> Scenario:
    """Return the Quillmere storage prospect, an invented scenario that comes with fzconnect.

    Examples
    --------
    >>> demo().name
    'Quillmere storage prospect'
    """
    with resources.as_file(resources.files("fzconnect") / "data" / "quillmere") as folder:
        return load(folder / "scenario.toml")


class _Reading:
    """One reading of a scenario file; remembers where every value came from."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self.source: TextFile = read_text(path, "a scenario file (TOML)", inside="scenario.toml")
        self.tables: dict[Place, Table] = {}
        self.named: dict[str, Table] = {}

    def scenario(self) -> Scenario:
        data = self._toml()
        for key, allowed in _KEYS.items():
            self._check_keys(data.get(key), key, allowed)
        if isinstance(data.get("column"), dict):
            data["column"] = self._column(data["column"])
        if isinstance(data.get("throw"), dict):
            data["throw"] = self._throw(data["throw"])
        try:
            return Scenario.model_validate(data)
        except ValidationError as error:
            raise refusal(error, Scenario, self._where) from None

    def _toml(self) -> dict[str, Any]:
        try:
            return tomllib.loads(self.source.text)
        except RecursionError:
            reason = "lists or tables are nested too deeply"
        except ValueError as error:
            # Also covers numbers of more digits than Python converts.
            reason = str(error)
            if reason.startswith("Exceeds the limit"):
                reason = "a number has thousands of digits"
        msg = f"{self.path}: is not valid TOML: {reason}"
        raise ScenarioError(msg) from None

    def _check_keys(self, part: object, key: str, allowed: tuple[str, ...]) -> None:
        for name in part if isinstance(part, dict) else ():
            if name not in allowed:
                hint = nearest(name.lower(), allowed) or f", allowed are {', '.join(allowed)}"
                msg = f"{self.path}, {key}: unknown key {show(name)}{hint}"
                raise ScenarioError(msg)

    def _column(self, part: Mapping[str, Any]) -> dict[str, Any]:
        data = dict(part)
        footwall = self._table(
            data.pop("file", None),
            ("column", "file"),
            ("column", "layers"),
            required=("layer", "thickness", "vsh"),
            optional=_OPTIONAL,
            text=("layer", "kind"),
        )
        data["layers"] = [_layer(row) for row in footwall.rows]
        name = data.pop("hanging_wall_file", None)
        if name is not None:
            other = self._table(
                name,
                ("column", "hanging_wall_file"),
                ("column", "hanging_wall"),
                required=("layer", "thickness"),
                optional=("vsh", *_OPTIONAL),
                text=("layer", "kind"),
            )
            # What the hanging wall leaves open is as in the footwall; the model knows the rest.
            data["hanging_wall"] = [
                {"vsh": _clay(footwall, i), **_layer(row)} for i, row in enumerate(other.rows)
            ]
        return data

    def _throw(self, part: Mapping[str, Any]) -> dict[str, Any]:
        data = dict(part)
        name = data.pop("file", None)
        if name is not None:
            table = self._table(
                name,
                ("throw", "file"),
                ("throw", "cutoffs"),
                required=("distance", "footwall", "hanging_wall"),
            )
            data["cutoffs"] = list(table.rows)
        return data

    def _table(self, name: object, key: Place, place: Place, **columns: Any) -> Table:
        where = f"{self.path}, {dotted(key)}"
        if name is None:
            msg = f'{self.path}, {key[0]}: the key "{key[1]}" is missing, expected a CSV file'
            raise ScenarioError(msg)
        if not isinstance(name, str) or not name.strip():
            msg = f"{where}: found {show(name)}, expected the name of a CSV file"
            raise ScenarioError(msg)
        if not name.isprintable():
            msg = f"{where}: found {show(name)}, expected a file name without control characters"
            raise ScenarioError(msg)
        table = read_table(self.path.parent / name, **columns)
        self.tables[place] = self.named[name] = table
        return table

    def _where(self, place: Place) -> str:
        """Return the file and the key, or the row and column, that a value came from."""
        table = self.tables.get(place[:2])
        if table is None:
            key = dotted(place).replace("throw.cutoffs", "throw.file")
            return f"{self.path}, {key}" if key else str(self.path)
        if len(place) == 2:
            return str(table.path)
        row, column = place[2], place[3] if len(place) > 3 else None
        if column == "name":
            column = "layer"
        return table.place(int(row), str(column) if column else None)


def _clay(footwall: Table, row: int) -> float:
    """Return vsh in the footwall; what is wrong with it there is not said again here."""
    try:
        return _FRACTION.validate_python(footwall.rows[row]["vsh"])
    except (IndexError, ValidationError):
        return 0.0


def _layer(row: Mapping[str, Any]) -> dict[str, Any]:
    return {("name" if column == "layer" else column): cell for column, cell in row.items()}
