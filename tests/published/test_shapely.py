"""Windows against polygons cut by shapely 2 (GEOS), an independent way to the same areas.

Every body is drawn on the fault plane as a row of trapezoids between stations, straight from the
definition of the block boundaries; shapely intersects and merges them.
"""

from __future__ import annotations

import numpy as np
import pytest
from shapely import LineString, Polygon, get_coordinates, intersection, unary_union

from fzconnect.geometry import FaultZone, find_windows
from tests.zones import random_zone

Key = tuple[int, int, int, bool]


def _boundaries(zone: FaultZone, block: int) -> np.ndarray:
    part = zone.shares[:block].sum(axis=0)
    if block == zone.strand_count:
        part = np.ones_like(part)
    return zone.footwall + part * (zone.hanging_wall - zone.footwall)


def _trapezoid(zone: FaultZone, boundaries: np.ndarray, body: int, i: int) -> Polygon:
    top, base = boundaries[zone.bodies[body].first], boundaries[zone.bodies[body].last + 1]
    s0, s1 = zone.stations[i], zone.stations[i + 1]
    return Polygon([(s0, top[i]), (s1, top[i + 1]), (s1, base[i + 1]), (s0, base[i])])


def _is_unfaulted(zone: FaultZone, k: int, a: int, b: int, i: int) -> bool:
    """Tell whether body a and body b are one body, without offset, from station i to i + 1."""
    body = zone.bodies[a]
    shift = _boundaries(zone, k + 1) - _boundaries(zone, k)
    moved = np.abs(shift[[body.first, body.last + 1]][:, [i, i + 1]])
    return a == b and bool((moved < 1e-6).all())


def cut_windows(zone: FaultZone) -> dict[Key, list[Polygon]]:
    """Return the polygons of every strand, pair of bodies and kind of contact, by distance."""
    found: dict[Key, list[Polygon]] = {}
    for k in range(zone.strand_count):
        here, there = _boundaries(zone, k), _boundaries(zone, k + 1)
        for a in range(len(zone.bodies)):
            for b in range(len(zone.bodies)):
                pieces: dict[bool, list[Polygon]] = {False: [], True: []}
                for i in range(len(zone.stations) - 1):
                    shape = intersection(
                        _trapezoid(zone, here, a, i), _trapezoid(zone, there, b, i)
                    )
                    # touching bodies meet in points or lines, which are no window
                    parts = [p for p in getattr(shape, "geoms", [shape]) if p.area > 1e-9]
                    pieces[_is_unfaulted(zone, k, a, b, i)].extend(parts)
                for unfaulted, polygons in pieces.items():
                    merged = unary_union(polygons)
                    shapes = [p for p in getattr(merged, "geoms", [merged]) if not p.is_empty]
                    if shapes:
                        shapes.sort(key=lambda polygon: polygon.bounds[0])
                        found[k + 1, a, b, unfaulted] = shapes
    return found


def _max_height(polygon: Polygon) -> float:
    _, low, _, high = polygon.bounds
    columns = [
        intersection(polygon, LineString([(x, low - 1.0), (x, high + 1.0)])).length
        for x in np.unique(get_coordinates(polygon)[:, 0])
    ]
    return max(columns)


@pytest.mark.parametrize("seed", range(60))
def test_windows_are_the_polygons_that_shapely_cuts(seed: int) -> None:
    zone = random_zone(np.random.default_rng(seed))
    windows = find_windows(zone)
    expected = cut_windows(zone)
    found: dict[Key, list[int]] = {}
    for w in range(len(windows)):
        key = (
            int(windows.strand[w]),
            int(windows.footwall_body[w]),
            int(windows.hanging_wall_body[w]),
            bool(windows.is_unfaulted[w]),
        )
        found.setdefault(key, []).append(w)
    assert {key: len(rows) for key, rows in found.items()} == {
        key: len(polygons) for key, polygons in expected.items()
    }
    slope = np.sin(np.radians(zone.dip))
    for key, rows in found.items():
        for w, polygon in zip(rows, expected[key], strict=True):
            assert windows.area[w] * slope == pytest.approx(polygon.area, rel=1e-9, abs=1e-9)
            left, high, right, low = polygon.bounds
            box = (windows.distance_from[w], windows.top[w], windows.distance_to[w])
            assert (*box, windows.base[w]) == pytest.approx((left, high, right, low), abs=1e-7)
            assert windows.max_height[w] == pytest.approx(_max_height(polygon), abs=1e-7)
            outline = Polygon(np.column_stack(windows.outline(w)))
            assert outline.is_valid
            assert outline.symmetric_difference(polygon).area < 1e-7


def test_the_random_zones_hold_every_kind_of_case() -> None:
    """The comparison above means something only if its zones are varied."""
    zones = [random_zone(np.random.default_rng(seed)) for seed in range(60)]
    windows = [find_windows(zone) for zone in zones]
    assert sum((zone.shares < 0).any() for zone in zones) >= 5
    assert sum((zone.throw < 0).any() and (zone.throw > 0).any() for zone in zones) >= 10
    assert (
        sum(not np.allclose(np.ptp(zone.hanging_wall - zone.footwall, axis=0), 0) for zone in zones)
        >= 10
    )
    assert sum(found.is_unfaulted.any() for found in windows) >= 5
    assert sum(found.is_unfaulted.any() and not found.is_unfaulted.all() for found in windows) >= 5
    assert sum(len(found) for found in windows) > 500
    ends = sum(
        np.isin(found.distance_to, found.zone.stations, invert=True).sum() for found in windows
    )
    assert ends > 100, "windows that close between stations"
