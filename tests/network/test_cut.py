from __future__ import annotations

import networkx as nx
import pytest

from fzconnect.errors import NetworkError
from fzconnect.geometry import FaultZone
from fzconnect.network import FaultNetwork
from fzconnect.network.cut import whole_capacities
from fzconnect.network.result import Answer
from tests.network.hand import F2, H1, H2, L1, L2, scenario


@pytest.fixture
def network() -> FaultNetwork:
    return Answer.from_zone(FaultZone.from_scenario(scenario())).network


def test_minimum_cuts_by_hand(network: FaultNetwork) -> None:
    """Around L1 the two links of 2 are less than its link of 8; H2 hangs on one link of 2."""
    cut = network.minimum_cut("S1", "S1")
    assert cut.area == pytest.approx(4.0)
    assert cut.edges == ((F2, L1), (L1, H1))
    cut = network.minimum_cut("S2", "S1")
    assert cut.area == pytest.approx(2.0)
    assert len(cut.edges) == 1
    assert network.minimum_cut("S1", "S2").area == pytest.approx(10.0)
    assert network.minimum_cut("S2", "S2").edges == ((L2, H2),)


def test_a_minimum_cut_between_both_walls(network: FaultNetwork) -> None:
    """Strand 1 in all is 18, strand 2 12; across the lens, by F2-L2 and L1-H1, 8 + 2 = 10."""
    cut = network.minimum_cut(["S1", "S2"], ["S1", "S2"])
    assert cut.area == pytest.approx(10.0)
    assert cut.edges == ((F2, L2), (L1, H1))


def test_cut_areas_are_the_minimum_cuts_of_all_pairs(network: FaultNetwork) -> None:
    assert network.cut_areas == pytest.approx(
        {
            network.ends(h, f): network.minimum_cut(h, f).area
            for h in network.sands
            for f in network.sands
        }
    )


@pytest.mark.parametrize(("hanging", "footwall"), [([], ["S1"]), (["S1"], []), ([], [])])
def test_a_cut_needs_a_sand_on_each_side(
    network: FaultNetwork, hanging: list[str], footwall: list[str]
) -> None:
    with pytest.raises(NetworkError, match="needs at least one sand on each side"):
        network.minimum_cut(hanging, footwall)


def test_whole_capacities_lose_nothing() -> None:
    graph: nx.Graph[str] = nx.Graph()
    areas = [0.1, 1e-9, 123456.789, 3.0]
    for i, area in enumerate(areas):
        graph.add_edge(str(i), str(i + 1), area=area)
    whole, power = whole_capacities(graph)
    capacities = [capacity for *_, capacity in whole.edges(data="capacity")]
    assert {type(capacity) for capacity in capacities} == {int}
    assert [capacity * 2.0**-power for capacity in capacities] == areas
