from __future__ import annotations

import pytest

from fzconnect.geometry import Coverage, coverage, coverage_warning
from tests.zones import build


def test_what_faces_rock_outside_the_column_by_hand() -> None:
    """S1 0-10, M 10-40, S3 40-60 m, throw 30 m, so the hanging wall is at 30-90 m.

    Footwall sands, 30 m: S1 (0-10) lies above the hanging wall's column, S3 (40-60) within.
    Hanging-wall sands: S1 at 30-40 within the footwall's 0-60, S3 at 70-90 below it: 20 of 30 m.
    """
    zone = build([10, 30, 20], "SMS", 30)
    assert coverage(zone) == (
        Coverage(1, "1", "footwall", pytest.approx(1 / 3)),
        Coverage(1, "1", "hanging wall", pytest.approx(2 / 3)),
    )
    assert coverage_warning(zone) == (
        "column too short for this throw: 67 % of the hanging wall's sands face rock outside the "
        "column, which is unknown, not a seal"
    )


def test_several_strands_are_looked_at_one_by_one() -> None:
    """Throws 6 and 24 m. Strand 2 joins a column at 6-66 m to one at 30-90 m.

    On its footwall face S1 (6-16) is above 30: 10 of 30 m. On the hanging-wall face S3 (70-90)
    is below 66: 20 of 30 m. Strand 1: S1 loses 6 of 30 m, then S3 (46-66) 6 below 60.
    """
    zone = build([10, 30, 20], "SMS", 30, [0.2, 0.8])
    assert [one.outside for one in coverage(zone)] == pytest.approx([0.2, 0.2, 1 / 3, 2 / 3])
    assert "67 % of the sands on the hanging wall face of strand 2 face rock" in str(
        coverage_warning(zone)
    )


@pytest.mark.parametrize(
    ("below", "percent"),
    [(0, "100"), (0.04, "100"), (1, "90"), (9.0, "10"), (9.5, "5"), (9.98, "0.2")],
)
def test_the_part_outside_is_written_as_a_plain_number(below: float, percent: str) -> None:
    """A sand of 10 m is thrown 10 m to the column's base; `below` metres of shale follow it."""
    zone = build([30, 10, below or 1e-9], "MSM", 10)
    assert f": {percent} % of the hanging wall's sands" in str(coverage_warning(zone))


def test_coverage_is_exact_along_the_fault() -> None:
    """Throw 0 to 20 m, one sand of 10 m at the base: outside from throw 0 on, all from 10 m on.

    Outside area: 10 x 50 / 2 on the first half, all 10 x 50 on the second: 750 of 1000 m2.
    """
    zone = build([30, 10], "MS", [0, 20], stations=[0, 100])
    footwall, hanging_wall = coverage(zone)
    assert hanging_wall.outside == pytest.approx(0.75)
    assert footwall.outside == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("throw", [0.0, 5.0, -5.0])
def test_nothing_is_said_where_thick_shales_bound_the_sands(throw: float) -> None:
    zone = build([50, 10, 50], "MSM", throw, [0.3, 0.7])
    assert coverage_warning(zone) is None
    assert max(one.outside for one in coverage(zone)) < 1e-12


def test_a_zone_without_sand_faces_nothing_unknown() -> None:
    zone = build([50, 10], "MM", 5.0)
    assert [one.outside for one in coverage(zone)] == [0.0, 0.0]
    assert coverage_warning(zone) is None
