"""What holds for the network of every zone."""

from __future__ import annotations

from itertools import pairwise

import networkx as nx
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fzconnect.geometry import FaultZone
from fzconnect.network.result import Answer
from tests.zones import build, zones


@given(zones())
def test_the_bottleneck_is_the_best_over_all_pathways(zone: FaultZone) -> None:
    network = Answer.from_zone(zone).network
    graph = network.graph
    for hanging in network.sands:
        for footwall in network.sands:
            source, target = network.ends(hanging, footwall)
            best = max(
                (
                    min(graph.edges[edge]["area"] for edge in pairwise(nodes))
                    for nodes in nx.all_simple_paths(graph, source, target)
                ),
                default=0.0,
            )
            assert network.bottleneck(hanging, footwall) == best
            assert network.is_connected(hanging, footwall) == (best > 0.0)


@given(zones())
def test_no_edge_of_the_widest_pathway_is_under_its_bottleneck(zone: FaultZone) -> None:
    network = Answer.from_zone(zone).network
    for hanging, footwall in ((h, f) for h in network.sands for f in network.sands):
        way = network.widest(hanging, footwall)
        if way is None:
            assert not network.is_connected(hanging, footwall)
            continue
        assert (way.nodes[0], way.nodes[-1]) == network.ends(hanging, footwall)
        areas = [network.graph.edges[edge]["area"] for edge in way.edges]
        assert min(areas) == way.bottleneck_area == network.bottleneck(hanging, footwall)


@given(zones())
@settings(max_examples=50)
def test_cut_areas_are_the_minimum_cuts_and_these_separate(zone: FaultZone) -> None:
    network = Answer.from_zone(zone).network
    for hanging, footwall in ((h, f) for h in network.sands for f in network.sands):
        ends = network.ends(hanging, footwall)
        cut = network.minimum_cut(hanging, footwall)
        assert network.cut_areas.get(ends, 0.0) == pytest.approx(cut.area)
        assert cut.area >= network.bottleneck(hanging, footwall) * (1 - 1e-12)
        rest = network.graph.copy()
        rest.remove_edges_from(cut.edges)
        assert not nx.has_path(rest, *ends)


@given(zones())
def test_without_one_bridge_some_sand_is_cut_off(zone: FaultZone) -> None:
    graph = Answer.from_zone(zone).network.graph
    pieces = nx.number_connected_components(graph)
    bridges = set(Answer.from_zone(zone).network.bridges)
    for edge in graph.edges:
        rest = graph.copy()
        rest.remove_edge(*edge)
        is_bridge = edge in bridges or edge[::-1] in bridges
        assert (nx.number_connected_components(rest) > pieces) == is_bridge


@given(zones())
def test_a_critical_window_is_one_that_alone_keeps_a_pair_connected(zone: FaultZone) -> None:
    network = Answer.from_zone(zone).network
    expected = set()
    for u, v, windows in network.graph.edges(data="windows"):
        rest = network.graph.copy()
        rest.remove_edge(u, v)
        if windows == 1 and any(not nx.has_path(rest, *pair) for pair in network.bottlenecks):
            expected.add(network.ordered((u, v)))
    assert set(network.critical_windows) == expected


@given(zones(strands=1), st.integers(2, 5), st.data())
def test_one_strand_with_all_the_throw_among_others_with_none_is_the_single_plane(
    zone: FaultZone, count: int, data: st.DataObject
) -> None:
    which = data.draw(st.integers(0, count - 1))
    faces = [zone.faces[0, [0, 0]]] * which + [zone.faces[0]]
    faces += [zone.faces[0, [1, 1]]] * (count - which - 1)
    shares = np.zeros((count, len(zone.stations)))
    shares[which] = 1.0
    several = FaultZone(
        **{
            **vars(zone),
            "faces": np.array(faces),
            "shares": shares,
            "strand_names": tuple(str(k + 1) for k in range(count)),
            "lens_width": np.full(count - 1, 10.0),
        }
    )
    single, among = Answer.from_zone(zone).network, Answer.from_zone(several).network
    assert among.bottlenecks == pytest.approx(single.bottlenecks)


@given(zones())
def test_a_network_has_every_body_in_every_block_and_links_only_neighbours(zone: FaultZone) -> None:
    graph = Answer.from_zone(zone).network.graph
    assert len(graph) == (zone.strand_count + 1) * len(zone.bodies)
    for u, v, strand in graph.edges(data="strand"):
        blocks = sorted((graph.nodes[u]["block"], graph.nodes[v]["block"]))
        assert blocks == [strand - 1, strand]


@given(zones())
def test_areas_of_the_edges_are_those_of_the_windows(zone: FaultZone) -> None:
    answer = Answer.from_zone(zone)
    edges = answer.network.graph.edges(data=True)
    assert sum(data["area"] for *_, data in edges) == pytest.approx(answer.windows.area.sum())
    assert sum(data["windows"] for *_, data in edges) == len(answer.windows)
    unfaulted = answer.windows.area[answer.windows.is_unfaulted].sum()
    assert sum(data["unfaulted_area"] for *_, data in edges) == pytest.approx(unfaulted)


def test_a_zone_whose_throw_is_one_strand_of_two_and_back_is_itself() -> None:
    """Throws +20 and -20 m would sum to none; +30 and -20 m leave 10 m for the single plane."""
    zone = build([100, 15, 100], "MSM", 10, [3.0, -2.0])
    assert Answer.from_zone(zone.single_plane()).network.bottlenecks
    assert not Answer.from_zone(zone).network.bottlenecks
