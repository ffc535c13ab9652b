"""Results as tables and as a notebook shows them."""

from __future__ import annotations

import fzconnect as fz
from fzconnect.scenario import Column, Layer, Scenario, Strands, Throw

QUILLMERE = fz.study(fz.demo())


def test_answers_stand_beside_each_other():
    table = QUILLMERE.answers_table()
    assert list(table.columns) == ["zone", "single_plane"]
    assert table.loc["strands"].tolist() == [3, 1]
    assert table.loc["connected pairs", "zone"] == len(QUILLMERE.connected_pairs)
    assert table.loc["window area, m2", "single_plane"] == float(
        QUILLMERE.single_plane.windows.area.sum()
    )


def test_a_study_shows_its_warnings_and_escapes_names():
    layers = (
        Layer(name="M1", thickness=20, vsh=0.8),
        Layer(name="<b>S1</b>", thickness=10, vsh=0.1),
    )
    scenario = Scenario(
        name="a <script>",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=12),
        strands=Strands(count=2, conduits=()),
    )
    study = fz.study(scenario)
    html = study._repr_html_()
    assert "a &lt;script&gt;" in html
    assert "face rock outside the column" in html
    for shown in (study.windows._repr_html_(), study.network._repr_html_()):
        assert "<b>S1" not in shown
        assert "&lt;b&gt;S1" in shown


def test_links_are_one_row_an_edge_from_the_footwall_side():
    table = QUILLMERE.network.links_table()
    graph = QUILLMERE.network.graph
    assert len(table) == graph.number_of_edges()
    for row in table.itertuples():
        assert graph.nodes[row.footwall_side]["block"] + 1 == row.strand
        assert graph.nodes[row.hanging_wall_side]["block"] == row.strand
        assert graph.edges[row.footwall_side, row.hanging_wall_side]["area"] == row.area


def test_tables_that_no_answer_uses_are_named():
    scenario = fz.demo().model_copy(update={"flow": fz.scenario.Flow()})
    assert any("[flow]" in sentence for sentence in fz.study(scenario).warnings)
