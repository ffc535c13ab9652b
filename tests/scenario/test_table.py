"""Wrong tables: the message names the file, the row (the header is row 1) and the column."""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

import pytest

from fzconnect.errors import ScenarioError
from fzconnect.scenario import load

Write = Callable[..., Path]

FILE = {"total = 30": 'file = "cutoffs.csv"'}


def _refused(path: Path, message: str) -> None:
    """The whole message, with the test's folder left out of the paths."""
    with pytest.raises(ScenarioError, match="^" + re.escape(f"{path.parent}/{message}") + "$"):
        load(path)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "thickness",
            "thicknes",
            'row 1: unknown column "thicknes", did you mean "thickness"?',
        ),
        ("thickness", "Thickness", 'row 1: unknown column "Thickness", did you mean "thickness"?'),
        (
            "permeability",
            "colour",
            'row 1: unknown column "colour", allowed are layer, thickness, vsh, permeability, '
            "porosity, kind",
        ),
        (
            "permeability",
            "",
            "row 1: column 4 has no name, allowed are layer, thickness, vsh, permeability, "
            "porosity, kind; a comma at the end of each line makes a column too many",
        ),
        ("permeability", "vsh", 'row 1: found the column "vsh" twice, expected it once'),
        (
            "vsh,permeability",
            "porosity,permeability",
            'row 1: the column "vsh" is missing, expected the header '
            "layer,thickness,vsh[,permeability][,porosity][,kind]",
        ),
        ("M1,10,", "M1,,", "row 3, column thickness: is empty, expected a value"),
        ("M1,10,", ",10,", "row 3, column layer: is empty, expected a value"),
        (
            "M1,10,0.7,0.01",
            "M1,10",
            "row 3, column vsh: is empty, expected a value",
        ),
        (
            "M1,10,",
            "M1,ten,",
            'row 3, column thickness: found "ten", expected a number in m, bare or with a unit '
            'such as "390 ft"',
        ),
        (
            "M1,10,",
            'M1,"10,5",',
            'row 3, column thickness: found "10,5", expected a number in m, bare or with a unit '
            'such as "390 ft"; write 10.5 with a decimal point',
        ),
        (
            "M1,10,",
            "M1,nan,",
            "row 3, column thickness: found nan, expected a number from 0.001 to 1000000 m",
        ),
        (
            "M1,10,",
            "M1,inf,",
            "row 3, column thickness: found inf, expected a number from 0.001 to 1000000 m",
        ),
        (
            "M1,10,",
            "M1,1e999,",
            "row 3, column thickness: found inf, expected a number from 0.001 to 1000000 m",
        ),
        (
            "M1,10,",
            "M1,0,",
            "row 3, column thickness: found 0, expected a number from 0.001 to 1000000 m",
        ),
        (
            "M1,10,",
            "M1,-10,",
            "row 3, column thickness: found -10, expected a number from 0.001 to 1000000 m",
        ),
        ("0.7", "1.7", "row 3, column vsh: found 1.7, expected a number from 0 to 1"),
        ("0.7", "-0.1", "row 3, column vsh: found -0.1, expected a number from 0 to 1"),
        (
            "0.7,0.01",
            "0.7,-1",
            "row 3, column permeability: found -1, expected a number from 0 to 1000000000 mD",
        ),
        (
            "S2,30,0.2,150",
            "S2,30,0.2,",
            'row 4, column permeability: layer "S2" is sand and has no permeability, other '
            "layers have one; expected a value for every sand or for no layer",
        ),
        ("S2", "S1", 'row 4, column layer: found "S1" twice, expected each layer once'),
        (
            "S2",
            "S > 2",
            'row 4, column layer: found "S > 2", expected a name without the " > " of pathways',
        ),
        (
            "S2",
            "S\x07",
            r'row 4, column layer: found "S\u0007", which holds the control character U+0007',
        ),
        (
            "M1,10,0.7,0.01",
            "M1,10,0.7,0.01,9,9",
            "row 3: has 6 cells, the header has 4; expected as many, a text with a comma belongs "
            "in quotes",
        ),
    ],
)
def test_wrong_column_table(write: Write, old: str, new: str, message: str) -> None:
    _refused(write(column={old: new}), f"column.csv, {message}")


def test_wrong_porosity_and_kind(write: Write) -> None:
    path = write()
    (path.parent / "column.csv").write_text(
        "layer,thickness,vsh,porosity,kind\nS1,1,0,1.2,Sand\nM1,1,1,0.1,mud\n"
    )
    place = f"{path.parent}/column.csv, row"
    message = (
        f"{place} 2, column porosity: found 1.2, expected a number from 0 to 1\n"
        f'{place} 2, column kind: found "Sand", did you mean "sand"? expected "sand" or "shale"\n'
        f'{place} 3, column kind: found "mud", expected "sand" or "shale"'
    )
    with pytest.raises(ScenarioError, match="^" + re.escape(message) + "$"):
        load(path)


def test_row_numbers_count_blank_lines(write: Write) -> None:
    path = write(column={"layer,": "\n\nlayer,", "S2,30": "\nS2,-30"})
    with pytest.raises(ScenarioError, match=r"column.csv, row 7, column thickness: found -30"):
        load(path)


@pytest.mark.parametrize(("mark", "name"), [(";", "semicolons"), ("\t", "tabs")])
def test_other_separators(write: Write, mark: str, name: str) -> None:
    path = write(column={",": mark})
    _refused(
        path,
        f"column.csv, row 1: columns are separated by {name}, expected commas; save it as CSV "
        "with commas between columns and points in numbers",
    )


def test_quotation_mark_left_open(write: Write) -> None:
    path = write(column={"S1,": '"S1,'})
    _refused(path, "column.csv: is not a CSV table, a quotation mark may be left open")


def test_separators_only(write: Write) -> None:
    path = write()
    (path.parent / "column.csv").write_text(",,,\n,,,\n")
    message = "has separators and no cells, expected a scenario table (CSV)"
    _refused(path, f"column.csv: {message}")


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("layer,thickness,vsh\n" * 20_001, "column.csv: has 20001 rows, expected at most 20000"),
        ("," * 4_000_000, "column.csv, row 1: has 4000001 columns, expected at most 100"),
    ],
)
def test_table_of_something_else(write: Write, text: str, message: str) -> None:
    path = write()
    (path.parent / "column.csv").write_text(text)
    _refused(path, message)


def test_header_without_rows(write: Write) -> None:
    path = write()
    (path.parent / "column.csv").write_text("layer,thickness,vsh\n")
    message = "has a header and no rows, expected one row for each entry"
    _refused(path, f"column.csv: {message}")


def test_one_layer(write: Write) -> None:
    path = write()
    (path.parent / "column.csv").write_text("layer,thickness,vsh\nS1,1,0\n")
    _refused(path, "column.csv: found 1 layers, expected 2 to 2000")


def test_too_many_layers(write: Write) -> None:
    path = write()
    rows = "".join(f"L{i},1,{i % 2}\n" for i in range(2001))
    (path.parent / "column.csv").write_text("layer,thickness,vsh\n" + rows)
    _refused(path, "column.csv: found 2001 layers, expected 2 to 2000")


def test_no_sand_at_all(write: Write) -> None:
    path = write(column={"0.1,200": "0.5,200", "0.2,150": "0.5,150"})
    _refused(
        path,
        "zone.toml, column: no layer is sand: no vsh is at or below the sand cutoff 0.35 and no "
        'kind is "sand"; expected at least one sand',
    )


def test_no_seal_at_all(write: Write) -> None:
    path = write({"top = 1450": "top = 1450\nsand_cutoff = 0.9"})
    _refused(
        path,
        "zone.toml, column: every layer is sand: no vsh is above the sand cutoff 0.9 and no kind "
        'is "shale"; expected at least one shale',
    )


@pytest.mark.parametrize(
    ("table", "message"),
    [
        (
            "layer,thickness\nS1,1\nS2,1\nM1,1\nM2,1\n",
            'hw.csv, row 3, column layer: found layer "S2" where the footwall column has "M1", '
            "expected the same layers in the same order",
        ),
        (
            "layer,thickness\nS1,1\nM1,1\nS2,1\n",
            "hw.csv: found 3 layers, the footwall column has 4; expected the same layers in the "
            'same order, "M2" is on one side only',
        ),
        (
            "layer,thickness\nS1,1\nM1,1\nS2,1\nM2,1\nS9,1\n",
            "hw.csv: found 5 layers, the footwall column has 4; expected the same layers in the "
            'same order, "S9" is on one side only',
        ),
        (
            "layer,thickness,vsh\nS1,1,0.1\nM1,1,0.2\nS2,1,0.2\nM2,1,0.8\n",
            'hw.csv, row 3, column vsh: layer "M1" is shale in the footwall and sand in the '
            "hanging wall; set its kind to sand or shale in both columns",
        ),
        (
            "layer,thickness\nS1,1\nM1,0\nS2,1\nM2,1\n",
            "hw.csv, row 3, column thickness: found 0, expected a number from 0.001 to 1000000 m",
        ),
    ],
)
def test_wrong_hanging_wall(write: Write, table: str, message: str) -> None:
    path = write({"top = 1450": 'top = 1450\nhanging_wall_file = "hw.csv"'}, hw=table)
    _refused(path, message)


def test_a_wrong_footwall_cell_is_reported_once(write: Write) -> None:
    path = write(
        {"top = 1450": 'top = 1450\nhanging_wall_file = "hw.csv"'},
        {"0.7": "7"},
        hw="layer,thickness\nS1,1\nM1,1\nS2,1\nM2,1\n",
    )
    _refused(path, "column.csv, row 3, column vsh: found 7, expected a number from 0 to 1")


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        (
            "900,",
            "400,",
            "row 4, column distance: found the distance 400 twice, expected each once",
        ),
        (
            "900,",
            "300,",
            "row 4, column distance: found the distance 300 after 400, expected distances in "
            "increasing order",
        ),
        ("1470", "", "row 3, column hanging_wall: is empty, expected a value"),
        (
            "1470",
            "deep",
            'row 3, column hanging_wall: found "deep", expected a number in m, bare or with a '
            'unit such as "390 ft"',
        ),
        (
            "hanging_wall",
            "hangingwall",
            'row 1: unknown column "hangingwall", did you mean "hanging_wall"?',
        ),
    ],
)
def test_wrong_cutoffs(write: Write, old: str, new: str, message: str) -> None:
    _refused(write(FILE, cutoffs={old: new}), f"cutoffs.csv, {message}")


def test_one_cutoff(write: Write) -> None:
    path = write(FILE, cutoffs={"400,1440,1470\n900,1460,1500\n": ""})
    _refused(path, "cutoffs.csv: found 1 cutoffs, expected 2 to 10000")


def test_top_outside_the_cutoffs(write: Write) -> None:
    path = write({**FILE, "top = 1450": "top = 1470"})
    _refused(
        path,
        "zone.toml, column.top: found 1470, expected a depth within the footwall cutoffs, 1440 "
        "to 1460, or no top at all",
    )
