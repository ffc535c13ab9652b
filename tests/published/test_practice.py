"""What a geologist works out on paper. Common practice, no source."""

from __future__ import annotations

import numpy as np
import pytest

from fzconnect.geometry import FaultZone, find_windows
from fzconnect.network.result import Answer
from tests.zones import build


def _is_joined(zone: FaultZone) -> bool:
    (bed,) = zone.bodies
    return Answer.from_zone(zone).network.is_connected(bed.name, bed.name)


def _one_bed(thickness: float, throw: float, shares: list[float]) -> FaultZone:
    return build([500.0, thickness, 500.0], "MSM", throw, shares)


@pytest.mark.parametrize("thickness", [1.0, 7.5, 12.0, 33.3])
@pytest.mark.parametrize("part", [-1.5, -1.0, -0.999, 0.0, 0.5, 0.999, 1.0, 1.001])
def test_a_bed_stays_joined_across_a_strand_while_the_throw_is_less_than_its_thickness(
    thickness: float, part: float
) -> None:
    windows = find_windows(_one_bed(thickness, part * thickness, [1.0]))
    assert len(windows) == (abs(part) < 1.0)
    if len(windows):
        assert windows.max_height[0] == pytest.approx(thickness * (1.0 - abs(part)))


@pytest.mark.parametrize("seed", range(20))
def test_a_bed_is_joined_end_to_end_if_every_strand_throws_less_than_its_thickness(
    seed: int,
) -> None:
    rng = np.random.default_rng(seed)
    thickness, throw = rng.uniform(5.0, 60.0), rng.uniform(20.0, 120.0)
    shares = rng.dirichlet(np.ones(rng.integers(1, 6)))
    zone = _one_bed(thickness, throw, list(shares))
    windows = find_windows(zone)
    assert sorted(windows.strand) == [
        k + 1 for k, share in enumerate(shares) if share * throw < thickness
    ]
    assert _is_joined(zone) == ((shares * throw).max() < thickness)


@pytest.mark.parametrize("strands", range(1, 9))
@pytest.mark.parametrize(("throw", "thickness"), [(60.0, 15.0), (90.0, 20.0), (-35.0, 10.0)])
def test_with_an_equal_split_a_bed_is_joined_when_strands_exceed_throw_by_thickness(
    strands: int, throw: float, thickness: float
) -> None:
    """60 / 15 = 4 strands leave edge on edge, which is no window; 5 join."""
    zone = _one_bed(thickness, throw, [1.0 / strands] * strands)
    assert _is_joined(zone) == (strands > abs(throw) / thickness)


# A throw-stratigraphy diagram drawn by hand. The footwall column runs down one side, throw
# across; the hanging wall's sands come down along lines of slope one. Depths below the
# column's top, the same in both walls at no throw:
#
#     S1   0 -  20      20 m
#     M1  20 -  35
#     S2  35 -  45      10 m
#     M2  45 -  75
#     S3  75 - 100      25 m
#
# Hanging-wall sand [t, b] faces footwall sand [T, B] while t + throw < B and b + throw > T:
#
#     hanging wall  footwall   throw from      to
#     S1            S1         0 - 20 = -20    20 -  0 =  20
#     S1            S2        35 - 20 =  15    45 -  0 =  45
#     S1            S3        75 - 20 =  55   100 -  0 = 100
#     S2            S1         0 - 45 = -45    20 - 35 = -15
#     S2            S2        35 - 45 = -10    45 - 35 =  10
#     S2            S3        75 - 45 =  30   100 - 35 =  65
#     S3            S1         0 -100 =-100    20 - 75 = -55
#     S3            S2        35 -100 = -65    45 - 75 = -30
#     S3            S3        75 -100 = -25   100 - 75 =  25
_THICKNESS = [20.0, 15.0, 10.0, 30.0, 25.0]
_NAMES = ["S1", "M1", "S2", "M2", "S3"]
_DIAGRAM = {
    ("S1", "S1"): (-20, 20),
    ("S1", "S2"): (15, 45),
    ("S1", "S3"): (55, 100),
    ("S2", "S1"): (-45, -15),
    ("S2", "S2"): (-10, 10),
    ("S2", "S3"): (30, 65),
    ("S3", "S1"): (-100, -55),
    ("S3", "S2"): (-65, -30),
    ("S3", "S3"): (-25, 25),
}


def _heights(throw: float) -> dict[tuple[str, str], float]:
    windows = find_windows(build(_THICKNESS, "SMSMS", throw, names=_NAMES))
    return {
        (windows.hanging_wall_sand(w), windows.footwall_sand(w)): float(windows.max_height[w])
        for w in range(len(windows))
    }


# Heights read off the diagram at single throws, m; 10, 20, 25, 100 are edges of its fields.
@pytest.mark.parametrize(
    ("throw", "expected"),
    [
        (0, {("S1", "S1"): 20, ("S2", "S2"): 10, ("S3", "S3"): 25}),
        (10, {("S1", "S1"): 10, ("S3", "S3"): 15}),
        (18, {("S1", "S1"): 2, ("S1", "S2"): 3, ("S3", "S3"): 7}),
        (20, {("S1", "S2"): 5, ("S3", "S3"): 5}),
        (25, {("S1", "S2"): 10}),
        (40, {("S1", "S2"): 5, ("S2", "S3"): 10}),
        (50, {("S2", "S3"): 10}),
        (60, {("S1", "S3"): 5, ("S2", "S3"): 5}),
        (80, {("S1", "S3"): 20}),
        (100, {}),
        (-20, {("S2", "S1"): 5, ("S3", "S3"): 5}),
        (-60, {("S3", "S1"): 5, ("S3", "S2"): 5}),
    ],
)
def test_juxtapositions_of_a_single_plane_are_those_of_the_diagram(
    throw: float, expected: dict[tuple[str, str], float]
) -> None:
    assert _heights(throw) == pytest.approx(expected)


@pytest.mark.parametrize("throw", range(-110, 111))
def test_every_field_of_the_diagram_ends_where_it_was_drawn(throw: int) -> None:
    assert set(_heights(throw)) == {pair for pair, (a, b) in _DIAGRAM.items() if a < throw < b}


def test_a_throw_that_grows_along_the_fault_draws_the_diagram_itself() -> None:
    """Throw -120 to 120 m over 2400 m: 10 m along the fault are 1 m of throw.

    A sand of h1 that sweeps past the whole of one of h2 covers h1 x h2 metres of throw and depth,
    whatever the order: S1 past S2 is 20 x 10 = 200, so 2000 m2.
    """
    zone = build(_THICKNESS, "SMSMS", [-120.0, 120.0], names=_NAMES, stations=[0.0, 2400.0])
    windows = find_windows(zone)
    thickness = {"S1": 20, "S2": 10, "S3": 25}
    assert len(windows) == len(_DIAGRAM)
    for w in range(len(windows)):
        upper, lower = windows.hanging_wall_sand(w), windows.footwall_sand(w)
        drawn = [10.0 * (throw + 120) for throw in _DIAGRAM[upper, lower]]
        assert [windows.distance_from[w], windows.distance_to[w]] == pytest.approx(drawn)
        assert windows.area[w] == pytest.approx(10.0 * thickness[upper] * thickness[lower])
        assert windows.max_height[w] == pytest.approx(min(thickness[upper], thickness[lower]))
