from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from bokeh.core.validation import check_integrity
from bokeh.document import Document

from fzconnect.errors import NetworkError
from fzconnect.network import Study, study
from fzconnect.views import (
    NOTHING,
    Selection,
    faces_figure,
    pair_matrix_figure,
    pathway_graph_figure,
    section_figure,
)
from fzconnect.views.pairmatrix import OUTCOMES
from fzconnect.views.picture import Picture
from fzconnect.views.selection import of_edge, of_node, of_pair, of_pathway, renewed
from tests.network import hand
from tests.network.hand import AREAS, F1, F2, H1, H2, L1, L2


def _pictures(of: Study, at: float) -> dict[str, Any]:
    return {
        "section": section_figure(of, at),
        "faces": faces_figure(of, at),
        "graph": pathway_graph_figure(of),
        "pairs": pair_matrix_figure(of),
    }


def _data(picture: Picture, name: str) -> dict[str, list[Any]]:
    source = picture._sources[name]  # type: ignore[attr-defined]
    return {column: list(values) for column, values in source.data.items()}


# ------------------------------------------------------------------ data equal the geometry


def test_section_draws_the_layers_of_every_block(small: Study) -> None:
    view = section_figure(small, 0.5)
    sands = _data(view, "sands")
    assert len(sands["xs"]) == 6
    assert len(_data(view, "shales")["xs"]) == 9
    section = small.zone.at(0.5)
    edges = section.extent(view._room)
    # two sands a block, footwall to hanging wall: S2 of lens 1 is the fourth
    x, y = section.outline(1, 3, edges)
    assert sands["xs"][3] == pytest.approx(x.tolist())
    assert sands["ys"][3] == pytest.approx(y.tolist()) == [1142, 1142, 1162, 1162]
    assert sands["name"][3] == "S2 in lens 1"
    assert (sands["vsh"][3], sands["thickness"][3]) == pytest.approx((0.2, 20))


def test_section_draws_windows_where_they_are(small: Study) -> None:
    view = section_figure(small, 0.5)
    drawn = _data(view, "windows")
    assert (
        pytest.approx(
            np.array(
                [
                    (-5, 1112, 1120),
                    (-5, 1130, 1132),
                    (-5, 1142, 1150),
                    (5, 1130, 1132),
                    (5, 1142, 1150),
                    (5, 1160, 1162),
                ]
            )
        )
        == np.array([drawn["x0"], drawn["y0"], drawn["y1"]]).T
    )
    assert drawn["name"][1] == "S2 against S1"
    assert _data(view, "contacts")["x0"] == []


def test_section_says_how_it_is_stretched(small: Study, quillmere: Study) -> None:
    # vertical strands 10 m apart in 280 m of rock: 10 times makes them 100 m apart
    narrow = section_figure(small, 0.5)
    assert narrow.stretch == 10
    assert narrow.figure.aspect_scale == 10
    assert narrow.figure.xaxis[0].axis_label == "Across the fault, m (stretched 10 times)"
    assert section_figure(quillmere, 1000).figure.xaxis[0].axis_label.endswith("(equal scale)")


def test_upright_section_keeps_depths_and_says_it_is_not_to_scale(quillmere: Study) -> None:
    view = section_figure(quillmere, 1550)
    to_scale = {name: dict(_data(view, name)) for name in ("windows", "contacts")}
    view.stand(True)
    for name, drawn in to_scale.items():
        upright = _data(view, name)
        for column in ("y0", "y1", "name", "strand"):
            assert list(upright[column]) == list(drawn[column])
        assert list(upright["x0"]) == list(upright["x1"])
    # two lenses, each 22 % of the depth range wide, around the middle
    zone = quillmere.zone
    lens = 0.22 * float(zone.faces.max() - zone.faces.min())
    places = sorted(set(np.round(_data(view, "windows")["x0"], 6)))
    assert places == pytest.approx([-lens, 0.0, lens])
    assert "not to scale" in view.figure.xaxis[0].axis_label
    view.stand(False)
    assert "equal scale" in view.figure.xaxis[0].axis_label
    assert list(_data(view, "windows")["x0"]) == list(to_scale["windows"]["x0"])


def test_section_off_the_fault_is_refused(small: Study) -> None:
    view = section_figure(small, 0.5)
    with pytest.raises(NetworkError, match="off the fault"):
        view.update(small, 3.0)


def test_section_tells_tips_from_strands(quillmere: Study) -> None:
    view = section_figure(quillmere, 200)
    zone = quillmere.zone
    shares = [np.interp(200, zone.stations, row) for row in zone.shares]
    tips = sum(share == 0 for share in shares)
    assert tips > 0
    assert len(_data(view, "tips")["x0"]) == tips
    assert len(_data(view, "strands")["x0"]) == zone.strand_count - tips
    assert len(_data(view, "contacts")["x0"]) == tips * len(zone.bodies)
    assert _data(view, "strand names")["text"] == ["A", "B", "C"]
    assert _data(view, "strand names")["share"] == pytest.approx([100 * s for s in shares])
    view.update(quillmere, 2000)
    assert len(_data(view, "strands")["x0"]) == zone.strand_count
    assert _data(view, "tips")["x0"] == _data(view, "contacts")["x0"] == []


def test_a_tap_changes_no_look(quillmere: Study) -> None:
    for view in _pictures(quillmere, 1500).values():
        for renderer in view.figure.renderers:
            assert renderer.selection_glyph is None
            assert renderer.nonselection_glyph is None


def test_faces_draw_every_strand_and_the_single_plane(small: Study) -> None:
    view = faces_figure(small, 0.25)
    drawn = _data(view, "windows")
    assert len(drawn["xs"]) == 7
    offsets = [0, 1.07, 2.21]  # the single plane stands a little apart
    assert drawn["where"] == [*["strand 1"] * 3, *["strand 2"] * 3, "single plane"]
    for row, facet in enumerate([0, 0, 0, 1, 1, 1, 2]):
        assert min(drawn["xs"][row]) == pytest.approx(offsets[facet])
        assert max(drawn["xs"][row]) == pytest.approx(offsets[facet] + 1)
    assert drawn["ys"][0] == [1112, 1112, 1120, 1120]
    assert drawn["ys"][6] == [1130, 1130, 1150, 1150]
    assert _data(view, "titles")["text"] == ["strand 1", "strand 2", "single plane"]
    assert _data(view, "section")["x0"] == pytest.approx([0.25, 1.32, 2.46])
    bands = _data(view, "footwall bands")
    assert bands["y"][:4] == pytest.approx([1100, 1100, 1120, 1120])
    assert np.isnan(bands["y"]).sum() == 2 * 3
    hanging = _data(view, "hanging bands")
    assert hanging["y"][:4] == pytest.approx([1112, 1112, 1132, 1132])


def test_faces_move_only_the_section_line_with_the_distance(quillmere: Study) -> None:
    view = faces_figure(quillmere, 0)
    before = view._sources["windows"].data
    view.update(quillmere, 1000)
    assert view._sources["windows"].data is before
    assert _data(view, "section")["x0"][0] == 1000


def test_graph_has_every_sand_body_and_every_link(small: Study) -> None:
    view = pathway_graph_figure(small)
    nodes = _data(view, "nodes")
    assert list(zip(nodes["x"], nodes["y"], strict=True)) == [
        *((0, 1110), (0, 1140), (1, 1122), (1, 1152), (2, 1140), (2, 1170))
    ]
    assert nodes["thickness"] == pytest.approx([20] * 6)
    edges = _data(view, "windows")
    by_name = {name: row for row, name in enumerate(edges["name"])}
    assert set(by_name) == {f"{a} against {b}" for a, b in AREAS}
    row = by_name[f"{F2} against {L1}"]
    assert (edges["y0"][row], edges["y1"][row]) == (1140, 1122)
    assert edges["area"][row] == "2 m²"
    wide, thin = (edges["width"][by_name[f"{a} against {L1}"]] for a in (F1, F2))
    assert wide > thin
    critical = small.network.critical_windows
    assert len(_data(view, "critical")["x"]) == len(critical)
    assert {name for name, row in by_name.items() if edges["critical"][row] == "critical"} == {
        f"{a} against {b}" for a, b in critical
    }


def test_matrix_says_what_is_gained_and_lost(small: Study) -> None:
    # across the zone everything connects through L1 and L2; one plane joins H1 to F2 only
    cells = _data(pair_matrix_figure(small), "cells")
    told = dict(zip(zip(cells["hanging"], cells["foot"], strict=True), cells["words"], strict=True))
    assert told["S1", "S2"].startswith("connected in both; bottleneck 8 m²")
    for pair in (("S1", "S1"), ("S2", "S1"), ("S2", "S2")):
        assert told[pair].startswith("gained: only the zone; bottleneck 2 m², on a single plane no")
    # rows are hanging-wall sands, top to base
    assert list(zip(cells["hanging"], cells["x"], cells["y"], strict=True)) == [
        *(("S1", 0, 0), ("S1", 1, 0), ("S2", 0, 1), ("S2", 1, 1))
    ]


def test_matrix_key_counts_every_outcome(quillmere: Study) -> None:
    view = pair_matrix_figure(quillmere)
    labels = [item.label["value"] for item in view._key.items]
    kinds = [(p.connected, p.connected_single_plane) for p in quillmere.pairs]
    assert labels == [f"{words} ({kinds.count(kind)})" for kind, words in OUTCOMES.items()]
    assert len(set(_data(view, "cells")["marker"])) == len(set(kinds)) == 4


# ------------------------------------------------------------------ built once, then only data


def test_other_strand_counts_change_data_and_nothing_else(
    quillmere: Study, many_strands: Study, small: Study
) -> None:
    pictures = _pictures(quillmere, 1500)
    built = {
        name: (view.figure.id, [r.id for r in view.figure.renderers], len(view.figure.references()))
        for name, view in pictures.items()
    }
    for other, at in ((many_strands, 2500), (small, 0.5), (quillmere, 100)):
        for view in pictures.values():
            view.update(other, at)
    for name, view in pictures.items():
        figure = view.figure
        now = figure.id, [r.id for r in figure.renderers], len(figure.references())
        assert now == built[name]


def test_a_picture_that_was_updated_equals_a_new_one(quillmere: Study, many_strands: Study) -> None:
    used, new = _pictures(quillmere, 1500), _pictures(many_strands, 800)
    for name, view in used.items():
        view.update(many_strands, 800)
        for source in view._sources:
            np.testing.assert_equal(_data(view, source), _data(new[name], source), err_msg=name)


def test_every_glyph_finds_its_columns(quillmere: Study) -> None:
    for view in _pictures(quillmere, 1500).values():
        issues = check_integrity(view.figure.references())
        assert issues.error == issues.warning == []


def test_patches_stay_few_and_cheap_to_send(many_strands: Study) -> None:
    for view in _pictures(many_strands, 1500).values():
        patches = sum(len(s.data.get("xs", ())) for s in view._sources.values())
        assert patches < 1000
        for source in view._sources.values():
            # arrays inside lists would be sent one by one
            assert all(isinstance(xs, list) for xs in source.data.get("xs", ()))


# ------------------------------------------------------------------ choosing and marking


def test_a_tap_tells_what_was_chosen(small: Study) -> None:
    pictures = _pictures(small, 0.5)
    edge = of_edge(small, (F2, L1))
    assert edge == Selection(
        nodes=(F2, L1),
        edges=((F2, L1),),
        label="window on strand 1: footwall: S2 against lens 1: S1, 2 m²",
    )
    assert pictures["section"].picked("windows", 1) == edge
    assert pictures["section"].picked("sands", 2) == of_node(L1)
    assert pictures["faces"].picked("windows", 1) == edge
    assert pictures["faces"].picked("windows", 6) == of_pair(small, "S1", "S2")
    row = _data(pictures["graph"], "windows")["name"].index(f"{F2} against {L1}")
    assert pictures["graph"].picked("windows", row) == edge
    assert pictures["graph"].picked("nodes", 5) == of_node(H2)
    assert pictures["pairs"].picked("cells", 1) == of_pair(small, "S1", "S2")
    for view in pictures.values():
        for name in view.tappable:
            assert view.picked(name, 10_000) is None


def test_a_pair_is_its_widest_pathway(small: Study) -> None:
    chosen = of_pair(small, "S1", "S2")
    assert chosen.nodes == (H1, L2, F2)
    assert chosen.edges == ((L2, H1), (F2, L2))
    assert chosen.pair == ("S1", "S2")
    assert chosen.plane_edges == ((F2, H1),)
    assert chosen.label.endswith("widest pathway, bottleneck 8 m²")
    (pathway, *_) = small.network.pathways("S1", "S2", limit=1)
    assert of_pathway(small, pathway).edges == chosen.edges


def test_a_pair_that_is_not_connected_is_its_two_ends(quillmere: Study) -> None:
    lost = next(pair for pair in quillmere.pairs if pair.change == "lost")
    chosen = of_pair(quillmere, lost.hanging_wall_sand, lost.footwall_sand)
    assert chosen.edges == ()
    assert len(chosen.nodes) == 2
    assert chosen.plane_edges
    assert chosen.label.endswith("connected only by the single plane")
    with pytest.raises(NetworkError, match="no sand body"):
        of_pair(quillmere, "S1", "nowhere")


def test_marks_show_the_selection_in_every_picture(small: Study) -> None:
    pictures = _pictures(small, 0.5)
    chosen = of_pair(small, "S1", "S2")
    for view in pictures.values():
        view.mark(chosen)
    assert _data(pictures["section"], "marks")["y0"] == pytest.approx([1142, 1142])
    assert len(_data(pictures["section"], "marked sands")["xs"]) == 3
    assert len(_data(pictures["faces"], "marks")["xs"]) == 3  # two windows, one on the plane
    assert len(_data(pictures["graph"], "marked edges")["x0"]) == 2
    assert _data(pictures["graph"], "marked nodes")["y"] == [1140, 1152, 1140]
    assert _data(pictures["pairs"], "mark") == {"x": [1], "y": [0]}
    for view in pictures.values():
        view.mark(NOTHING)
        for name in ("marks", "marked sands", "marked edges", "marked nodes", "mark"):
            if name in view._sources:
                assert not any(_data(view, name).values())


def test_a_mark_outlives_an_update_as_far_as_it_still_exists(small: Study) -> None:
    pictures = _pictures(small, 0.5)
    chosen = of_pair(small, "S1", "S2")
    for view in pictures.values():
        view.mark(chosen)
    one = study(hand.scenario((1.0,)))
    for view in pictures.values():
        view.update(one, 0.5)
    assert _data(pictures["graph"], "marked edges")["x0"] == []
    assert _data(pictures["pairs"], "mark") == {"x": [1], "y": [0]}
    again = renewed(one, chosen)
    assert again.edges == ((F2, H1),)
    assert renewed(one, of_edge(small, (F2, L1))) == NOTHING
    assert renewed(small, of_edge(small, (F2, L1))) == of_edge(small, (F2, L1))
    assert renewed(small, of_node(L1)) == of_node(L1)
    assert renewed(one, of_node(L1)) == NOTHING
    assert renewed(one, NOTHING) == NOTHING


def test_taps_reach_the_callback_once(small: Study) -> None:
    view = section_figure(small, 0.5)
    Document().add_root(view.figure)
    told: list[Selection] = []
    view.on_pick(told.append)
    # a tap on a window hits the sand behind it too, in either order: the window counts
    view.tappable["sands"].selected.indices = [2]
    view.tappable["windows"].selected.indices = [1]
    assert told == [of_node(L1), of_edge(small, (F2, L1))]
    view.tappable["sands"].selected.indices = []
    assert len(told) == 2
    view.tappable["windows"].selected.indices = []
    assert told[-1] == NOTHING


def test_marking_from_elsewhere_lets_the_same_glyph_be_tapped_again(small: Study) -> None:
    view = section_figure(small, 0.5)
    told: list[Selection] = []
    view.on_pick(told.append)
    view.tappable["windows"].selected.indices = [1]
    view.mark(told[0])
    assert view.tappable["windows"].selected.indices == [1]
    view.mark(of_pair(small, "S1", "S1"))
    assert view.tappable["windows"].selected.indices == []
    view.tappable["windows"].selected.indices = [1]
    assert told == [of_edge(small, (F2, L1))] * 2


def test_updating_forgets_taps_without_telling(small: Study) -> None:
    view = section_figure(small, 0.5)
    told: list[Selection] = []
    view.on_pick(told.append)
    view.tappable["windows"].selected.indices = [5]
    view.update(study(hand.scenario((1.0,))), 0.5)
    assert len(told) == 1
    assert view.tappable["windows"].selected.indices == []
