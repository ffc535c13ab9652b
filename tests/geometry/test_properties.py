"""What holds for every zone, and a slow twin of the kernel."""

from __future__ import annotations

from collections import defaultdict
from itertools import pairwise

import numpy as np
import pytest
from hypothesis import assume, example, given
from hypothesis import strategies as st

from fzconnect.geometry import FaultZone, Windows, coverage, find_windows
from tests.zones import build, random_zone, zones

Key = tuple[int, int, int]


def _areas(windows: Windows) -> dict[Key, float]:
    """Return the area of each strand and pair of bodies."""
    areas: dict[Key, float] = defaultdict(float)
    for strand, a, b, area in zip(
        windows.strand.tolist(),
        windows.footwall_body.tolist(),
        windows.hanging_wall_body.tolist(),
        windows.area.tolist(),
        strict=True,
    ):
        areas[strand, a, b] += area
    return dict(areas)


def _rebuilt(zone: FaultZone, **changes: object) -> FaultZone:
    return FaultZone(**{**vars(zone), **changes})


def _interpolated(zone: FaultZone, stations: np.ndarray) -> FaultZone:
    """Return the same zone with other stations; the faces stay the same straight lines."""

    def at(values: np.ndarray) -> np.ndarray:
        rows = values.reshape(-1, values.shape[-1])
        found = [np.interp(stations, zone.stations, row) for row in rows]
        return np.array(found).reshape(*values.shape[:-1], len(stations))

    return _rebuilt(
        zone,
        stations=stations,
        footwall=at(zone.footwall),
        hanging_wall=at(zone.hanging_wall),
        shares=at(zone.shares),
        faces=at(zone.faces),
    )


@given(zones(), st.data())
def test_stations_in_between_change_nothing(zone: FaultZone, data: st.DataObject) -> None:
    parts = st.lists(st.sampled_from([0.125, 0.25, 0.5, 0.7, 0.9]), max_size=3)
    extra = [
        left + part * (right - left)
        for left, right in pairwise(zone.stations.tolist())
        for part in data.draw(parts)
    ]
    denser = _interpolated(zone, np.unique([*zone.stations.tolist(), *extra]))
    before, after = find_windows(zone), find_windows(denser)
    assert _areas(after) == pytest.approx(_areas(before), rel=1e-9, abs=1e-9)
    assert len(after) == len(before)
    for name in ("strand", "footwall_body", "hanging_wall_body", "is_unfaulted"):
        assert getattr(after, name).tolist() == getattr(before, name).tolist()
    for name in ("distance_from", "distance_to", "top", "base", "max_height"):
        assert getattr(after, name) == pytest.approx(getattr(before, name), abs=1e-7)


@given(zones())
def test_seen_in_a_mirror_the_windows_are_the_same(zone: FaultZone) -> None:
    """Swap the walls: strands and bodies change sides, a normal throw is a reverse one."""
    mirror = _rebuilt(
        zone,
        footwall=zone.hanging_wall.copy(),
        hanging_wall=zone.footwall.copy(),
        shares=zone.shares[::-1].copy(),
        faces=zone.faces[::-1, ::-1].copy(),
        strand_names=zone.strand_names[::-1],
    )
    assert (mirror.throw == -zone.throw).all()
    n = zone.strand_count
    swapped = {(n + 1 - k, b, a): area for (k, a, b), area in _areas(find_windows(zone)).items()}
    assert _areas(find_windows(mirror)) == pytest.approx(swapped, rel=1e-12, abs=1e-12)


@given(zones())
def test_walked_from_the_other_end_the_windows_are_the_same(zone: FaultZone) -> None:
    ways = ("footwall", "hanging_wall", "shares", "faces")
    turned = _rebuilt(
        zone,
        stations=(zone.stations[-1] - zone.stations[::-1]).copy(),
        **{name: getattr(zone, name)[..., ::-1].copy() for name in ways},
    )
    before, after = find_windows(zone), find_windows(turned)
    assert len(after) == len(before)
    assert _areas(after) == pytest.approx(_areas(before), rel=1e-9, abs=1e-9)


@given(zones(), st.sampled_from([-1000.0, -937.3, 1234.5, 6000.0]))
def test_depth_moves_the_windows_and_nothing_else(zone: FaultZone, shift: float) -> None:
    ways = ("footwall", "hanging_wall", "faces")
    moved = _rebuilt(zone, **{name: getattr(zone, name) + shift for name in ways})
    before, after = find_windows(zone), find_windows(moved)
    assert _areas(after) == pytest.approx(_areas(before), abs=1e-6)
    assert after.top == pytest.approx(before.top + shift)
    assert after.max_height == pytest.approx(before.max_height, abs=1e-6)


@given(zones(), st.sampled_from([0.5, 3.0, 10.0]))
def test_areas_scale_with_the_square_of_length(zone: FaultZone, factor: float) -> None:
    ways = ("stations", "footwall", "hanging_wall", "faces")
    larger = _rebuilt(zone, **{name: getattr(zone, name) * factor for name in ways})
    expected = {key: area * factor**2 for key, area in _areas(find_windows(zone)).items()}
    assert _areas(find_windows(larger)) == pytest.approx(expected, rel=1e-9, abs=1e-9)


@given(zones(), st.floats(5.0, 90.0))
def test_area_grows_as_strands_lie_flatter(zone: FaultZone, dip: float) -> None:
    flatter = find_windows(_rebuilt(zone, dip=dip))
    assert flatter.area * np.sin(np.radians(dip)) == pytest.approx(find_windows(zone).area)


@given(zones())
def test_sand_facing_sand_shale_and_the_unknown_is_all_the_sand(zone: FaultZone) -> None:
    """Sand area on a face = windows + shale across + rock outside the column."""
    shales = "".join("M" if sand else "S" for sand in zone.is_sand)
    tops, bases = zone.body_faces()
    found = coverage(zone)
    for k in range(zone.strand_count):
        for side in (0, 1):
            total = np.trapezoid(bases[k, side] - tops[k, side], zone.stations, axis=-1).sum()
            windows = find_windows(zone)
            sand = windows.area[windows.strand == k + 1].sum()
            shale = _facing(zone, k, side, shales)
            outside = found[2 * k + side].outside * total
            assert sand + shale + outside == pytest.approx(total)


def _facing(zone: FaultZone, k: int, side: int, other_sand: str) -> float:
    """Return the area over which sands on one side of a strand face layers marked S across it."""
    sampled = 0.0
    tops, bases = zone.body_faces()
    for a in range(len(zone.bodies)):
        for layer, letter in enumerate(other_sand):
            if letter == "S":
                across = zone.faces[k, 1 - side, layer : layer + 2]
                sampled += _overlap_area(zone.stations, tops[k, side, a], bases[k, side, a], across)
    return sampled


def _overlap_area(
    stations: np.ndarray, top: np.ndarray, base: np.ndarray, other: np.ndarray
) -> float:
    """Return the area of an overlap in plain Python, exact by splitting gaps at every crossing."""
    total = 0.0
    for i in range(len(stations) - 1):
        lines = [(v[i], v[i + 1] - v[i]) for v in (top, base, other[0], other[1])]
        cuts = {0.0, 1.0}
        for m, (value, slope) in enumerate(lines):
            for other_value, other_slope in lines[m + 1 :]:
                if slope != other_slope:
                    x = (other_value - value) / (slope - other_slope)
                    cuts.add(min(1.0, max(0.0, x)))
        for x0, x1 in pairwise(sorted(cuts)):
            middle = 0.5 * (x0 + x1)
            t, b, ot, ob = (value + slope * middle for value, slope in lines)
            # a straight line from x0 to x1, so its middle is its mean
            total += max(0.0, min(b, ob) - max(t, ot)) * (x1 - x0) * (stations[i + 1] - stations[i])
    return total


@given(zones())
def test_areas_are_those_of_plain_python_that_splits_at_every_crossing(zone: FaultZone) -> None:
    tops, bases = zone.body_faces()
    expected = {}
    for k in range(zone.strand_count):
        for a in range(len(zone.bodies)):
            for b in range(len(zone.bodies)):
                across = np.array([tops[k, 1, b], bases[k, 1, b]])
                area = _overlap_area(zone.stations, tops[k, 0, a], bases[k, 0, a], across)
                if area > 1e-6:
                    expected[k + 1, a, b] = area
    assert _areas(find_windows(zone)) == pytest.approx(expected, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("seed", range(5))
def test_areas_and_heights_are_near_those_of_dense_samples(seed: int) -> None:
    zone = random_zone(np.random.default_rng(seed))
    tops, bases = zone.body_faces()
    windows = find_windows(zone)
    areas = _areas(windows)
    slope = np.sin(np.radians(zone.dip))
    at = np.linspace(zone.stations[0], zone.stations[-1], 4001)
    for k in range(zone.strand_count):
        for a in range(len(zone.bodies)):
            for b in range(len(zone.bodies)):
                lines = (tops[k, 0, a], bases[k, 0, a], tops[k, 1, b], bases[k, 1, b])
                t, low, ot, olow = (np.interp(at, zone.stations, line) for line in lines)
                overlap = np.maximum(0.0, np.minimum(low, olow) - np.maximum(t, ot))
                area = np.trapezoid(overlap, at)
                assert areas.get((k + 1, a, b), 0.0) * slope == pytest.approx(area, abs=0.05)
                mine = (
                    (windows.strand == k + 1)
                    & (windows.footwall_body == a)
                    & (windows.hanging_wall_body == b)
                )
                assert windows.max_height[mine].max(initial=0.0) == pytest.approx(
                    overlap.max(), abs=0.1
                )


@given(zones())
def test_what_a_window_says_of_itself_fits_together(zone: FaultZone) -> None:
    windows = find_windows(zone)
    for w in range(len(windows)):
        at, upper, lower = windows.corners(w)
        assert (np.diff(at) >= 0.0).all()
        assert (lower >= upper).all()
        assert (at[0], at[-1]) == (windows.distance_from[w], windows.distance_to[w])
        assert windows.distance_from[w] < windows.distance_to[w]
        assert (windows.top[w], windows.base[w]) == (upper.min(), lower.max())
        assert windows.max_height[w] == (lower - upper).max() >= 1e-6
        assert windows.area[w] == pytest.approx(np.trapezoid(lower - upper, at))
        distance, depth = windows.outline(w)
        shoelace = 0.5 * np.sum(distance * np.roll(depth, -1) - np.roll(distance, -1) * depth)
        assert abs(shoelace) == pytest.approx(windows.area[w], rel=1e-6)


@given(zones())
def test_unfaulted_contacts_are_bodies_that_meet_themselves_in_full(zone: FaultZone) -> None:
    windows = find_windows(zone)
    tops, bases = zone.body_faces()
    for w in np.flatnonzero(windows.is_unfaulted):
        a = windows.footwall_body[w]
        assert a == windows.hanging_wall_body[w]
        at, upper, lower = windows.corners(int(w))
        k = windows.strand[w] - 1
        assert upper == pytest.approx(np.interp(at, zone.stations, tops[k, 0, a]))
        assert lower == pytest.approx(np.interp(at, zone.stations, bases[k, 0, a]))


@given(zones())
def test_strands_without_throw_are_unfaulted_all_along(zone: FaultZone) -> None:
    assume((zone.shares == 0.0).all(axis=1).any())
    windows = find_windows(zone)
    for k in np.flatnonzero((zone.shares == 0.0).all(axis=1)):
        mine = windows.strand == k + 1
        assert windows.is_unfaulted[mine].all()
        assert mine.sum() == len(zone.bodies)


@given(zones())
@example(build([3, 2, 4], "SMS", [7, -2], [0.5, 0.5]))
def test_windows_do_not_depend_on_the_other_strands(zone: FaultZone) -> None:
    """Each strand alone gives the windows that it gives among the others."""
    together = _areas(find_windows(zone))
    alone: dict[Key, float] = {}
    for k in range(zone.strand_count):
        one = _rebuilt(
            zone,
            faces=zone.faces[k : k + 1].copy(),
            shares=np.ones((1, len(zone.stations))),
            strand_names=(zone.strand_names[k],),
        )
        alone.update({(k + 1, a, b): v for (_, a, b), v in _areas(find_windows(one)).items()})
    assert alone == together
