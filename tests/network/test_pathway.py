from __future__ import annotations

from collections.abc import Iterator
from itertools import islice, pairwise, product

import networkx as nx
import pytest

from fzconnect.errors import NetworkError
from fzconnect.geometry import FaultZone
from fzconnect.network import FaultNetwork
from fzconnect.network.result import Answer
from tests.network.hand import F1, F2, H1, H2, L1, L2, scenario


@pytest.fixture
def network() -> FaultNetwork:
    return Answer.from_zone(FaultZone.from_scenario(scenario())).network


def test_pathways_come_by_resistance(network: FaultNetwork) -> None:
    """1/2 + 1/8 straight through the lens; 1/8 + 1/8 + 1/2 + 1/8 by way of the footwall's S2."""
    first, second = network.pathways("S1", "S1")
    assert first.nodes == (H1, L1, F1)
    assert first.resistance == pytest.approx(0.625)
    assert first.crossings == 2
    assert first.bottleneck_area == pytest.approx(2.0)
    assert first.bottleneck == (H1, L1)
    assert first.bottleneck_strand == 2
    assert first.edges == ((H1, L1), (L1, F1))
    assert str(first) == "hanging wall: S1 > lens 1: S1 > footwall: S1"
    assert second.nodes == (H1, L2, F2, L1, F1)
    assert second.resistance == pytest.approx(0.875)
    assert second.crossings == 4
    assert second.bottleneck == (F2, L1)
    assert second.bottleneck_strand == 1


def test_pathways_of_the_other_pairs(network: FaultNetwork) -> None:
    ways = {
        (h, f): [(way.nodes, way.resistance) for way in network.pathways(h, f)]
        for h, f in (("S1", "S2"), ("S2", "S2"))
    }
    assert ways["S1", "S2"] == [
        ((H1, L2, F2), pytest.approx(0.25)),
        ((H1, L1, F2), pytest.approx(1.0)),
    ]
    assert ways["S2", "S2"] == [
        ((H2, L2, F2), pytest.approx(0.625)),
        ((H2, L2, H1, L1, F2), pytest.approx(1.625)),
    ]


def test_no_more_pathways_than_the_limit(network: FaultNetwork) -> None:
    assert len(list(network.pathways("S1", "S1", limit=1))) == 1
    assert len(list(network.pathways("S1", "S1", limit=99))) == 2


@pytest.mark.parametrize("limit", [0, -3])
def test_a_limit_under_one_is_refused_when_asked(network: FaultNetwork, limit: int) -> None:
    with pytest.raises(NetworkError, match=f"limit must be at least 1 pathway, got {limit}"):
        network.pathways("S1", "S1", limit=limit)


def _dense(blocks: int, sands: int) -> FaultNetwork:
    """Return a network in which every sand touches every sand of the next block."""
    names = tuple(f"S{i}" for i in range(sands))
    block_names = ["footwall", *(f"lens {j}" for j in range(1, blocks - 1)), "hanging wall"]
    graph: nx.Graph[str] = nx.Graph()
    for number, block in enumerate(block_names):
        for sand in names:
            graph.add_node(f"{block}: {sand}", block=number, block_name=block, sand=sand)
    for strand, (left, right) in enumerate(pairwise(block_names), start=1):
        for i, (a, b) in enumerate(product(names, repeat=2)):
            area = 1.0 + (7 * i + 3 * strand) % 11
            graph.add_edge(
                f"{left}: {a}", f"{right}: {b}", strand=strand, area=area, resistance=1 / area
            )
    return FaultNetwork(graph, names)


def test_pathways_are_found_only_as_they_are_asked_for(monkeypatch: pytest.MonkeyPatch) -> None:
    """Seven blocks of eight sands: 32768 straight pathways and many more; three are asked for."""
    handed = []
    all_of_them = nx.shortest_simple_paths

    def counted(*args: object, **options: object) -> Iterator[list[str]]:
        for nodes in all_of_them(*args, **options):
            handed.append(nodes)
            yield nodes

    monkeypatch.setattr(nx, "shortest_simple_paths", counted)
    ways = _dense(7, 8).pathways("S0", "S0", limit=10**9)
    assert handed == []
    found = list(islice(ways, 3))
    assert len(handed) == 3
    assert [way.resistance for way in found] == sorted(way.resistance for way in found)


def test_all_pathways_of_a_small_network_and_their_order() -> None:
    network = _dense(3, 3)
    source, target = "hanging wall: S1", "footwall: S2"
    expected = {
        tuple(nodes): sum(network.graph.edges[edge]["resistance"] for edge in pairwise(nodes))
        for nodes in nx.all_simple_paths(network.graph, source, target)
    }
    found = list(network.pathways("S1", "S2", limit=10**6))
    assert {way.nodes: way.resistance for way in found} == pytest.approx(expected)
    assert len(found) == len(expected) > 50
    resistances = [way.resistance for way in found]
    assert resistances == pytest.approx(sorted(resistances))
