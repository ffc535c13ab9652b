"""From a `Scenario` to a scenario file and its tables."""

from __future__ import annotations

import os
import re
import tomllib
from importlib import resources
from pathlib import Path
from typing import Any

from fzconnect.errors import OutputError
from fzconnect.scenario.column import Layer
from fzconnect.scenario.model import Scenario
from fzconnect.scenario.store import write_files
from fzconnect.scenario.table import write_table

__all__ = ["save", "starter_files"]

_LAYER_COLUMNS = ("layer", "thickness", "vsh", "permeability", "porosity", "kind")
_CUTOFF_COLUMNS = ("distance", "footwall", "hanging_wall")


def save(
    scenario: Scenario, path: str | os.PathLike[str], *, overwrite: bool = False
) -> tuple[Path, ...]:
    """Write a scenario as a TOML file with its tables beside it, all or nothing.

    The tables are `column.csv`, and where they are needed `hanging_wall.csv` and `cutoffs.csv`.
    Reading the file with `load` gives an equal scenario.

    Parameters
    ----------
    scenario : Scenario
        What to write.
    path : path
        The TOML file; a scenario that is already there is replaced.
    overwrite : bool
        Also replace tables of these names that do not belong to the scenario at `path`.

    Returns
    -------
    tuple of Path
        The files written.

    Raises
    ------
    OutputError
        If a table of another scenario is in the way, or a file cannot be written; then everything
        is as it was before.
    """
    target = Path(path)
    tables = _tables(scenario)
    if target.suffix == ".csv":
        msg = f"{target}: is the name of a table, expected a scenario file such as scenario.toml"
        raise OutputError(msg)
    if not overwrite:
        _check_strangers(target, tables)
    return write_files(target.parent, {target.name: _toml(scenario), **tables})


def starter_files() -> dict[str, str]:
    """Return the files of a commented scenario to start from, by name."""
    folder = resources.files("fzconnect") / "data" / "starter"
    names = ("scenario.toml", "column.csv", "cutoffs.csv")
    return {name: (folder / name).read_text(encoding="utf-8") for name in names}


def _toml(scenario: Scenario) -> str:
    import tomli_w

    data: dict[str, Any] = scenario.model_dump(by_alias=True, exclude_none=True)
    column, throw = data["column"], data["throw"]
    del column["layers"]
    column = {"file": "column.csv", **column}
    if column.pop("hanging_wall", None) is not None:
        column["hanging_wall_file"] = "hanging_wall.csv"
    data["column"] = column
    if throw.pop("cutoffs", None) is not None:
        throw["file"] = "cutoffs.csv"
    if "total" not in throw:
        del throw["length"]
    counts = data.get("uncertainty", {}).get("strand_count")
    if counts is not None:
        data["uncertainty"]["strand_count"] = {str(count): weight for count, weight in counts}
    for empty in ("conduits", "lens_width"):
        if not data["strands"][empty]:
            del data["strands"][empty]
    if not data["evidence"]:
        del data["evidence"]
    # One line for a list of numbers: a split, a lens width, a point. No text can match, because a
    # line break within one is written as an escape.
    return re.sub(
        r"\[\n((?: *[-+.\w]+,\n)+) *\]",
        lambda match: "[" + ", ".join(match[1].replace(",", "").split()) + "]",
        tomli_w.dumps(data),
    )


def _tables(scenario: Scenario) -> dict[str, str]:
    column, throw = scenario.column, scenario.throw
    tables = {"column.csv": _layers(column.layers)}
    if column.hanging_wall is not None:
        tables["hanging_wall.csv"] = _layers(column.hanging_wall)
    if throw.cutoffs is not None:
        rows = [dict(cutoff) for cutoff in throw.cutoffs]
        tables["cutoffs.csv"] = write_table(rows, _CUTOFF_COLUMNS)
    return tables


def _layers(layers: tuple[Layer, ...]) -> str:
    rows = [{"layer": layer.name, **dict(layer)} for layer in layers]
    optional = _LAYER_COLUMNS[3:]
    used = [name for name in optional if any(row[name] is not None for row in rows)]
    return write_table(rows, [*_LAYER_COLUMNS[:3], *used])


def _check_strangers(target: Path, tables: dict[str, str]) -> None:
    """Refuse to replace tables that the scenario at the target, if any, does not name."""
    try:
        old = tomllib.loads(target.read_text(encoding="utf-8-sig"))
    except (OSError, ValueError, RecursionError):
        # Nothing readable there: no table in the folder is its own.
        old = {}
    named = {
        part.get(key)
        for part in (old.get("column"), old.get("throw"))
        if isinstance(part, dict)
        for key in ("file", "hanging_wall_file")
        if isinstance(part.get(key), str)
    }
    for name in tables:
        if name not in named and (target.parent / name).exists():
            msg = (
                f"{target.parent / name}: is there already and is no table of {target.name}, "
                "expected a folder without it, or leave to overwrite it"
            )
            raise OutputError(msg)
