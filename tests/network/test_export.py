from __future__ import annotations

import csv
import io
import json
import re
from pathlib import Path

import networkx as nx
import pytest

from fzconnect import __version__
from fzconnect.errors import OutputError
from fzconnect.network import Study, export_graph, study, study_files
from tests.network.hand import scenario


@pytest.fixture(scope="module")
def result() -> Study:
    return study(scenario())


@pytest.fixture(scope="module")
def files(result: Study) -> dict[str, str | bytes]:
    return study_files(result, result.ranked_pathways(), inputs={"scenario.toml": "ab" * 32})


def _rows(files: dict[str, str | bytes], name: str) -> list[dict[str, str]]:
    text = files[name]
    assert isinstance(text, str)
    return list(csv.DictReader(io.StringIO(text)))


def _header(files: dict[str, str | bytes], name: str) -> list[str]:
    text = files[name]
    assert isinstance(text, str)
    return text.splitlines()[0].split(",")


def test_the_files_are_those_of_the_contract(files: dict[str, str | bytes]) -> None:
    assert set(files) >= {
        "summary.json",
        "windows.csv",
        "sand_pairs.csv",
        "pathways.csv",
        "network.graphml",
        "network.json",
    }


def test_columns_start_with_those_of_the_contract(files: dict[str, str | bytes]) -> None:
    assert _header(files, "windows.csv")[:9] == [
        "strand",
        "footwall_side_sand",
        "hanging_wall_side_sand",
        "distance_from",
        "distance_to",
        "top",
        "base",
        "max_height",
        "area",
    ]
    assert _header(files, "sand_pairs.csv")[:7] == [
        "hanging_wall_sand",
        "footwall_sand",
        "connected",
        "connected_single_plane",
        "bottleneck_area",
        "transmissibility_low",
        "transmissibility_high",
    ]


def test_windows_are_written_row_by_row(files: dict[str, str | bytes]) -> None:
    rows = _rows(files, "windows.csv")
    assert len(rows) == 6
    first = rows[0]
    assert (first["strand"], first["footwall_side_sand"], first["contact"]) == (
        "1",
        "S1",
        "faulted",
    )
    assert float(first["area"]) == pytest.approx(8.0)
    assert (float(first["top"]), float(first["base"])) == pytest.approx((1112.0, 1120.0))


def test_every_pair_has_a_row_with_its_cut(files: dict[str, str | bytes]) -> None:
    rows = {(r["hanging_wall_sand"], r["footwall_sand"]): r for r in _rows(files, "sand_pairs.csv")}
    assert len(rows) == 4
    assert {r["connected"] for r in rows.values()} == {"true"}
    assert [r["connected_single_plane"] for r in rows.values()] == ["false", "true"] + ["false"] * 2
    assert {r["transmissibility_low"] for r in rows.values()} == {""}
    assert {r["transmissibility_high"] for r in rows.values()} == {""}
    cuts = {pair: float(r["minimum_cut_area"]) for pair, r in rows.items()}
    expected = {("S1", "S1"): 4, ("S1", "S2"): 10, ("S2", "S1"): 2, ("S2", "S2"): 2}
    assert cuts == pytest.approx(expected)
    assert [r["critical_windows"] for r in rows.values()] == ["1", "0", "2", "1"]
    assert rows["S1", "S1"]["crossings"] == "2"


def test_pathways_are_written_with_their_ranks(files: dict[str, str | bytes]) -> None:
    first, second = _rows(files, "pathways.csv")[:2]
    assert (first["rank"], second["rank"]) == ("1", "2")
    assert first["pathway"] == "hanging wall: S1 > lens 1: S1 > footwall: S1"
    assert float(first["resistance"]) == pytest.approx(0.625)
    assert second["crossings"] == "4"


def test_the_summary_holds_both_answers_and_where_they_come_from(
    files: dict[str, str | bytes], result: Study
) -> None:
    text = files["summary.json"]
    summary = json.loads(text)
    assert summary["name"] == "By hand"
    assert (summary["zone"]["connected_pairs"], summary["single_plane"]["connected_pairs"]) == (
        4,
        1,
    )
    assert (summary["pairs_gained"], summary["pairs_lost"], summary["sand_pairs"]) == (3, 0, 4)
    assert summary["greatest_throw"] == pytest.approx(30.0)
    assert summary["warnings"] == []
    assert summary["inputs_sha256"] == {"scenario.toml": "ab" * 32}
    assert re.fullmatch("[0-9a-f]{64}", summary["scenario_sha256"])
    assert summary["scenario_sha256"] == result.scenario.fingerprint()
    assert summary["versions"]["fzconnect"] == __version__


def test_a_study_without_any_connection_writes_empty_tables() -> None:
    single = scenario((1.0,)).with_throw_factor(50 / 30)  # 50 m: nothing faces anything
    result = study(single)
    assert not result.connected_pairs
    files = study_files(result, result.ranked_pathways())
    assert _rows(files, "windows.csv") == []
    assert _rows(files, "pathways.csv") == []
    assert "bottleneck_area" in _header(files, "pathways.csv")
    rows = _rows(files, "sand_pairs.csv")
    assert {(r["connected"], r["crossings"], r["minimum_cut_area"]) for r in rows} == {
        ("false", "", "0.0")
    }
    data = json.loads(files["network.json"])
    assert nx.node_link_graph(data, edges="edges").number_of_edges() == 0


def test_names_with_markup_and_accents_survive_graphml() -> None:
    base = scenario()
    layers = tuple(
        layer.model_copy(
            update={"name": {"S1": 'Grès <A> & "B"', "S2": "Ø-砂"}.get(layer.name, layer.name)}
        )
        for layer in base.column.layers
    )
    odd = base.model_copy(update={"column": base.column.model_copy(update={"layers": layers})})
    result = study(odd)
    files = study_files(result, [])
    content = files["network.graphml"]
    assert isinstance(content, bytes)
    again = nx.read_graphml(io.BytesIO(content))
    assert dict(again.nodes(data=True)) == dict(result.network.graph.nodes(data=True))
    assert 'footwall: Grès <A> & "B"' in again
    assert json.loads(files["network.json"])["nodes"][0]["sand"] == 'Grès <A> & "B"'


def test_a_network_is_written_by_the_ending_of_its_path(result: Study, tmp_path: Path) -> None:
    graph = result.network.graph
    path = export_graph(result.network, tmp_path / "n.graphml")
    assert dict(nx.read_graphml(path).nodes(data=True)) == dict(graph.nodes(data=True))
    path = export_graph(result.network, str(tmp_path / "n.json"))
    again = nx.node_link_graph(json.loads(path.read_text(encoding="utf-8")), edges="edges")
    assert dict(again.nodes(data=True)) == dict(graph.nodes(data=True))


@pytest.mark.parametrize(("name", "found"), [("n.csv", "'.csv'"), ("network", "'nothing'")])
def test_another_ending_is_refused(result: Study, tmp_path: Path, name: str, found: str) -> None:
    with pytest.raises(OutputError, match=rf"{name}: ends in {found}, expected .graphml or .json"):
        export_graph(result.network, tmp_path / name)
    assert list(tmp_path.iterdir()) == []
