from __future__ import annotations

import numpy as np
import pytest

from fzconnect.network import Study, study
from fzconnect.scenario import Column, Layer, Scenario, Strands, Throw
from tests.network.hand import F1, H2, L1, L2, scenario


@pytest.fixture(scope="module")
def by_hand() -> Study:
    return study(scenario())


def test_pairs_beside_the_single_plane_by_hand(by_hand: Study) -> None:
    """One plane joins hanging wall S1 to footwall S2 by 20; two strands join all, and that by 8."""
    found = [
        (
            p.hanging_wall_sand,
            p.footwall_sand,
            p.connected,
            p.connected_single_plane,
            round(p.bottleneck_area, 9),
            round(p.bottleneck_area_single_plane, 9),
            p.change,
        )
        for p in by_hand.pairs
    ]
    assert found == [
        ("S1", "S1", True, False, 2.0, 0.0, "gained"),
        ("S1", "S2", True, True, 8.0, 20.0, "same"),
        ("S2", "S1", True, False, 2.0, 0.0, "gained"),
        ("S2", "S2", True, False, 2.0, 0.0, "gained"),
    ]
    assert by_hand.connected_pairs == by_hand.pairs


def test_a_lens_can_take_a_connection_away() -> None:
    """Across one plane of 30 m the hanging wall's S1 faces the footwall's S2.

    Across each of three strands of 10 m a sand faces itself by 10 m, and S1 (110-130 in the first
    lens) meets S2 (130-150 in the footwall) edge on edge only, which is nothing.
    """
    thirds = study(scenario((1 / 3, 1 / 3, 1 / 3)))
    changes = {(p.hanging_wall_sand, p.footwall_sand): p.change for p in thirds.pairs}
    assert changes == {
        ("S1", "S1"): "gained",
        ("S1", "S2"): "lost",
        ("S2", "S1"): "same",
        ("S2", "S2"): "gained",
    }


def test_headline_numbers_by_hand(by_hand: Study) -> None:
    assert by_hand.counts() == {
        "strands": 2,
        "windows": 6,
        "unfaulted_contacts": 0,
        "window_area": pytest.approx(30.0),
        "connected_pairs": 4,
        "widest_bottleneck": pytest.approx(8.0),
        "critical_windows": 2,
    }
    assert by_hand.counts("single plane") == {
        "strands": 1,
        "windows": 1,
        "unfaulted_contacts": 0,
        "window_area": pytest.approx(20.0),
        "connected_pairs": 1,
        "widest_bottleneck": pytest.approx(20.0),
        "critical_windows": 1,
    }


def test_critical_windows_of_a_pair_are_the_bridges_on_its_way(by_hand: Study) -> None:
    critical = {
        (p.hanging_wall_sand, p.footwall_sand): set(by_hand.critical_windows(p))
        for p in by_hand.pairs
    }
    assert critical == {
        ("S1", "S1"): {(F1, L1)},
        ("S1", "S2"): set(),
        ("S2", "S1"): {(F1, L1), (L2, H2)},
        ("S2", "S2"): {(L2, H2)},
    }


def test_a_pair_that_is_not_connected_has_no_critical_window() -> None:
    result = study(scenario((1.0,)))
    apart = [pair for pair in result.pairs if not pair.connected]
    assert len(apart) == 3
    assert [result.critical_windows(pair) for pair in apart] == [()] * 3


def test_ranked_pathways_and_their_progress(by_hand: Study) -> None:
    told: list[tuple[int, int]] = []
    ranked = by_hand.ranked_pathways(
        per_pair=2, progress=lambda done, total: told.append((done, total))
    )
    assert told == [(1, 4), (2, 4), (3, 4), (4, 4)]
    assert [one.rank for one in ranked] == [1, 2] * 4
    assert [one.pathway.resistance for one in ranked[:4]] == pytest.approx([0.625, 0.875, 0.25, 1])
    assert len(by_hand.ranked_pathways(per_pair=1)) == 4


@pytest.mark.parametrize("seed", range(10))
def test_one_strand_is_the_single_plane(seed: int) -> None:
    rng = np.random.default_rng(seed)
    layers = tuple(
        Layer(name=f"L{i}", thickness=float(rng.uniform(2, 20)), vsh=vsh)
        for i, vsh in enumerate([0.1, 0.9, *rng.uniform(0, 0.7, 8)])
    )
    result = study(
        Scenario(
            name="One strand",
            column=Column(layers=layers, top=500),
            throw=Throw(profile=((0, float(rng.uniform(-30, 30))), (90, 35.0))),
            strands=Strands(count=1),
        )
    )
    assert any(pair.connected for pair in result.pairs)
    for pair in result.pairs:
        assert pair.connected == pair.connected_single_plane
        assert pair.bottleneck_area == pair.bottleneck_area_single_plane
        assert pair.change == "same"


def test_warnings_say_which_answer_they_are_about(by_hand: Study) -> None:
    assert by_hand.warnings == ()
    short = study(scenario(below=1.0))
    zone, single = short.warnings
    assert zone.startswith("zone: column too short for this throw: ")
    assert "sands on the hanging wall face of strand 2 face rock outside" in zone
    # hanging wall S2 at 160-180 m; the footwall's column ends at 151 m: 20 of 40 m of sand
    assert single == (
        "single plane: column too short for this throw: 50 % of the hanging wall's sands face "
        "rock outside the column, which is unknown, not a seal"
    )


def test_the_table_of_pairs_names_its_columns_as_the_files_do(by_hand: Study) -> None:
    table = by_hand.pairs_table()
    assert list(table) == [
        "hanging_wall_sand",
        "footwall_sand",
        "connected",
        "connected_single_plane",
        "bottleneck_area",
        "bottleneck_area_single_plane",
        "change",
    ]
    assert len(table) == 4
    assert table["connected"].all()


def test_a_study_says_what_it_found(by_hand: Study) -> None:
    assert repr(by_hand) == "<Study 'By hand': 4 of 4 sand pairs connect across 2 strands>"
