"""The throw-split control: sums, drags, boxes, callbacks, messages."""

from __future__ import annotations

import math
from collections.abc import Sequence
from types import SimpleNamespace

import pytest
from bokeh.events import Pan, PanEnd, PanStart
from hypothesis import given
from hypothesis import strategies as st

from fzconnect.errors import ScenarioError
from fzconnect.views.splitbar import SplitBarView, split_bar
from fzconnect.widgets.pane import FigurePane
from fzconnect.widgets.splitbar import SplitBar, move_joint, set_share

from .conftest import Wire

Said = list[tuple[tuple[float, ...], bool]]


def _bar(shares: Sequence[float], tips: Sequence[bool] | None = None) -> tuple[SplitBar, Said]:
    bar = SplitBar([str(k + 1) for k in range(len(shares))], shares, tips)
    said: Said = []
    bar.on_change(lambda now, final: said.append((tuple(round(s, 9) for s in now), final)))
    return bar, said


def _pan(bar: SplitBar, *places: float, end: bool = True) -> None:
    """Do what a browser does while a hand drags over these places."""
    plot = bar.figure

    def say(kind: type, at: float) -> None:
        plot._trigger_event(kind(plot, x=at, y=0.5))

    say(PanStart, places[0])
    for place in places[1:]:
        say(Pan, place)
    if end:
        say(PanEnd, places[-1])


def _column(view: SplitBarView, name: str) -> list[object]:
    """Return a column of the only source of a bar's figure that has it."""
    sources = {id(r.data_source): r.data_source.data for r in view.figure.renderers}
    return list(*(data[name] for data in sources.values() if name in data))


# --- arithmetic


SPLITS = st.lists(st.floats(0, 1), min_size=2, max_size=8).filter(lambda s: sum(s) > 1e-3)


@given(SPLITS, st.data())
def test_a_moved_joint_changes_two_strands_and_makes_none_antithetic(
    weights: list[float], data: st.DataObject
) -> None:
    shares = [weight / math.fsum(weights) for weight in weights]
    left = data.draw(st.integers(0, len(shares) - 2))
    right = data.draw(st.integers(left + 1, len(shares) - 1))
    moved = move_joint(shares, left, right, data.draw(st.floats(-2, 3)))
    assert math.fsum(moved) == pytest.approx(1, abs=1e-9)
    assert min(moved) >= 0
    assert [s for k, s in enumerate(moved) if k not in (left, right)] == pytest.approx(
        [s for k, s in enumerate(shares) if k not in (left, right)], abs=1e-12
    )


@given(SPLITS, st.floats(-0.5, 1), st.data())
def test_a_share_that_is_set_keeps_the_sum_and_the_proportions_of_the_others(
    weights: list[float], share: float, data: st.DataObject
) -> None:
    shares = [weight / math.fsum(weights) for weight in weights]
    k = data.draw(st.integers(0, len(shares) - 1))
    changed = set_share(shares, k, share, [False] * len(shares))
    assert changed[k] == share
    assert math.fsum(changed) == pytest.approx(1)
    rest = 1 - shares[k]
    if rest > 1e-6:
        for old, new in zip(shares, changed, strict=True):
            if new is not changed[k]:
                assert new * rest == pytest.approx(old * (1 - share), abs=1e-9)


@pytest.mark.parametrize(
    ("shares", "index", "share", "tips", "expected"),
    [
        pytest.param((0.5, 0.3, 0.2), 0, 0.0, (0, 0, 0), (0, 0.6, 0.4), id="scaled"),
        pytest.param((1, 0, 0), 0, 0.4, (0, 0, 0), (0.4, 0.3, 0.3), id="others all zero"),
        pytest.param((1, 0, 0), 0, 0.4, (0, 0, 1), (0.4, 0.6, 0), id="a tip stays"),
        pytest.param((0.6, 0.4), 0, -0.2, (0, 0), (-0.2, 1.2), id="antithetic"),
        pytest.param(
            (0.6, 0.8, -0.4), 0, 0.2, (0, 0, 0), (0.2, 1.6, -0.8), id="others of two signs"
        ),
        pytest.param((1, 0.5, -0.5), 0, 0.8, (0, 0, 0), (0.8, 0.6, -0.4), id="others cancel"),
    ],
)
def test_setting_a_share_by_hand_calculation(
    shares: Sequence[float],
    index: int,
    share: float,
    tips: Sequence[bool],
    expected: Sequence[float],
) -> None:
    assert set_share(shares, index, share, tips) == pytest.approx(expected)


@pytest.mark.parametrize("share", [math.nan, math.inf, 10.5, -11])
def test_a_share_out_of_reason_is_refused(share: float) -> None:
    with pytest.raises(ScenarioError, match="was typed; allowed are −1000 to 1000 %"):
        set_share((0.5, 0.5), 0, share, (False, False))


def test_a_share_that_drives_another_out_of_reason_is_refused() -> None:
    with pytest.raises(ScenarioError, match=r"With -950 % here another strand would have 1050 %"):
        set_share((0.5, 0.5), 0, -9.5, (False, False))


def test_the_only_strand_keeps_the_whole_throw() -> None:
    with pytest.raises(ScenarioError, match="only strand here has the whole throw"):
        set_share((1.0, 0.0), 0, 0.5, (False, True))


# --- drawing


def test_pieces_lie_end_to_end_from_the_footwall() -> None:
    view = split_bar(["1", "2", "3"], [0.5, 0.3, 0.2])
    assert _column(view, "left") == pytest.approx([0, 0.5, 0.8])
    assert _column(view, "right") == pytest.approx([0.5, 0.8, 1.0])
    assert _column(view, "text")[2:] == ["1  50 %", "2  30 %", "3  20 %"]


def test_antithetic_strands_take_back_in_a_second_lane_with_hatch_and_word() -> None:
    view = split_bar(["1", "2", "3"], [0.8, -0.3, 0.5])
    assert _column(view, "left") == pytest.approx([0, 1.0, 0.8])
    assert _column(view, "right") == pytest.approx([0.8, 1.3, 1.3])
    assert _column(view, "hatch") == [" ", "right_diagonal_line", " "]
    assert "2  −30 %, antithetic" in _column(view, "text")
    assert [(joint.left, joint.right) for joint in view.joints] == [(0, 2)]
    assert max(_column(view, "top")) > 0 > _column(view, "top")[1]  # type: ignore[operator]


def test_a_tip_is_named_and_has_no_joint() -> None:
    view = split_bar(["1", "2", "3"], [0.6, 0.0, 0.4], [False, True, False])
    assert "2  tip" in _column(view, "text")
    assert [(joint.left, joint.right) for joint in view.joints] == [(0, 2)]


def test_labels_shorten_when_the_browser_reports_little_room() -> None:
    view = split_bar(["1", "2"], [0.9, 0.1])
    view.figure._callbacks["inner_width"][0]("inner_width", None, 1000)
    assert _column(view, "text")[2:] == ["1  90 %", "2  10 %"]
    view.figure._callbacks["inner_width"][0]("inner_width", 1000, 260)
    assert _column(view, "text")[2:] == ["1  90 %", "2"]


def test_a_joint_is_found_within_reach_only() -> None:
    view = split_bar(["1", "2"], [0.5, 0.5])
    near = view.nearest_joint(0.52)
    assert near is not None
    assert near.at == 0.5
    assert view.nearest_joint(0.6) is None
    assert split_bar(["1"], [1.0]).nearest_joint(0.5) is None


# --- control


def test_a_drag_moves_share_between_two_strands_and_says_when_it_ends() -> None:
    bar, said = _bar([0.5, 0.3, 0.2])
    _pan(bar, 0.51, 0.46, 0.41)
    assert said == [
        ((0.45, 0.35, 0.2), False),
        ((0.4, 0.4, 0.2), False),
        ((0.4, 0.4, 0.2), True),
    ]
    assert bar.shares == pytest.approx((0.4, 0.4, 0.2))
    assert [box.value for box in bar.inputs[:3]] == [40, 40, 20]
    bar.close()


def test_a_drag_too_far_stops_at_zero() -> None:
    bar, said = _bar([0.5, 0.3, 0.2])
    _pan(bar, 0.5, 1.4)
    _pan(bar, 0.8, -1)
    assert [shares for shares, final in said if final] == [(0.8, 0, 0.2), (0, 0.8, 0.2)]
    bar.close()


def test_a_strand_of_share_zero_can_be_opened_from_either_side() -> None:
    for end, expected in ((0.4, (0.4, 0.2, 0.4)), (0.7, (0.6, 0.1, 0.3))):
        bar, said = _bar([0.6, 0.0, 0.4])
        _pan(bar, 0.6, end)
        assert said[-1] == (expected, True)
        bar.close()


def test_a_drag_leaves_an_antithetic_strand_alone() -> None:
    bar, said = _bar([0.8, -0.3, 0.5])
    _pan(bar, 0.8, 0.6)
    assert said[-1] == ((0.6, -0.3, 0.7), True)
    bar.close()


def test_a_drag_off_the_joints_or_without_motion_says_nothing() -> None:
    bar, said = _bar([0.5, 0.3, 0.2])
    _pan(bar, 0.2, 0.3)
    _pan(bar, 0.5)
    assert said == []
    bar.close()


def test_shares_set_by_code_during_a_drag_end_it() -> None:
    bar, said = _bar([0.5, 0.5])
    _pan(bar, 0.5, 0.6, end=False)
    bar.set(["A", "B", "C"], [0.2, 0.3, 0.5])
    bar.figure._trigger_event(Pan(bar.figure, x=0.7, y=0.5))
    bar.figure._trigger_event(PanEnd(bar.figure, x=0.7, y=0.5))
    assert said == [((0.6, 0.4), False)]
    assert bar.shares == (0.2, 0.3, 0.5)
    bar.close()


def test_a_typed_number_rescales_the_others_and_is_final() -> None:
    bar, said = _bar([0.5, 0.3, 0.2])
    bar.inputs[0].set_state({"value": 75})
    assert said == [((0.75, 0.15, 0.1), True)]
    assert [box.value for box in bar.inputs[:3]] == [75, 15, 10]
    bar.close()


def test_a_number_out_of_reason_is_put_back_with_a_sentence_that_goes_away_later() -> None:
    bar, said = _bar([0.5, 0.5])
    note = bar.boxes.children[1]
    bar.inputs[0].set_state({"value": 5000})
    assert said == []
    assert bar.inputs[0].value == 50
    assert note.value == "A share of 5000 % was typed; allowed are −1000 to 1000 %."
    assert note.layout.display is None
    bar.inputs[0].set_state({"value": 60})
    assert (note.value, note.layout.display) == ("", "none")
    assert said == [((0.6, 0.4), True)]
    bar.close()


def test_only_strands_that_can_change_have_an_open_box() -> None:
    bar, _ = _bar([0.6, 0.0, 0.4], [False, True, False])
    assert [box.disabled for box in bar.inputs[:3]] == [False, True, False]
    bar.set(["1"], [1.0])
    assert bar.inputs[0].disabled
    bar.set(["1", "2"], [1.0, 0.0], [False, True])
    assert bar.inputs[0].disabled
    bar.close()


def test_set_calls_nobody_and_shows_and_hides_the_boxes_made_in_advance() -> None:
    bar, said = _bar([1.0])
    boxes = bar.inputs
    for count in (8, 3, 5):
        bar.set([str(k) for k in range(count)], [1 / count] * count)
        assert [box.layout.display for box in bar.inputs] == [None] * count + ["none"] * (8 - count)
    assert bar.inputs is boxes
    assert bar.inputs[4].description == "4 (%)"
    assert said == []
    bar.close()


@pytest.mark.parametrize(
    ("names", "shares", "tips", "message"),
    [
        (["1"] * 9, [1 / 9] * 9, None, "shows 1 to 8 strands, got 9"),
        ([], [], None, "shows 1 to 8 strands, got 0"),
        (["1"], [0.5, 0.5], None, "as many as there are strands, got 1, 2 and 2"),
        (["1", "2"], [0.5, 0.5], [False], "got 2, 2 and 1"),
        (["1", "2"], [0.5, 0.6], None, r"must sum to 1, got 1\.1"),
        (["1", "2"], [0.5, math.nan], None, "must sum to 1, got nan"),
    ],
)
def test_shares_that_are_no_split_are_refused_and_the_bar_stays(
    names: list[str], shares: list[float], tips: list[bool] | None, message: str
) -> None:
    bar, _ = _bar([0.5, 0.5])
    with pytest.raises(ScenarioError, match=message):
        bar.set(names, shares, tips)
    assert bar.shares == (0.5, 0.5)
    bar.close()


def test_a_listener_can_leave() -> None:
    bar, said = _bar([0.5, 0.5])
    other: list[bool] = []
    stop = bar.on_change(lambda _, final: other.append(final))
    bar.inputs[0].value = 60
    stop()
    stop()
    bar.inputs[0].value = 70
    assert (len(other), len(said)) == (1, 2)
    bar.close()


def test_one_step_of_a_drag_is_one_patch_and_a_message_for_each_box_that_changed(
    wire: Wire,
) -> None:
    bar, _ = _bar([0.5, 0.3, 0.2])
    pane = FigurePane(bar.figure)
    bar.batch = pane.batch
    _pan(bar, 0.5, 0.49, end=False)
    wire.clear()
    bar.figure._trigger_event(Pan(bar.figure, x=0.45, y=0.5))
    assert len(wire.custom) == 3
    assert len(wire.updates("value")) == 2
    assert len(wire.messages) == 5
    pane.close()
    bar.close()


def test_a_typed_number_is_not_written_back_to_its_own_box(wire: Wire) -> None:
    bar, _ = _bar([0.5, 0.3, 0.2])
    wire.clear()
    bar.inputs[0].set_state({"value": 33.333})
    own = [m for m in wire.messages if m["comm_id"] == bar.inputs[0].comm.comm_id]
    assert [m["data"]["method"] for m in own] == ["echo_update"]
    assert wire.updates("value") == [40.0, 26.7]
    bar.close()


def test_a_closed_bar_is_deaf_and_may_be_closed_again() -> None:
    bar, said = _bar([0.5, 0.5])
    box = bar.inputs[0]
    bar.close()
    bar.close()
    box.value = 70
    _pan(bar, 0.5, 0.7)
    assert said == []
    assert bar.shares == (0.5, 0.5)


def test_an_event_without_a_place_is_let_pass() -> None:
    bar, said = _bar([0.5, 0.5])
    nowhere = SimpleNamespace(x=None)
    bar._on_pan_start(nowhere)
    bar._on_pan(nowhere)
    bar._on_pan_end(nowhere)
    assert said == []
    bar.close()
