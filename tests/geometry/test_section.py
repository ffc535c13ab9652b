from __future__ import annotations

import numpy as np
import pytest

from fzconnect.errors import NetworkError
from tests.zones import build


def test_blocks_of_a_section_lie_between_the_walls_by_their_shares() -> None:
    """Throw 0 to 40 m: 30 m at 75 m along. Shares 0.2, 0.3, 0.5: blocks 0, 6, 15 and 30 m down."""
    zone = build([10, 20], "SM", [0, 40], [0.2, 0.3, 0.5], stations=[0, 100])
    section = zone.at(75)
    assert section.distance == 75.0
    assert section.boundaries - 1000 == pytest.approx(
        np.array([[0, 10, 30], [6, 16, 36], [15, 25, 45], [30, 40, 60]])
    )


def test_strands_stand_apart_by_the_lens_widths_about_the_middle() -> None:
    zone = build([10, 20], "SM", 30, [0.2, 0.3, 0.5], lens_width=12)
    section = zone.at(0)
    assert section.strand_positions == pytest.approx([-12, 0, 12])
    assert section.reference_depth == pytest.approx(1030.0), "1000 to 1060 m"
    assert section.slope == 0.0
    assert section.strand_x(0, 5000.0) == pytest.approx(-12)


def test_strands_lean_towards_the_hanging_wall_with_depth() -> None:
    """At 45 degrees one metre right for each metre down; the middle of 1000-1060 m is 1030 m."""
    section = build([10, 20], "SM", 30, dip=45).at(0.5)
    assert section.slope == pytest.approx(1.0)
    assert section.strand_x(0, [1000.0, 1030.0, 1060.0]) == pytest.approx([-30, 0, 30])
    assert section.extent(10.0) == pytest.approx((-40, 40))


def test_slope_is_one_by_the_tangent_of_the_dip() -> None:
    assert build([10, 20], "SM", 30, dip=60).at(0).slope == pytest.approx(1 / np.sqrt(3))


def test_the_outline_of_a_layer_follows_the_strands_beside_it() -> None:
    """45 degrees, throw 30 m in two halves: the lens is 15 m down, its sand at 1015-1025 m.

    Drawn rock is 1000-1060 m, so its middle is 1030 m; strands at -5 and 5 m there. Strand 1 is
    at -5 - 15 = -20 m at 1015 m and at -10 m at 1025 m.
    """
    section = build([10, 20], "SM", 30, [0.5, 0.5], dip=45).at(0)
    x, depth = section.outline(1, 0, (-100.0, 100.0))
    assert x == pytest.approx([-20, -10, 0, -10])
    assert depth == pytest.approx([1015, 1015, 1025, 1025])


def test_the_outer_blocks_end_at_the_edges_of_the_picture() -> None:
    section = build([10, 20], "SM", 30, dip=45).at(0)
    x, depth = section.outline(0, 0, (-100.0, 100.0))
    assert x == pytest.approx([-100, -30, -20, -100])
    assert depth == pytest.approx([1000, 1000, 1010, 1010])
    x, depth = section.outline(1, 1, (-100.0, 100.0))
    assert x == pytest.approx([10, 100, 100, 30])
    assert depth == pytest.approx([1040, 1040, 1060, 1060])


@pytest.mark.parametrize("distance", [-0.1, 100.5, float("nan")])
def test_a_section_off_the_fault_is_refused(distance: float) -> None:
    zone = build([10, 20], "SM", 30, stations=[0, 100])
    with pytest.raises(NetworkError, match=r"is off the fault, which runs from 0 to 100 m"):
        zone.at(distance)
