"""The workbench without a browser: `set_state` plays the hand, sources tell what is drawn."""

from __future__ import annotations

import json
import logging
from collections.abc import Iterator
from typing import Any

import pytest
from ipywidgets import Dropdown, Widget

import fzconnect as fz
from fzconnect.scenario import Column, Layer, Scenario, Strands, Throw
from fzconnect.views.selection import of_edge
from fzconnect.widgets import Workbench

from .conftest import Wire

DEMO = fz.demo()


@pytest.fixture
def bench() -> Iterator[Workbench]:
    with fz.workbench(DEMO) as made:
        yield made


def turn(control: Widget, value: Any) -> None:
    """Set a control as the browser does: errors in callbacks are not lost this way."""
    if isinstance(control, Dropdown):
        values = [option[1] if isinstance(option, tuple) else option for option in control.options]
        control.set_state({"index": values.index(value)})
    else:
        control.set_state({"value": value})


def shown(bench: Workbench) -> str:
    return str(bench.strip.value)


def test_it_starts_with_the_scenario_as_it_is(bench: Workbench) -> None:
    assert bench.scenario == DEMO
    for words in ("29 of 144", "6 gained, 5 lost", "single plane: 28"):
        assert words in shown(bench)
    assert [box.value for box in bench.bar.inputs[:3]] == [40.9, 33.3, 25.8]


def test_every_figure_of_the_strip_is_that_of_a_study(bench: Workbench) -> None:
    turn(bench.controls.count, 5)
    turn(bench.controls.factor, 0.8)
    fresh = fz.study(bench.scenario)
    zone, plane = fresh.counts("zone"), fresh.counts("single plane")
    text = shown(bench).replace("\u202f", "")
    assert f"{zone['connected_pairs']} of {len(fresh.pairs)}" in text
    assert f"single plane: {plane['connected_pairs']}<" in text
    for key in ("window_area", "widest_bottleneck"):
        assert f">{zone[key]:.0f}<" in text
        assert f"single plane: {plane[key]:.0f}<" in text
    assert f">{zone['critical_windows']}<" in text


def test_the_strand_count_changes_study_pictures_and_boxes(bench: Workbench) -> None:
    before = shown(bench)
    faces = bench.faces.figure
    turn(bench.controls.count, 5)
    assert bench.study.zone.strand_count == 5
    assert shown(bench) != before
    assert bench.bar.names == ("1", "2", "3", "4", "5")
    assert [box.value for box in bench.bar.inputs[:5]] == [20.0] * 5
    assert bench.faces.figure is faces  # followed, not rebuilt


def test_dragging_a_joint_moves_share_between_two_strands(bench: Workbench) -> None:
    seen = bench.study.windows.area.sum()
    first, second, third = bench.bar.shares
    bench.bar._change((first - 0.1, second + 0.1, third), False)
    assert bench.scenario.strands.split_at(1550.0) == pytest.approx(
        (first - 0.1, second + 0.1, third)
    )
    assert bench.study.windows.area.sum() != seen
    # the other answer has nothing to do with the split
    assert bench.study.single_plane is fz.study(bench.scenario, like=bench.study).single_plane


def test_a_drag_is_not_cut_short_by_its_own_drawing(bench: Workbench) -> None:
    bench.bar._drag = drag = object()  # type: ignore[assignment]
    first, second, third = bench.bar.shares
    bench.bar._change((first - 0.07, second + 0.07, third), False)
    assert bench.bar._drag is drag


def test_typing_a_share_keeps_the_sum(bench: Workbench) -> None:
    turn(bench.bar.inputs[0], 50.0)
    assert bench.scenario.strands.split_at(1550.0)[0] == pytest.approx(0.5)
    assert sum(bench.bar.shares) == pytest.approx(1.0)


def test_the_own_split_comes_back(bench: Workbench) -> None:
    turn(bench.bar.inputs[0], 50.0)
    assert not bench.controls.own_split.disabled
    bench.controls.own_split.click()
    assert bench.scenario == DEMO
    assert bench.controls.own_split.disabled


def test_moving_along_the_fault_shows_the_shares_there(bench: Workbench) -> None:
    study = bench.study
    turn(bench.controls.distance, 0.0)
    assert bench.study is study  # nothing to work out anew
    assert bench.bar.shares == pytest.approx((0.55, 0.45, 0.0))
    assert bench.bar.inputs[2].disabled  # C has its tip here


def test_a_pair_is_marked_everywhere_and_its_pathways_are_listed(bench: Workbench) -> None:
    turn(bench.controls.upper, "S4")
    assert bench.controls.pathway.disabled
    turn(bench.controls.lower, "S4")
    assert "widest pathway" in bench.marked.value
    assert "hanging wall S4 to footwall S4" in shown(bench)
    labels = [label for label, _ in bench.controls.pathway.options]
    assert labels[0] == "widest"
    assert len(labels) == 7
    turn(bench.controls.pathway, 2)
    assert bench.marked.value.count("lens 1") >= 1
    assert "pathway hanging wall: S4" in bench.marked.value


def test_a_pair_that_does_not_connect_says_so(bench: Workbench) -> None:
    turn(bench.controls.upper, "S10")
    turn(bench.controls.lower, "S12")
    assert "connected only by the single plane" in bench.marked.value
    assert "not connected" in shown(bench)
    assert bench.controls.pathway.disabled


def test_a_tap_in_one_picture_marks_all(bench: Workbench) -> None:
    edge = next(iter(bench.study.network.graph.edges))
    bench.choose(of_edge(bench.study, edge))
    for picture in (bench.section, bench.faces, bench.graph, bench.matrix):
        assert picture._shown.edges == (bench.study.network.ordered(edge),)
    bench.controls.clear.click()
    assert not bench.graph._shown


def test_a_tap_on_a_pair_sets_the_menus(bench: Workbench) -> None:
    source = bench.matrix.tappable["cells"]
    row = next(
        i
        for i in range(len(next(iter(source.data.values()))))
        if (found := bench.matrix.picked("cells", i)) and found.pair == ("S7", "S4")
    )
    source.selected.indices = [row]
    assert (bench.controls.upper.value, bench.controls.lower.value) == ("S7", "S4")
    assert bench.state()["hanging_wall_sand"] == "S7"


def test_a_mark_survives_a_change_of_the_zone(bench: Workbench) -> None:
    turn(bench.controls.upper, "S4")
    turn(bench.controls.lower, "S4")
    turn(bench.controls.count, 2)
    assert bench.graph._shown.pair == ("S4", "S4")
    assert set(bench.graph._shown.nodes) <= set(bench.study.network.graph)


def short_column() -> Scenario:
    layers = (Layer(name="M1", thickness=20, vsh=0.8), Layer(name="S1", thickness=10, vsh=0.1))
    return Scenario(
        name="short <b>column</b>",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=20),
        strands=Strands(count=2),
    )


def test_what_cannot_be_studied_is_said_and_the_last_study_stays() -> None:
    with fz.workbench(short_column()) as bench:
        before, strip = bench.study, shown(bench)
        turn(bench.controls.factor, 2.0)  # 40 m of throw in 30 m of rock
        assert "Not shown" in bench.status.value
        assert "pushes every layer past the column" in bench.status.value
        assert (bench.study, shown(bench)) == (before, strip)
        turn(bench.controls.factor, 1.2)
        assert "Not shown" not in bench.status.value


def test_names_are_text_not_markup() -> None:
    with fz.workbench(short_column()) as bench:
        titles = [child.value for child in bench.widget.children if hasattr(child, "value")]
        assert any("short &lt;b&gt;column&lt;/b&gt;" in title for title in titles)


def test_a_fault_of_our_own_is_said_and_logged(
    bench: Workbench, monkeypatch: pytest.MonkeyPatch, caplog: pytest.LogCaptureFixture
) -> None:
    def broken(*_: object, **__: object) -> None:
        msg = "broken <i>picture</i>"
        raise ZeroDivisionError(msg)

    monkeypatch.setattr(bench.graph, "update", broken)
    with caplog.at_level(logging.ERROR):
        turn(bench.controls.count, 4)
    assert "ZeroDivisionError: broken &lt;i&gt;picture" in bench.status.value
    assert "the workbench failed" in caplog.text


def test_state_is_kept_and_restored(bench: Workbench) -> None:
    turn(bench.controls.count, 4)
    turn(bench.controls.distance, 900.0)
    turn(bench.bar.inputs[1], 40.0)
    state, strip = json.loads(json.dumps(bench.state())), shown(bench)
    with fz.workbench(DEMO) as other:
        other.restore(state)
        assert other.state() == state
        assert shown(other) == strip
        assert other.controls.count.value == 4
        assert other.controls.distance.value == 900.0


def test_a_state_that_does_not_fit_changes_nothing(bench: Workbench) -> None:
    state = bench.state()
    with pytest.raises(fz.errors.FzconnectError, match="version 7 found"):
        bench.restore({**state, "version": 7})
    with pytest.raises(fz.errors.FzconnectError, match="off the fault"):
        bench.restore({**state, "distance": 99_000.0})
    assert bench.state() == state


def test_a_step_is_one_patch_and_one_at_rest_and_few_messages(bench: Workbench, wire: Wire) -> None:
    wire.clear()
    turn(bench.controls.count, 4)
    patches = [content for content in wire.custom if content.get("msg") == "patch"]
    headers = [part for part in patches if "msgtype" in str(part.get("payload", ""))]
    assert len(headers) == 2
    assert len(wire.messages) < 60


def test_export_writes_a_study(
    bench: Workbench, tmp_path: Any, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    turn(bench.controls.count, 2)
    bench.controls.export.click()
    assert "written to study" in bench.status.value
    summary = json.loads((tmp_path / "study" / "summary.json").read_text(encoding="utf-8"))
    assert summary["zone"]["strands"] == 2
    turn(bench.controls.folder, " ")
    bench.controls.export.click()
    assert "the folder has no name" in bench.status.value


def test_closed_twice_without_harm() -> None:
    bench = fz.workbench(DEMO)
    bench.close()
    bench.close()
