"""What the controls say: one frozen value, applied to a scenario, kept as JSON."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest

import fzconnect as fz
from fzconnect.errors import ScenarioError
from fzconnect.widgets.params import Params

DEMO = fz.demo()
START = Params.from_scenario(DEMO)


def test_the_start_is_the_scenario_as_it_is() -> None:
    assert START.apply(DEMO) == DEMO
    assert START.distance == 1550.0  # the middle of 0 to 3100 m


def test_another_count_means_an_equal_split_everywhere() -> None:
    strands = replace(START, count=4).apply(DEMO).strands
    assert strands.shares is None
    assert strands.split_at(0.0) == strands.split_at(3100.0) == (0.25,) * 4


def test_shares_set_by_hand_hold_at_their_distance_and_keep_their_shape_elsewhere() -> None:
    params = replace(START, split=(0.5, 0.25, 0.25), split_distance=1550.0)
    strands = params.apply(DEMO).strands
    assert strands.split_at(1550.0) == pytest.approx((0.5, 0.25, 0.25))
    # C has its tip at the start of the fault, so the others share its part there
    assert strands.split_at(0.0)[2] == 0.0


def test_a_share_closed_by_hand_comes_back() -> None:
    closed = replace(START, split=(0.6, 0.4, 0.0), split_distance=1550.0)
    assert closed.apply(DEMO).strands.split_at(1550.0) == pytest.approx((0.6, 0.4, 0.0))
    opened = replace(closed, split=(0.5, 0.3, 0.2))
    assert opened.apply(DEMO).strands.split_at(1550.0) == pytest.approx((0.5, 0.3, 0.2))


def test_the_throw_factor_moves_the_hanging_wall() -> None:
    cutoffs = replace(START, throw_factor=0.5).apply(DEMO).throw.cutoffs
    assert cutoffs is not None
    assert DEMO.throw.cutoffs is not None
    for mine, its in zip(cutoffs, DEMO.throw.cutoffs, strict=True):
        half = 0.5 * (its.hanging_wall - its.footwall)
        assert mine.footwall == its.footwall
        assert mine.hanging_wall - mine.footwall == pytest.approx(half)


def test_a_pair_needs_both_sands() -> None:
    half = replace(START, hanging_wall_sand="S4")
    assert half.pair is None
    assert replace(half, footwall_sand="S7").pair == ("S4", "S7")
    assert half.with_pair(("S1", "S2")).pair == ("S1", "S2")
    assert half.with_pair(None).hanging_wall_sand is None


def test_looking_elsewhere_asks_for_the_same_scenario() -> None:
    moved = replace(START, distance=10.0, is_upright=False).with_pair(("S4", "S4"))
    assert moved.asks_the_same(START)
    assert not replace(START, count=2).asks_the_same(START)


def test_state_goes_through_json_and_back() -> None:
    params = replace(START, split=(0.5, 0.3, 0.2), throw_factor=0.85).with_pair(("S4", "S7"))
    assert Params.from_dict(json.loads(json.dumps(params.to_dict()))) == params


@pytest.mark.parametrize(
    ("change", "said"),
    [
        ({"version": 99}, "version 99 found, expected 1"),
        ({"version": None}, "version None found"),
        ({"depth": 3}, "unexpected keyword argument 'depth'.*the keys are count"),
    ],
)
def test_a_state_of_something_else_is_refused(change: dict[str, object], said: str) -> None:
    with pytest.raises(ScenarioError, match=said):
        Params.from_dict({**START.to_dict(), **change})


def test_a_state_without_a_count_is_refused() -> None:
    state = START.to_dict()
    del state["count"]
    with pytest.raises(ScenarioError, match="missing 1 required positional argument: 'count'"):
        Params.from_dict(state)
