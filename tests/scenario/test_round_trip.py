from __future__ import annotations

import tempfile
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings

from fzconnect.errors import OutputError
from fzconnect.scenario import Scenario, demo, load, save, starter_files
from tests.scenario.strategies import scenarios

Write = Callable[..., Path]


@settings(max_examples=80, deadline=None, suppress_health_check=[HealthCheck.too_slow])
@given(scenarios())
def test_save_then_load_gives_an_equal_scenario(scenario: Scenario) -> None:
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "zone.toml"
        save(scenario, path)
        again = load(path)
        assert again == scenario
        assert again.fingerprint() == scenario.fingerprint()
        first = {file.name: file.read_bytes() for file in path.parent.iterdir()}
        save(again, path)
        assert {file.name: file.read_bytes() for file in path.parent.iterdir()} == first


def test_quillmere_survives_the_round_trip(tmp_path: Path) -> None:
    files = save(demo(), tmp_path / "quillmere.toml")
    assert [file.name for file in files] == [
        "quillmere.toml",
        "column.csv",
        "hanging_wall.csv",
        "cutoffs.csv",
    ]
    assert sorted(tmp_path.iterdir()) == sorted(files)
    assert load(tmp_path / "quillmere.toml") == demo()


def test_a_saved_file_is_written_for_people(write: Write, tmp_path: Path) -> None:
    conduit = "{ strand = 1, from = 1, to = 2, width = 1, permeability = 9 }"
    path = write({"split = [0.5, 0.3, 0.2]": f"conduits = [{conduit}]"})
    (tmp_path / "new").mkdir()
    save(load(path), tmp_path / "new" / "zone.toml")
    assert (
        (tmp_path / "new" / "zone.toml").read_text()
        == """\
name = "Test zone"

[column]
file = "column.csv"
top = 1450.0
sand_cutoff = 0.35

[throw]
total = 30.0
length = 1.0

[strands]
count = 3
lens_width = [20.0, 20.0]
dip = 65.0
conduits = [
    { strand = 1, from = 1.0, to = 2.0, width = 1.0, permeability = 9.0 },
]
"""
    )
    assert (
        (tmp_path / "new" / "column.csv").read_text()
        == """\
layer,thickness,vsh,permeability
S1,20.0,0.1,200.0
M1,10.0,0.7,0.01
S2,30.0,0.2,150.0
M2,40.0,0.8,0.01
"""
    )


def test_save_replaces_its_own_tables(write: Write) -> None:
    path = write()
    scenario = load(path).with_throw_factor(2)
    save(scenario, path)
    assert load(path) == scenario


def test_save_leaves_the_tables_of_another_scenario_alone(write: Write) -> None:
    path = write()
    before = (path.parent / "column.csv").read_bytes()
    message = "column.csv: is there already and is no table of other.toml, expected a folder"
    with pytest.raises(OutputError, match=message):
        save(demo(), path.with_name("other.toml"))
    assert (path.parent / "column.csv").read_bytes() == before
    assert not path.with_name("other.toml").exists()
    save(demo(), path.with_name("other.toml"), overwrite=True)
    assert load(path.with_name("other.toml")) == demo()


def test_save_treats_tables_beside_a_broken_scenario_as_anothers(write: Write) -> None:
    path = write()
    path.write_text("[column\n")
    with pytest.raises(OutputError, match=r"column.csv: is there already and is no table of zone"):
        save(demo(), path)


def test_save_refuses_a_path_that_is_a_table_or_a_folder(tmp_path: Path) -> None:
    with pytest.raises(OutputError, match=r"column.csv: is the name of a table, expected a scen"):
        save(demo(), tmp_path / "column.csv")
    (tmp_path / "zone.toml").mkdir()
    with pytest.raises(OutputError, match=r"zone.toml: is a folder, expected a file or nothing"):
        save(demo(), tmp_path / "zone.toml")
    with pytest.raises(OutputError, match=r"none: cannot be written: there is no such folder"):
        save(demo(), tmp_path / "none" / "zone.toml")
    assert [path.name for path in tmp_path.iterdir()] == ["zone.toml"]


# The starter scenario


def _starter(folder: Path, switched_on: bool) -> Path:
    for name, text in starter_files().items():
        if switched_on and name.endswith(".toml"):
            lines = text.splitlines(keepends=True)
            text = "".join(x[1:] if x[:1] == "#" and x[1:2] not in " \n" else x for x in lines)
        (folder / name).write_text(text, encoding="utf-8")
    return folder / "scenario.toml"


def test_starter_loads(tmp_path: Path) -> None:
    scenario = load(_starter(tmp_path, False))
    assert scenario.strands.count == 3
    assert scenario.fluid is None


def test_starter_loads_with_everything_that_is_switched_off_in_it(tmp_path: Path) -> None:
    path = _starter(tmp_path, True)
    table = (tmp_path / "column.csv").read_text(encoding="utf-8")
    (tmp_path / "hanging_wall.csv").write_text(table, encoding="utf-8")
    scenario = load(path)
    assert scenario.column.hanging_wall == scenario.column.layers
    assert scenario.column.top == 1450
    assert len(scenario.strands.conduits) == 1
    assert scenario.fault_rock is not None
    assert scenario.fluid is not None
    assert scenario.fluid.source is not None
    assert scenario.flow is not None
    assert scenario.uncertainty is not None
    assert all(value is not None for _, value in scenario.uncertainty)
    assert len(scenario.evidence) == 1


def test_every_key_of_the_starter_has_a_comment() -> None:
    for line in starter_files()["scenario.toml"].splitlines():
        if " = " in line.split("  #")[0] and not line.startswith("# "):
            assert "# " in line[1:], line
