"""A bokeh layout as a widget: what is sent, what is shown, and closing."""

from __future__ import annotations

import json
from typing import Any

import pytest
from bokeh.document import Document
from bokeh.layouts import column
from bokeh.models import ColumnDataSource, Div
from bokeh.plotting import figure
from bokeh.protocol import Protocol
from ipywidgets import HBox, Widget

from fzconnect.widgets import pane as pane_module
from fzconnect.widgets.pane import FigurePane, bokehjs, show

from .conftest import Wire


def _pane() -> tuple[FigurePane, ColumnDataSource]:
    source = ColumnDataSource({"x": [1.0, 2.0], "y": [3.0, 4.0]})
    plot = figure(width=200, height=100, title="first")
    plot.scatter("x", "y", source=source)
    return FigurePane(plot), source


def _patches(wire: Wire) -> list[dict[str, Any]]:
    """Return the content of every document patch that was sent."""
    parts = [content["payload"] for content in wire.custom if content.get("msg") == "patch"]
    return [event for part in parts for event in json.loads(part).get("events", [])]


def _shown_title(state: dict[str, Any]) -> str:
    return (
        "second" if '"second"' in json.dumps(state["render_bundle"]).replace("\\", "") else "other"
    )


def test_a_single_change_costs_three_messages(wire: Wire) -> None:
    pane, source = _pane()
    wire.clear()
    source.data = {"x": [5.0], "y": [6.0]}
    assert len(wire.messages) == 3
    pane.close()


def test_a_batch_of_many_changes_costs_three_messages_too(wire: Wire) -> None:
    pane, source = _pane()
    wire.clear()
    with pane.batch():
        source.data = {"x": [5.0], "y": [6.0]}
        with pane.batch():
            pane.layout.title.text = "second"
        pane.layout.height = 120
        assert wire.messages == []
    assert len(wire.messages) == 3
    assert [event["kind"] for event in _patches(wire)] == [
        "ColumnDataChanged",
        "ModelChanged",
        "ModelChanged",
    ]
    pane.close()


def test_a_property_changed_twice_in_a_batch_is_sent_once_with_its_last_value(wire: Wire) -> None:
    pane, _ = _pane()
    wire.clear()
    with pane.batch():
        for height in (110, 120, 130):
            pane.layout.height = height
    assert [event["new"] for event in _patches(wire)] == [130]
    pane.close()


def test_columns_replaced_twice_in_a_batch_are_sent_once_as_they_are_at_its_end(wire: Wire) -> None:
    pane, source = _pane()
    wire.clear()
    with pane.batch():
        source.data = {"x": [5.0], "y": [6.0]}
        source.data = {"x": [7.0, 8.0], "y": [9.0, 10.0]}
    (event,) = _patches(wire)
    assert dict(event["data"]["entries"]) == {"x": [7.0, 8.0], "y": [9.0, 10.0]}
    pane.close()


def test_rows_added_in_a_batch_are_sent_once(wire: Wire) -> None:
    pane, source = _pane()
    wire.clear()
    with pane.batch():
        source.data = {"x": [5.0], "y": [6.0]}
        source.stream({"x": [7.0], "y": [8.0]})
    (event,) = _patches(wire)
    assert dict(event["data"]["entries"]) == {"x": [5.0, 7.0], "y": [6.0, 8.0]}
    pane.close()


def test_an_empty_batch_sends_nothing(wire: Wire) -> None:
    pane, _ = _pane()
    wire.clear()
    with pane.batch():
        pass
    assert wire.messages == []
    pane.close()


def test_a_batch_that_fails_still_sends_what_had_changed(wire: Wire) -> None:
    pane, _ = _pane()
    wire.clear()

    def fail() -> None:
        with pane.batch():
            pane.layout.height = 130
            _ = pane.layout.height / 0

    with pytest.raises(ZeroDivisionError, match="division by zero"):
        fail()
    assert [event["new"] for event in _patches(wire)] == [130]
    pane.layout.height = 140
    assert [event["new"] for event in _patches(wire)] == [130, 140]
    pane.close()


def test_a_change_from_the_browser_is_not_sent_back(wire: Wire) -> None:
    pane, _ = _pane()
    wire.clear()
    change = {
        "event": "jsevent",
        "kind": "ModelChanged",
        "model": {"id": pane.layout.x_range.id},
        "attr": "start",
        "new": 7.0,
    }
    with pane.batch():
        pane.widget._handle_custom_msg(change, [])
    assert pane.layout.x_range.start == 7.0
    assert wire.custom == []
    pane.close()


def test_the_whole_state_is_what_the_layout_is_now() -> None:
    pane, _ = _pane()
    pane.layout.title.text = "second"
    # The state of one trait is asked for by updates; the whole state by a page loaded anew.
    assert _shown_title(pane.widget.get_state(key="render_bundle")) == "other"
    assert _shown_title(pane.widget.get_state()) == "second"
    pane.close()


def test_show_loads_bokeh_then_refreshes_then_displays(
    monkeypatch: pytest.MonkeyPatch, wire: Wire
) -> None:
    pane, _ = _pane()
    box = HBox([pane.widget])
    pane.layout.title.text = "second"
    wire.clear()
    shown: list[Any] = []
    monkeypatch.setattr(
        pane_module, "display", lambda thing: shown.append((thing, len(wire.messages)))
    )
    show(box, pane)
    (script, before), (root, after) = shown
    assert "BokehJS" in script.data
    assert root is box
    assert (before, after) == (0, 1)  # the one message is the fresh layout
    assert _shown_title({"render_bundle": wire.updates("render_bundle")}) == "second"
    pane._ipython_display_()
    assert [thing for thing, _ in shown[3:]] == [pane.widget]
    for widget in (box.layout, box, pane):
        widget.close()


def test_the_script_holds_what_the_layouts_need_and_no_address_to_load_from() -> None:
    plain, with_widgets = bokehjs(figure()), bokehjs(column(figure(), Div(text="words")))
    everything = bokehjs()
    assert 1_000_000 < len(plain) < len(with_widgets) < len(everything)
    assert plain.count("part(") == 2
    assert "cdn.bokeh.org" not in plain


def test_only_a_layout_can_be_shown() -> None:
    with pytest.raises(TypeError, match="must be a bokeh figure or layout, got str"):
        FigurePane("figure")  # type: ignore[arg-type]


def test_a_pane_may_be_closed_twice_and_used_after_without_harm(wire: Wire) -> None:
    pane, source = _pane()
    assert repr(pane) == "FigurePane(figure, open)"
    pane.close()
    pane.close()
    assert pane.closed
    assert repr(pane) == "FigurePane(figure, closed)"
    wire.clear()
    pane.refresh()
    with pane.batch():
        source.data = {"x": [], "y": []}
    pane.layout.height = 130
    assert wire.messages == []


def test_a_pane_closed_inside_its_batch_sends_nothing(wire: Wire) -> None:
    pane, _ = _pane()
    with pane.batch():
        pane.layout.height = 130
        pane.close()
        wire.clear()
    assert wire.messages == []


def test_closing_all_widgets_closes_a_pane() -> None:
    pane, _ = _pane()
    Widget.close_all()
    assert pane.closed
    pane.close()


@pytest.mark.parametrize(
    "column",
    [
        [1.0, 2.5],
        [1.0, float("nan")],
        [float("inf"), -float("inf")],
        ["a", "b"],
        [[1.0, 2.0], [3.0, 4.0]],
        [[1.0, float("nan")], [3.0, 4.0]],
        [[[1.0], [2.0]], [[3.0]]],
        [1, 2.0],
        [True, None],
        [(1.0, 2.0), [3.0]],
        [[], [1.0]],
        [],
    ],
)
def test_the_quick_patch_says_what_bokeh_s_own_would(column: list[Any]) -> None:
    source = ColumnDataSource({"x": [0.0]})
    document = Document()
    document.add_root(source)
    events: list[Any] = []
    document.on_change(events.append)
    source.data = {"x": column}
    quick = pane_module._patch(events)
    own = Protocol().create("PATCH-DOC", events)
    assert json.loads(quick.content_json) == json.loads(own.content_json)
