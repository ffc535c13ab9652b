"""Windows worked out by hand."""

from __future__ import annotations

import numpy as np
import pytest

from fzconnect.geometry import Windows, find_windows
from tests.zones import build


def _row(windows: Windows, w: int = 0) -> dict[str, object]:
    return windows.table().iloc[w].to_dict()


def test_every_number_of_one_window() -> None:
    """A bed of 20 m at 1100 m, throw 5 m at 0 and 15 m at 100: heights 15 and 5, mean 10.

    Projected area 10 x 100 = 1000 m2; on a strand of 30 degrees, 1000 / 0.5 = 2000 m2. The
    window's top is the hanging wall's top (1105 to 1115), its base the footwall's (1120).
    """
    zone = build([100, 20, 100], "MSM", [5, 15], stations=[0, 100], dip=30)
    windows = find_windows(zone)
    assert len(windows) == 1
    assert _row(windows) == {
        "strand": 1,
        "footwall_side_sand": "S2",
        "hanging_wall_side_sand": "S2",
        "distance_from": 0.0,
        "distance_to": 100.0,
        "top": pytest.approx(1105.0),
        "base": pytest.approx(1120.0),
        "max_height": pytest.approx(15.0),
        "area": pytest.approx(2000.0),
        "contact": "faulted",
        "strand_name": "1",
    }


def test_a_window_closes_between_stations_where_the_throw_reaches_the_thickness() -> None:
    """Throw 0 to 40 m over 100 m, bed 20 m: closed at 50 m; a triangle of 20 x 50 / 2 = 500 m2."""
    windows = find_windows(build([100, 20, 100], "MSM", [0, 40], stations=[0, 100]))
    assert windows.distance_to == pytest.approx([50.0])
    assert windows.area == pytest.approx([500.0])
    assert windows.base == pytest.approx([1120.0])
    at, upper, lower = windows.corners(0)
    assert at == pytest.approx([0.0, 50.0])
    assert upper == pytest.approx([1100.0, 1120.0])
    assert lower == pytest.approx([1120.0, 1120.0])


def test_a_sand_passes_another_between_two_stations() -> None:
    """Neither station sees a window: S1 is above S3 at 0 and below it at 100.

    S1 is 0-10, S3 20-30 m; throw 0 to 60. They meet from throw 10 to 30, with full height 10 at
    20 only: from distance 16.67 to 50, a triangle of 10 x 33.33 / 2 = 166.67 m2.
    """
    zone = build([10, 10, 10, 100], "SMSM", [0, 60], stations=[0, 100])
    windows = find_windows(zone)
    (w,) = [
        i
        for i in range(len(windows))
        if (windows.hanging_wall_sand(i), windows.footwall_sand(i)) == ("S1", "S3")
    ]
    assert windows.distance_from[w] == pytest.approx(100 / 6)
    assert windows.distance_to[w] == pytest.approx(50.0)
    assert windows.max_height[w] == pytest.approx(10.0)
    assert windows.area[w] == pytest.approx(1000 / 6)
    assert windows.top[w] == pytest.approx(1020.0)
    assert windows.base[w] == pytest.approx(1030.0)
    distance, depth = windows.outline(w)
    assert len(distance) == len(depth) == 6
    assert windows.cut(100 / 3) == [(w, pytest.approx(1020.0), pytest.approx(1030.0))]


def test_growth_moves_sands_against_each_other_without_throw_at_the_top() -> None:
    """Shale 100 m and bed 10 m in the footwall, 120 and 20 m across; two strands share equally.

    The bed is at 100-110, 110-125 (half way) and 120-140 m: edge on edge across strand 1, 5 m
    across strand 2. A single plane has a gap of 10 m.
    """
    zone = build([100, 10], "MS", 0, [0.5, 0.5], hanging_thickness=[120, 20], top=0)
    windows = find_windows(zone)
    assert windows.strand.tolist() == [2]
    assert windows.max_height == pytest.approx([5.0])
    assert [windows.top[0], windows.base[0]] == pytest.approx([120.0, 125.0])
    assert len(find_windows(zone.single_plane())) == 0


def test_without_throw_a_body_meets_only_itself_and_unfaulted() -> None:
    windows = find_windows(build([10, 5, 10], "SMS", 0, [0.4, 0.6], stations=[0, 100]))
    assert windows.is_unfaulted.all()
    assert windows.footwall_body.tolist() == windows.hanging_wall_body.tolist() == [0, 1, 0, 1]
    assert windows.area == pytest.approx([1000.0] * 4)
    assert set(windows.table()["contact"]) == {"unfaulted"}


def test_growth_without_throw_at_the_top_is_a_faulted_contact() -> None:
    windows = find_windows(build([10, 5], "SM", 0, hanging_thickness=[12, 5]))
    assert windows.max_height == pytest.approx([10.0])
    assert not windows.is_unfaulted.any()


def test_a_window_is_split_where_the_strand_has_its_tip() -> None:
    """Strand 1 has no share up to 100 m and grows to half of 20 m at 200 m; the bed is 30 m."""
    shares = [[0.0, 0.0, 0.5], [1.0, 1.0, 0.5]]
    zone = build([100, 30, 100], "MSM", 20, shares, stations=[0, 100, 200])
    windows = find_windows(zone)
    assert windows.strand.tolist() == [1, 1, 2]
    assert windows.is_unfaulted.tolist() == [True, False, False]
    assert windows.distance_from == pytest.approx([0, 100, 0])
    assert windows.distance_to == pytest.approx([100, 200, 200])
    # 30 x 100; 30 falling to 20; 10 for 100 m, then 10 rising to 20
    assert windows.area == pytest.approx([3000, 2500, 2500])
    assert windows.corners(1)[0] == pytest.approx([100, 200]), "the shared corner belongs to both"


def test_a_window_runs_on_across_stations() -> None:
    zone = build([100, 30, 100], "MSM", [0, 5, 20, 10], stations=[0, 100, 200, 300])
    windows = find_windows(zone)
    assert len(windows) == 1
    assert windows.corners(0)[0] == pytest.approx([0, 100, 200, 300])
    assert windows.area == pytest.approx([100 * (27.5 + 17.5 + 15)])


def test_a_window_that_closes_at_a_station_opens_as_another() -> None:
    zone = build([100, 30, 100], "MSM", [10, 30, 10], stations=[0, 100, 200])
    windows = find_windows(zone)
    assert windows.distance_from == pytest.approx([0, 100])
    assert windows.distance_to == pytest.approx([100, 200])
    assert windows.area == pytest.approx([1000, 1000])


@pytest.mark.parametrize(("overlap", "count"), [(0.0, 0), (9e-7, 0), (-1e-9, 0), (2e-6, 1)])
def test_an_overlap_under_a_micrometre_is_none(overlap: float, count: int) -> None:
    zone = build([100, 20, 100], "MSM", 20 - overlap, stations=[0, 50, 100], top=0)
    assert len(find_windows(zone)) == count


def test_bodies_edge_on_edge_along_the_whole_fault_make_no_window() -> None:
    """Thirds do not add up in binary: the touching edges differ by rounding, up or down."""
    rng = np.random.default_rng(0)
    shares = rng.dirichlet(np.ones(3), 40).T
    shares[2] = 1.0 - shares[0] - shares[1]
    throw = 10.0 / shares[1]  # strand 2 always has 10 m, the bed's thickness
    zone = build([900, 10, 900], "MSM", throw, shares, stations=list(np.arange(40.0) * 7.3))
    assert 2 not in find_windows(zone).strand


def test_an_antithetic_strand_steps_back() -> None:
    """Throws +30 and -10 m: the lens lies 30 m below the footwall, the hanging wall 20 m.

    The bed of 25 m has lost itself across strand 1 and keeps 25 - 10 = 15 m across strand 2.
    """
    zone = build([100, 25, 100], "MSM", 20, [1.5, -0.5])
    windows = find_windows(zone)
    assert windows.strand.tolist() == [2]
    assert windows.max_height == pytest.approx([15.0])
    assert [windows.top[0], windows.base[0]] == pytest.approx([1130.0, 1145.0])


def test_no_window_at_all_is_an_empty_table() -> None:
    windows = find_windows(build([10, 100], "SM", 60, stations=[0, 10]))
    assert len(windows) == 0
    assert windows.table().empty
    assert list(windows.table()) == list(find_windows(build([10, 100], "SM", 5)).table())
    assert windows.cut(5.0) == []
    assert "0 on 1 strands, 0 m2" in repr(windows)


def test_the_table_shows_itself_with_trade_words() -> None:
    html = find_windows(build([10, 100], "SM", 5))._repr_html_()
    assert "footwall_side_sand" in html
    assert "<td>S1</td>" in html


def test_a_cut_lists_the_windows_open_at_a_distance() -> None:
    """Bed 20 m, throw 0 to 40 over 100 m: at 25 m the throw is 10 m."""
    windows = find_windows(build([100, 20, 100], "MSM", [0, 40], stations=[0, 100]))
    assert windows.cut(25.0) == [(0, pytest.approx(1110.0), pytest.approx(1120.0))]
    assert windows.cut(50.0) == []
    assert windows.cut(75.0) == []


def test_a_cut_at_a_tip_lists_the_unfaulted_contact_alone() -> None:
    shares = [[0.0, 0.0, 0.5], [1.0, 1.0, 0.5]]
    zone = build([100, 30, 100], "MSM", 20, shares, stations=[0, 100, 200])
    windows = find_windows(zone)
    assert [w for w, _, _ in windows.cut(100.0)] == [0, 2]


def test_windows_come_ordered_by_strand_bodies_and_distance() -> None:
    zone = build([5, 4, 5, 3, 6], "SMSMS", [0, 30, -10, 12], [0.5, 0.5], stations=[0, 9, 20, 31])
    windows = find_windows(zone)
    order = list(
        zip(
            windows.strand,
            windows.footwall_body,
            windows.hanging_wall_body,
            windows.distance_from,
            strict=True,
        )
    )
    assert len(order) > 10
    assert order == sorted(order)


def test_a_window_ends_exactly_at_the_last_station() -> None:
    """0.1 + (0.7 - 0.1) and the like miss the station by rounding; a cut there must not."""
    rng = np.random.default_rng(0)
    for _ in range(50):
        stations = np.cumsum(rng.uniform(0.1, 400.0, 4))
        windows = find_windows(build([100, 20, 100], "MSM", 5, stations=list(stations)))
        assert windows.distance_to.tolist() == [stations[-1]]
        assert [len(windows.cut(s)) for s in stations.tolist()] == [1, 1, 1, 1]
