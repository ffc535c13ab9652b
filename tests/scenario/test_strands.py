from __future__ import annotations

import math
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fzconnect.errors import ScenarioError
from fzconnect.scenario import Conduit, Strands, StrandShare
from fzconnect.scenario.quantity import sum_to_one
from tests.scenario.strategies import numbers


def _shares(**points: Any) -> Strands:
    return Strands(shares=tuple(StrandShare(name=k, points=v) for k, v in points.items()))


def test_one_strand_by_default() -> None:
    strands = Strands()
    assert strands.count == 1
    assert strands.lens_width == ()
    assert strands.split_at(0) == (1.0,)
    assert strands.names == ("1",)
    assert strands.knots == ()


def test_count_follows_from_split_or_shares() -> None:
    assert Strands(split=(0.5, 0.25, 0.25)).count == 3
    assert _shares(A=[(0, 1)], B=[(0, 1)]).count == 2


def test_equal_split_where_none_is_given() -> None:
    assert Strands(count=4).split_at(123) == (0.25,) * 4
    assert Strands(count=4).names == ("1", "2", "3", "4")


def test_one_lens_width_goes_for_all() -> None:
    assert Strands(count=4, lens_width=12).lens_width == (12, 12, 12)
    assert Strands(count=3, lens_width="50 ft").lens_width == (15.24, 15.24)
    assert Strands(count=1, lens_width=12).lens_width == ()
    assert Strands(count=3, lens_width=[15, 20]).lens_width == (15, 20)


def test_antithetic_and_absent_strands() -> None:
    assert Strands(split=(1.25, -0.25, 0)).split == (1.25, -0.25, 0)


def test_a_sum_next_to_one_is_normalised() -> None:
    split = Strands(split=(1 / 3 + 5e-7, 1 / 3, 1 / 3)).split
    assert split is not None
    assert math.fsum(split) == pytest.approx(1, abs=3e-16)
    with pytest.raises(ScenarioError, match=r"Strands\.split: the sum is 1\.00001, expected 1"):
        Strands(split=(1 / 3 + 1e-5, 1 / 3, 1 / 3))


@given(st.lists(numbers(-3, 9), min_size=1, max_size=8))
def test_normalising_twice_changes_nothing(weights: list[float]) -> None:
    total = sum(weights)
    if total > 0.5:
        once = sum_to_one(tuple(weight / total for weight in weights))
        assert sum_to_one(once) == once


def test_shares_are_linear_between_points_and_constant_beyond() -> None:
    strands = _shares(A=[(100, 1), (300, 3)], B=[(200, 2)])
    assert strands.names == ("A", "B")
    assert strands.knots == (100, 200, 300)
    assert strands.split_at(0) == (1 / 3, 2 / 3)
    assert strands.split_at(200) == (0.5, 0.5)
    assert strands.split_at(250) == (2.5 / 4.5, 2 / 4.5)
    assert strands.split_at(900) == (0.6, 0.4)


def test_with_count_splits_equally_and_keeps_what_it_can() -> None:
    conduits = tuple(
        Conduit(strand=k, from_depth=1, to_depth=2, width=1, permeability=1) for k in (1, 3)
    )
    strands = Strands(split=(0.5, 0.3, 0.2), lens_width=(15, 25), dip=50, conduits=conduits)
    more, fewer = strands.with_count(5), strands.with_count(2)
    assert (more.count, more.split, more.lens_width) == (5, None, (15, 25, 25, 25))
    assert (fewer.count, fewer.split_at(0), fewer.lens_width) == (2, (0.5, 0.5), (15,))
    assert more.dip == fewer.dip == 50
    assert more.conduits == conduits
    assert fewer.conduits == conduits[:1]
    assert Strands().with_count(3).lens_width == (20, 20)
    with pytest.raises(ScenarioError, match=r"Strands\.count: found 0, expected a whole number"):
        strands.with_count(0)


def test_with_split_replaces_shares() -> None:
    strands = _shares(A=[(0, 1)], B=[(0, 1)]).with_split([0.7, 0.3])
    assert strands.shares is None
    assert strands.split_at(5) == (0.7, 0.3)
    with pytest.raises(ScenarioError, match=r"Strands\.split: the sum is 0\.9, expected 1"):
        strands.with_split([0.6, 0.3])


def test_with_split_at_replaces_a_constant_split() -> None:
    assert Strands(count=2).with_split_at(10, [0.9, 0.1]) == Strands(split=(0.9, 0.1))


def test_with_split_at_scales_shares_along_the_fault() -> None:
    strands = _shares(A=[(0, 1), (100, 2)], B=[(0, 1), (100, 1)])
    changed = strands.with_split_at(0, [0.2, 0.8])
    assert changed.split_at(0) == pytest.approx((0.2, 0.8))
    # A's weight doubles along the fault as before: 0.4 against 0.8.
    assert changed.split_at(100) == pytest.approx((1 / 3, 2 / 3))
    assert changed.names == ("A", "B")


def test_with_split_at_keeps_a_tip_a_tip() -> None:
    strands = _shares(A=[(0, 1)], B=[(0, 1)], C=[(0, 0), (100, 1)])
    changed = strands.with_split_at(0, [0.45, 0.15, 0.4])
    assert changed.split_at(0) == pytest.approx((0.75, 0.25, 0))
    assert changed.split_at(100)[2] == strands.split_at(100)[2]
    message = "every strand that would take throw has its tip at distance 0"
    with pytest.raises(ScenarioError, match=message):
        strands.with_split_at(0, [0, 0, 1])


@given(
    st.lists(numbers(0.1, 9), min_size=3, max_size=3),
    st.lists(numbers(0.1, 9), min_size=3, max_size=3),
    numbers(-50, 150),
)
def test_with_split_at_gives_the_shares_asked_for(
    weights: list[float], wanted: list[float], distance: float
) -> None:
    strands = Strands(
        shares=tuple(
            StrandShare(name=str(k), points=((0, weight), (100, 1)))
            for k, weight in enumerate(weights)
        )
    )
    split = tuple(weight / sum(wanted) for weight in wanted)
    assert strands.with_split_at(distance, split).split_at(distance) == pytest.approx(split)


def test_a_distance_that_is_no_number_has_no_split() -> None:
    message = "distance along the fault: found nan, expected a finite number"
    with pytest.raises(ScenarioError, match=message):
        _shares(A=[(0, 1)]).split_at(float("nan"))


def test_split_lengths_are_checked() -> None:
    message = r"Strands\.split: found 2 shares for 3 strands, expected one a strand"
    with pytest.raises(ScenarioError, match=message):
        Strands(count=3, split=(0.5, 0.5))
