from __future__ import annotations

import numpy as np
import pytest

from fzconnect.errors import ScenarioError
from fzconnect.geometry import FaultZone
from fzconnect.scenario import Column, Cutoff, Layer, Scenario, Strands, StrandShare, Throw
from tests.zones import build, random_zone

LAYERS = (
    Layer(name="S1", thickness=10, vsh=0.1, permeability=100, porosity=0.2),
    Layer(name="M1", thickness=30, vsh=0.7),
    Layer(name="S2", thickness=20, vsh=0.2, permeability=400, porosity=0.3),
)
GROWN = (
    Layer(name="S1", thickness=14, vsh=0.3, permeability=200),
    Layer(name="M1", thickness=36, vsh=0.9),
    Layer(name="S2", thickness=20, vsh=0.2, permeability=400),
)


def _scenario(
    throw: Throw, strands: Strands | None = None, *, grown: bool = False, top: float | None = 1000
) -> Scenario:
    column = Column(layers=LAYERS, hanging_wall=GROWN if grown else None, top=top)
    return Scenario(name="Test", column=column, throw=throw, strands=strands or Strands(count=1))


def test_a_total_throw_is_one_section_with_two_stations() -> None:
    zone = FaultZone.from_scenario(_scenario(Throw(total=25, length=40)))
    assert zone.stations.tolist() == [0.0, 40.0]
    assert zone.footwall.T.tolist() == [[1000, 1010, 1040, 1060]] * 2
    assert zone.hanging_wall.T.tolist() == [[1025, 1035, 1065, 1085]] * 2
    assert zone.length == 40.0
    assert zone.throw.tolist() == [25.0, 25.0]
    assert zone.block_names == ("footwall", "hanging wall")
    assert zone.layer_names == ("S1", "M1", "S2")
    assert [body.name for body in zone.bodies] == ["S1", "S2"]
    assert zone.strand_names == ("1",)


def test_a_lens_has_its_tops_between_the_walls_by_the_shares_before_it() -> None:
    """Z_F + F_j (Z_H - Z_F) for each boundary; the hanging wall has grown by 4 and then 6 m more.

    Throws of the boundaries: 20, 24, 30, 30 m. F_1 = 0.25, F_2 = 0.75.
    """
    strands = Strands(count=3, split=(0.25, 0.5, 0.25), lens_width=(15, 25), dip=60)
    zone = FaultZone.from_scenario(_scenario(Throw(total=20), strands, grown=True))
    assert zone.block_boundaries(0)[:, 0] == pytest.approx([1000, 1010, 1040, 1060])
    assert zone.block_boundaries(1)[:, 0] == pytest.approx([1005, 1016, 1047.5, 1067.5])
    assert zone.block_boundaries(2)[:, 0] == pytest.approx([1015, 1028, 1062.5, 1082.5])
    assert zone.block_boundaries(3)[:, 0] == pytest.approx([1020, 1034, 1070, 1090])
    assert zone.block_names == ("footwall", "lens 1", "lens 2", "hanging wall")
    assert zone.strand_throw[:, 0] == pytest.approx([5, 10, 5])
    assert zone.faces[1, 0] == pytest.approx(zone.block_boundaries(1))
    assert zone.faces[1, 1] == pytest.approx(zone.block_boundaries(2))
    assert zone.lens_width.tolist() == [15, 25]
    assert zone.dip == 60


def test_a_tilted_lens_is_given_by_the_mean_of_its_faces() -> None:
    zone = build([10, 20], "SM", 20, [0.5, 0.5])
    faces = zone.faces.copy()
    faces[0, 1] += 1.0
    faces[1, 0] -= 3.0
    tilted = FaultZone(**{**vars(zone), "faces": faces})
    assert tilted.block_boundaries(1) == pytest.approx(zone.block_boundaries(1) - 1.0)


def test_a_throw_profile_gives_the_stations() -> None:
    profile = ((100.0, 0.0), (300.0, 30.0), (900.0, 12.0))
    zone = FaultZone.from_scenario(_scenario(Throw(profile=profile)))
    assert zone.stations.tolist() == [100, 300, 900]
    assert zone.throw == pytest.approx([0, 30, 12])
    assert zone.footwall[0].tolist() == [1000, 1000, 1000]


def test_cutoffs_give_the_depth_of_the_top_on_both_sides() -> None:
    cutoffs = (
        Cutoff(distance=0, footwall=1000, hanging_wall=1020),
        Cutoff(distance=500, footwall=1100, hanging_wall=1090),
    )
    zone = FaultZone.from_scenario(_scenario(Throw(cutoffs=cutoffs), top=None))
    assert zone.footwall[0] == pytest.approx([1000, 1100])
    assert zone.footwall[-1] == pytest.approx([1060, 1160])
    assert zone.hanging_wall[0] == pytest.approx([1020, 1090])
    assert zone.throw == pytest.approx([20, -10]), "a reverse throw is negative"


def test_shares_along_the_fault_bring_their_own_stations() -> None:
    """A to 1 at 0 and 0 at 400 m, B the other way round, beyond the throw's own two distances."""
    shares = (
        StrandShare(name="A", points=((0, 1.0), (400, 0.0))),
        StrandShare(name="B", points=((0, 0.0), (400, 1.0))),
    )
    strands = Strands(count=2, shares=shares)
    zone = FaultZone.from_scenario(_scenario(Throw(profile=((0, 10), (1000, 40))), strands))
    assert {0.0, 400.0, 1000.0} <= set(zone.stations.tolist())
    assert np.diff(zone.stations).max() <= 1000 / 50 + 1e-9
    assert zone.strand_names == ("A", "B")
    assert zone.shares.sum(axis=0) == pytest.approx(np.ones(len(zone.stations)))
    at = np.searchsorted(zone.stations, 100.0)
    assert zone.stations[at] == pytest.approx(100.0)
    assert zone.strand_throw[:, at] == pytest.approx([0.75 * 13, 0.25 * 13])
    assert zone.strand_throw[:, -1] == pytest.approx([0, 40])


def test_share_points_off_the_fault_add_no_station() -> None:
    shares = (
        StrandShare(name="A", points=((-500, 1.0), (50, 0.5), (2000, 1.0))),
        StrandShare(name="B", points=((0, 1.0),)),
    )
    strands = Strands(count=2, shares=shares)
    zone = FaultZone.from_scenario(_scenario(Throw(profile=((0, 10), (100, 40))), strands))
    assert (zone.stations[0], zone.stations[-1]) == (0.0, 100.0)
    assert 50.0 in zone.stations
    assert (np.diff(zone.stations) > 0).all()


@pytest.mark.parametrize("seed", range(5))
def test_the_single_plane_takes_the_whole_throw(seed: int) -> None:
    zone = random_zone(np.random.default_rng(seed))
    single = zone.single_plane()
    assert single.strand_count == 1
    assert single.block_names == ("footwall", "hanging wall")
    assert single.faces[0, 0] == pytest.approx(zone.footwall)
    assert single.faces[0, 1] == pytest.approx(zone.hanging_wall)
    assert single.strand_throw[0] == pytest.approx(zone.throw)
    assert single.lens_width.size == 0
    assert single.dip == zone.dip


def test_faces_from_a_scenario_are_those_of_the_definition() -> None:
    strands = Strands(count=3, split=(0.9, -0.2, 0.3), lens_width=(5, 5))
    zone = FaultZone.from_scenario(_scenario(Throw(profile=((0, 10), (70, -25))), strands))
    expected = build(
        [10, 30, 20], "SMS", [10, -25], [0.9, -0.2, 0.3], stations=[0, 70], names=["S1", "M1", "S2"]
    )
    assert zone.faces == pytest.approx(expected.faces)
    assert zone.bodies == expected.bodies


def test_a_property_of_a_lens_lies_between_the_columns_by_its_part_of_the_throw() -> None:
    strands = Strands(count=2, split=(0.25, 0.75), lens_width=(5,))
    zone = FaultZone.from_scenario(_scenario(Throw(total=20), strands, grown=True))
    assert zone.across(zone.vsh, 0) == pytest.approx([0.1, 0.7, 0.2])
    assert zone.across(zone.vsh, 1) == pytest.approx([0.15, 0.75, 0.2])
    assert zone.across(zone.vsh, 2) == pytest.approx([0.3, 0.9, 0.2])


def test_what_a_layer_lacks_is_nan_and_what_all_lack_is_none() -> None:
    zone = FaultZone.from_scenario(_scenario(Throw(total=20)))
    assert zone.permeability is not None
    assert zone.permeability[0].tolist() == pytest.approx([100, np.nan, 400], nan_ok=True)
    assert build([10, 20], "SM", 5).permeability is None


def test_the_arrays_of_a_zone_cannot_be_changed() -> None:
    zone = FaultZone.from_scenario(_scenario(Throw(total=20)))
    with pytest.raises(ValueError, match="read-only"):
        zone.stations[0] = 5.0
    with pytest.raises(ValueError, match="read-only"):
        zone.faces[0, 0, 0, 0] = 5.0


def test_a_zone_says_what_it_holds() -> None:
    zone = FaultZone.from_scenario(_scenario(Throw(total=20, length=40)))
    assert repr(zone) == (
        "<FaultZone 'Test': 1 strands, 3 layers, 2 sand bodies, 2 stations over 40 m>"
    )


def test_growth_carried_beyond_the_walls_until_a_layer_vanishes_is_refused() -> None:
    """S1 grows from 10 to 14 m, so where F_1 is -2.5 it is 10 - 2.5 x 4 = 0 m thick."""
    strands = Strands(count=2, split=(-2.5, 3.5), lens_width=(5,))
    scenario = _scenario(Throw(total=5), strands, grown=True)
    with pytest.raises(
        ScenarioError,
        match=r'layer "S1" would be 0 m thick on the hanging-wall side of strand 1 at distance 0 m',
    ):
        FaultZone.from_scenario(scenario)
    almost = Strands(count=2, split=(-2.4, 3.4), lens_width=(5,))
    zone = FaultZone.from_scenario(_scenario(Throw(total=5), almost, grown=True))
    assert np.diff(zone.block_boundaries(1)[:, 0])[0] == pytest.approx(0.4)
