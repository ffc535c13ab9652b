from __future__ import annotations

import hashlib
import os
import re
from collections.abc import Callable
from pathlib import Path

import pytest

from fzconnect.errors import ScenarioError, UnitError
from fzconnect.scenario import Conduit, Cutoff, Layer, demo, input_files, load

Write = Callable[..., Path]

FILE = {"total = 30": 'file = "cutoffs.csv"'}


def _refused(path: Path, message: str, kind: type[ScenarioError] = ScenarioError) -> None:
    """The whole message, with the test's folder left out of the paths."""
    with pytest.raises(kind, match="^" + re.escape(f"{path.parent}/{message}") + "$"):
        load(path)


def test_reads_a_small_scenario(write: Write) -> None:
    scenario = load(write())
    assert scenario.name == "Test zone"
    assert scenario.column.layers[0] == Layer(name="S1", thickness=20, vsh=0.1, permeability=200)
    assert scenario.column.is_sand == (True, False, True, False)
    assert scenario.column.top == 1450
    assert scenario.column.sand_cutoff == 0.35
    assert scenario.throw.total == 30
    assert scenario.throw.distances == (0, 1)
    assert scenario.strands.split == (0.5, 0.3, 0.2)
    assert scenario.strands.lens_width == (20, 20)
    assert scenario.strands.dip == 65
    assert scenario.strands.conduits == ()


def test_reads_a_cutoff_table_without_a_top(write: Write) -> None:
    scenario = load(write({**FILE, "top = 1450\n": ""}))
    assert scenario.throw.cutoffs == (
        Cutoff(distance=0, footwall=1450, hanging_wall=1450),
        Cutoff(distance=400, footwall=1440, hanging_wall=1470),
        Cutoff(distance=900, footwall=1460, hanging_wall=1500),
    )
    assert scenario.throw.throws == (0, 30, 40)


def test_reads_shares_and_conduits(write: Write) -> None:
    add = """
conduits = [{ strand = 2, from = 1500, to = 1700, width = 2, permeability = 300 }]
[[strands.shares]]
name = "A"
points = [[0, 1.0], [800, 0.5]]
[[strands.shares]]
name = "B"
points = [[0, 0], [800, 0.5]]
"""
    path = write({"count = 3\n": "", "split = [0.5, 0.3, 0.2]\n": ""}, add=add)
    strands = load(path).strands
    assert strands.count == 2
    assert strands.names == ("A", "B")
    assert strands.split_at(400) == (0.75, 0.25)
    assert strands.conduits == (
        Conduit(strand=2, from_depth=1500, to_depth=1700, width=2, permeability=300),
    )


def test_converts_units_in_the_file_and_in_cells(write: Write) -> None:
    path = write(
        {"total = 30": 'total = "100 ft"', "count = 3": 'count = 3\ndip = "1 rad"'},
        {"S1,20,0.1,200": "S1,20 ft,35 %,0.2 D"},
    )
    scenario = load(path)
    assert scenario.throw.total == 30.48
    assert scenario.strands.dip == pytest.approx(57.29577951308)
    assert scenario.column.layers[0] == Layer(
        name="S1", thickness=6.096, vsh=0.35, permeability=200
    )


def test_hanging_wall_takes_from_the_footwall_what_it_leaves_open(write: Write) -> None:
    path = write(
        {"top = 1450": 'top = 1450\nhanging_wall_file = "hw.csv"'},
        hw="layer,thickness\nS1,25\nM1,12\nS2,36\nM2,48\n",
    )
    column = load(path).column
    assert column.hanging_wall is not None
    assert column.hanging_wall[0] == Layer(name="S1", thickness=25, vsh=0.1, permeability=200)
    assert column.thickness("hanging wall") == 121


def test_accepts_byte_order_mark_blank_lines_and_windows_line_ends(write: Write) -> None:
    path = write()
    plain = load(path)
    for name in ("zone.toml", "column.csv"):
        file = path.parent / name
        text = "\n\n" + file.read_text().replace("S2,", "\nS2,") + "\n\n"
        file.write_bytes(b"\xef\xbb\xbf" + text.replace("\n", "\r\n").encode())
    assert load(path) == plain


def test_layers_may_be_named_like_numbers_and_missing_values(write: Write) -> None:
    path = write(column={"S1,": "NA,", "M1,": "12,", "S2,": '"Upper, sandy",', "M2,": "nan,"})
    assert load(path).column.names == ("NA", "12", "Upper, sandy", "nan")


def test_kind_wins_over_vsh(write: Write) -> None:
    column = "layer,kind,vsh,thickness\nS1,shale,0.1,20\nM1,sand,0.9,10\nM2,,0.8,5\n"
    path = write()
    (path.parent / "column.csv").write_text(column)
    assert load(path).column.is_sand == (False, True, False)


def test_quillmere_has_growth_a_tip_and_shares_that_vary() -> None:
    scenario = demo()
    assert scenario.name == "Quillmere storage prospect"
    assert len(scenario.column.layers) >= 24
    hanging_wall = scenario.column.hanging_wall
    assert hanging_wall is not None
    assert scenario.column.thickness("hanging wall") > scenario.column.thickness()
    layers = scenario.column.layers
    sands = [x.thickness for x, sand in zip(layers, scenario.column.is_sand, strict=True) if sand]
    assert min(sands) < 6
    assert max(sands) > 30
    assert scenario.throw.throws[0] == 0
    assert max(scenario.throw.throws) > 50
    assert scenario.throw.distances[-1] == pytest.approx(3000, rel=0.1)
    assert scenario.strands.count == 3
    assert scenario.strands.split_at(500) != scenario.strands.split_at(2500)


def test_input_files_are_hashed_by_the_names_in_the_scenario(write: Write) -> None:
    path = write(FILE)
    expected = {
        name: hashlib.sha256((path.parent / name).read_bytes()).hexdigest()
        for name in ("zone.toml", "column.csv", "cutoffs.csv")
    }
    assert input_files(path) == expected


# Files that are not what they should be


def test_missing_file(tmp_path: Path) -> None:
    _refused(tmp_path / "a.toml", "a.toml: no such file, expected a scenario file (TOML)")


def test_folder_instead_of_a_file(write: Write) -> None:
    path = write()
    path.rename(path.with_name("scenario.toml"))
    message = f"is a folder, expected the path of a scenario file (TOML); try {path.parent}"
    with pytest.raises(ScenarioError, match=re.escape(message) + "/scenario.toml$"):
        load(path.parent)


def test_missing_table(write: Write) -> None:
    path = write({"column.csv": "layers.csv"})
    _refused(path, "layers.csv: no such file, expected a scenario table (CSV)")


def test_table_that_is_a_folder(write: Write) -> None:
    path = write({'"column.csv"': '"tables"'})
    (path.parent / "tables").mkdir()
    _refused(path, "tables: is a folder, expected the path of a scenario table (CSV)")


def test_table_name_that_no_file_can_have(write: Write) -> None:
    path = write({'"column.csv"': '"a\\u0000.csv"'})
    message = r'zone.toml, column.file: found "a\u0000.csv", expected a file name without control'
    _refused(path, message + " characters")
    with pytest.raises(ScenarioError, match="cannot be the path of a file"):
        load("a\0.toml")


def test_table_name_that_is_no_text(write: Write) -> None:
    path = write({'"column.csv"': "3"})
    _refused(path, "zone.toml, column.file: found 3, expected the name of a CSV file")


@pytest.mark.parametrize("name", ["zone.toml", "column.csv"])
def test_empty_file(write: Write, name: str) -> None:
    path = write()
    (path.parent / name).write_text(" \n\n")
    what = "a scenario file (TOML)" if name == "zone.toml" else "a scenario table (CSV)"
    _refused(path, f"{name}: is empty, expected {what}")


@pytest.mark.parametrize("encoding", ["latin-1", "utf-16"])
@pytest.mark.parametrize("name", ["zone.toml", "column.csv"])
def test_wrong_encoding(write: Write, name: str, encoding: str) -> None:
    path = write({"Test": "Tést"}, {"S1": "Sänd"})
    file = path.parent / name
    file.write_bytes(file.read_text(encoding="utf-8").encode(encoding))
    with pytest.raises(ScenarioError, match=rf"{name}, line \d: is not UTF-8 text \(byte 0x"):
        load(path)


def test_binary_rubbish(write: Write) -> None:
    path = write()
    (path.parent / "column.csv").write_bytes(b"PK\x03\x04\0\0\x08")
    _refused(path, "column.csv: holds binary data, expected a scenario table (CSV) as UTF-8 text")


def test_fifty_megabytes_by_mistake(write: Write) -> None:
    path = write()
    with open(path.parent / "column.csv", "r+b") as file:
        file.truncate(50_000_000)
    _refused(path, "column.csv: is 50 MB, a scenario table (CSV) is under 5 MB")


def test_something_that_is_no_ordinary_file(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "pipe")
    with pytest.raises(ScenarioError, match="pipe: is not an ordinary file, expected a scenario"):
        load(tmp_path / "pipe")


def test_no_read_permission(write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    def deny(self: Path) -> bytes:
        raise PermissionError(13, "Permission denied")

    path = write()
    monkeypatch.setattr(Path, "read_bytes", deny)
    _refused(path, "zone.toml: may not be read, expected a file with read permission")


def test_disk_error_while_reading(write: Write, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(self: Path) -> bytes:
        raise OSError(5, "Input/output error")

    path = write()
    monkeypatch.setattr(Path, "read_bytes", fail)
    _refused(path, "zone.toml: cannot be read (Input/output error)")


# TOML


def test_toml_syntax_names_the_line(write: Write) -> None:
    path = write({"total = 30": "total = = 30"})
    _refused(path, "zone.toml: is not valid TOML: Invalid value (at line 8, column 9)")


def test_toml_nested_beyond_sense(write: Write) -> None:
    path = write(add="x = " + "[" * 20_000)
    with pytest.raises(ScenarioError, match=r"zone.toml: is not valid TOML: .*nested too deeply"):
        load(path)


def test_toml_number_with_too_many_digits(write: Write) -> None:
    path = write({"total = 30": "total = " + "9" * 5000})
    with pytest.raises(ScenarioError, match="is not valid TOML: a number has thousands of digits"):
        load(path)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        # unknown keys
        ("top = 1450", "tops = 1450", 'column: unknown key "tops", did you mean "top"?'),
        (
            "top = 1450",
            "colour = 1",
            'column: unknown key "colour", allowed are file, hanging_wall_file, top, sand_cutoff',
        ),
        ("total = 30", "totl = 30", 'throw: unknown key "totl", did you mean "total"?'),
        ("count = 3", "counts = 3", 'strands: unknown key "counts", did you mean "count"?'),
        ("[strands]", "[strand]", 'unknown key "strand", did you mean "strands"?'),
        (
            "count = 3",
            "zone = 3",
            'strands: unknown key "zone", allowed are count, split, shares, lens_width, dip, '
            "conduits",
        ),
        # missing keys
        ('name = "Test zone"', "", 'the key "name" is missing'),
        (
            'file = "column.csv"',
            "",
            'column: the key "file" is missing, expected a CSV file',
        ),
        (
            "top = 1450",
            "",
            'column: the key "top" is missing, expected the depth of the first layer\'s top in '
            "the footwall (only a cutoff table makes it unnecessary)",
        ),
        (
            "total = 30",
            "",
            "throw: found none of them, expected exactly one of total, profile, cutoffs (file)",
        ),
        # wrong kinds of value
        (
            "total = 30",
            "total = true",
            "throw.total: found true, expected a number from -1000000 to 1000000 m",
        ),
        (
            "total = 30",
            "total = [30]",
            "throw.total: found [30], expected a number from -1000000 to 1000000 m",
        ),
        (
            "total = 30",
            "total = inf",
            "throw.total: found inf, expected a number from -1000000 to 1000000 m",
        ),
        (
            "top = 1450",
            "top = -2e6",
            "column.top: found -2000000, expected a number from -1000000 to 1000000 m",
        ),
        (
            "top = 1450",
            "top = nan",
            "column.top: found nan, expected a number from -1000000 to 1000000 m",
        ),
        (
            "top = 1450",
            f"top = {10**400}",
            "column.top: found a huge whole number, expected a number from -1000000 to 1000000 m",
        ),
        (
            "top = 1450",
            "top = 1450\nsand_cutoff = 1.2",
            "column.sand_cutoff: found 1.2, expected a number from 0 to 1",
        ),
        (
            "total = 30",
            "total = 30\nlength = 0",
            "throw.length: found 0, expected a number from 0.001 to 1000000 m",
        ),
        (
            "total = 30",
            "total = 30\nlength = -5",
            "throw.length: found -5, expected a number from 0.001 to 1000000 m",
        ),
        (
            "total = 30",
            "profile = [[0, 30], [1e-300, 31]]",
            "throw.profile: found a fault of 1e-300 m, expected at least 0.001 m",
        ),
        ('"Test zone"', "3", "name: found 3, expected a text in quotes"),
        ('"Test zone"', '"  "', "name: found an empty text, expected a name"),
        (
            '"Test zone"',
            '"a\\u0007b"',
            r'name: found "a\u0007b", which holds the control character U+0007',
        ),
        (
            '"Test zone"',
            '"' + "x" * 201 + '"',
            "name: found a name of 201 characters, expected at most 200",
        ),
        # strands
        (
            "count = 3",
            "count = 0",
            "strands.count: found 0, expected a whole number from 1 to 50",
        ),
        (
            "count = 3",
            "count = 2.5",
            "strands.count: found 2.5, expected a whole number from 1 to 50",
        ),
        (
            "count = 3",
            "count = 51",
            "strands.count: found 51, expected a whole number from 1 to 50",
        ),
        (
            "count = 3",
            "count = true",
            "strands.count: found true, expected a whole number from 1 to 50",
        ),
        (
            "count = 3",
            "count = 2",
            "strands.split: found 3 shares for 2 strands, expected one a strand",
        ),
        (
            "[0.5, 0.3, 0.2]",
            "[0.5, 0.3, 0.1]",
            "strands.split: the sum is 0.9, expected 1 (within 1e-06)",
        ),
        (
            "[0.5, 0.3, 0.2]",
            '[0.5, 0.3, "x"]',
            'strands.split[3]: found "x", expected a fraction such as 0.35, or "35 %"',
        ),
        (
            "[0.5, 0.3, 0.2]",
            "0.5",
            "strands.split: found 0.5, expected a list of numbers, one a strand",
        ),
        ("[0.5, 0.3, 0.2]", "[]", "strands.split: found 0 shares, expected 1 to 50"),
        (
            "count = 3",
            "count = 3\nlens_width = [20]",
            "strands.lens_width: found 1 widths for 3 strands, expected 2, one between "
            "neighbours, or one number for all",
        ),
        (
            "count = 3",
            "count = 3\nlens_width = [20, 0]",
            "strands.lens_width[2]: found 0, expected a number above 0 and up to 1000000 m",
        ),
        (
            "count = 3",
            "count = 3\ndip = 0",
            "strands.dip: found 0, expected a number from 0.1 to 90 degrees",
        ),
        (
            "count = 3",
            "count = 3\ndip = 91",
            "strands.dip: found 91, expected a number from 0.1 to 90 degrees",
        ),
        (
            "count = 3",
            "count = 3\nconduits = [{strand = 4, from = 1, to = 2, width = 1, permeability = 1}]",
            "strands.conduits[1].strand: found strand 4, expected 1 to 3",
        ),
        (
            "count = 3",
            "count = 3\nconduits = [{strand = 1, from = 2, to = 2, width = 1, permeability = 1}]",
            "strands.conduits[1]: found from 2 and to 2, expected from above to (depths are "
            "positive down)",
        ),
        (
            "count = 3",
            "count = 3\nconduits = [{strand = 1, from = 1, to = 2, width = 0, permeability = -1}]",
            "strands.conduits[1].width: found 0, expected a number above 0 and up to 1000000 m\n"
            "zone.toml, strands.conduits[1].permeability: found -1, expected a number from 0 to "
            "1000000000 mD",
        ),
        (
            "count = 3",
            "count = 3\nconduits = [{strand = 1, to = 2, width = 1, permeability = 1}]",
            'strands.conduits[1]: the key "from" is missing',
        ),
        (
            "count = 3",
            "count = 3\nconduits = [{strand = 1, form = 1, to = 2, width = 1, permeability = 1}]",
            'strands.conduits[1]: the key "from" is missing\nzone.toml, strands.conduits[1]: '
            'unknown key "form", did you mean "from"?',
        ),
        (
            "count = 3",
            "count = 3\nconduits = 3",
            "strands.conduits: found 3, expected a list",
        ),
        (
            "count = 3",
            "count = 3\nconduits = [3]",
            "strands.conduits[1]: found 3, expected a table",
        ),
        (
            "[strands]\ncount = 3\nsplit = [0.5, 0.3, 0.2]",
            "[[strands]]\ncount = 3",
            "strands: found [a table], expected a table",
        ),
        # throw
        (
            "total = 30",
            "total = 30\nprofile = [[0, 1], [2, 3]]",
            "throw: found total and profile, expected exactly one of total, profile, cutoffs "
            "(file)",
        ),
        (
            "total = 30",
            "length = 5\nprofile = [[0, 1], [2, 3]]",
            "throw: found length 5 with profile, expected it with total only",
        ),
        (
            "total = 30",
            "profile = [[0, 1], [200, 3], [100, 4]]",
            "throw.profile[3]: found the distance 100 after 200, expected distances in "
            "increasing order",
        ),
        (
            "total = 30",
            "profile = [[0, 1], [200, 3], [200, 4]]",
            "throw.profile[3]: found the distance 200 twice, expected each once",
        ),
        ("total = 30", "profile = [[0, 1]]", "throw.profile: found 1 points, expected 2 to 10000"),
        (
            "total = 30",
            "profile = [[0, 1], [2]]",
            "throw.profile[2]: found [2], expected [distance, throw]",
        ),
        (
            "total = 30",
            'profile = [[0, 1], [2, "x"]]',
            'throw.profile[2][2]: found "x", expected a number in m, bare or with a unit such as '
            '"390 ft"',
        ),
        (
            "total = 30",
            "total = 900",
            "throw: a throw of 900 m pushes every layer past the column, which is 100 m thick, at "
            "every distance; expected a smaller throw or more layers",
        ),
        (
            "total = 30",
            "profile = [[0, -100], [50, -250]]",
            "throw: a throw of -100 m pushes every layer past the column, which is 100 m thick, "
            "at every distance; expected a smaller throw or more layers",
        ),
    ],
)
def test_wrong_toml(write: Write, old: str, new: str, message: str) -> None:
    path = write({old: new})
    separator = ": " if message.startswith(("unknown", "the key")) else ", "
    whole = f"zone.toml{separator}{message}".replace("\nzone", f"\n{path.parent}/zone")
    with pytest.raises(ScenarioError, match="^" + re.escape(f"{path.parent}/{whole}") + "$"):
        load(path)


def test_throw_within_reach_somewhere_is_accepted(write: Write) -> None:
    load(write({"total = 30": "profile = [[0, 99], [50, 900]]"}))
    load(write({"total = 30": "profile = [[0, -900], [50, 900]]"}))


@pytest.mark.parametrize(
    ("points", "message"),
    [
        (
            "[[0, 1.0], [800, 0.5], [400, 1]]",
            "strands.shares[1].points[3]: found the distance 400 after 800, expected distances "
            "in increasing order",
        ),
        ("[]", "strands.shares[1].points: found 0 points, expected 1 to 10000"),
        (
            "[[0, -1]]",
            "strands.shares: the weights at distance 0 sum to 0, expected a sum above zero, and "
            "above 1 % of the largest weight",
        ),
    ],
)
def test_wrong_shares(write: Write, points: str, message: str) -> None:
    add = f"""
[[strands.shares]]
name = "A"
points = {points}
[[strands.shares]]
name = "B"
points = [[0, 1]]
"""
    path = write({"count = 3\n": "", "split = [0.5, 0.3, 0.2]\n": ""}, add=add)
    _refused(path, f"zone.toml, {message}")


def test_shares_with_one_name_twice(write: Write) -> None:
    share = '[[strands.shares]]\nname = "A"\npoints = [[0, 1]]\n'
    path = write({"count = 3\n": "", "split = [0.5, 0.3, 0.2]\n": ""}, add=share * 2)
    message = 'found "A" twice, expected another name for each strand'
    _refused(path, f"zone.toml, strands.shares[2].name: {message}")


def test_shares_beside_a_split(write: Write) -> None:
    path = write(add='[[strands.shares]]\nname = "A"\npoints = [[0, 1]]\n')
    _refused(path, "zone.toml, strands: found split and shares, expected one of them")


def test_unit_that_measures_something_else(write: Write) -> None:
    path = write({"total = 30": 'total = "30 kg"'})
    _refused(
        path,
        'zone.toml, throw.total: found "30 kg", whose unit measures something else; expected a '
        'number in m, bare or with a unit such as "390 ft"',
        UnitError,
    )


def test_many_findings_are_cut_short(write: Write) -> None:
    path = write({"split = [0.5, 0.3, 0.2]": "".join(f"k{i} = 1\n" for i in range(14))})
    with pytest.raises(ScenarioError, match=r"and 4 more$") as caught:
        load(path)
    assert len(str(caught.value).splitlines()) == 11
