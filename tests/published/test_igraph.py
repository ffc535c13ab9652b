"""Questions to the network against igraph, which shares no code with networkx."""

from __future__ import annotations

import json
from itertools import pairwise

import igraph
import networkx as nx
import numpy as np
import pytest

from fzconnect.network.bottleneck import WidestTree
from fzconnect.network.cut import minimum_cut
from fzconnect.network.export import graphml_bytes, node_link_json
from fzconnect.network.graph import FaultNetwork
from fzconnect.network.result import Answer
from tests.zones import random_zone

SEEDS = range(25)


def _network(seed: int) -> FaultNetwork:
    return Answer.from_zone(random_zone(np.random.default_rng(seed))).network


def _igraph(graph: nx.Graph[str]) -> igraph.Graph:
    return igraph.Graph.TupleList(
        [(u, v, area) for u, v, area in graph.edges(data="area")], weights=True
    ) + [node for node in graph if graph.degree(node) == 0]


def _widest_by_threshold(other: igraph.Graph, source: str, target: str) -> float:
    """Return the largest width at which edges no narrower still join two nodes, 0 if none."""
    for width in sorted(set(other.es["weight"]), reverse=True):
        kept = other.subgraph_edges(other.es.select(weight_ge=width), delete_vertices=False)
        pieces = kept.connected_components().membership
        if pieces[kept.vs.find(source).index] == pieces[kept.vs.find(target).index]:
            return width
    return 0.0


@pytest.mark.parametrize("seed", SEEDS)
def test_components_are_those_of_igraph(seed: int) -> None:
    network = _network(seed)
    other = _igraph(network.graph)
    pieces = {
        frozenset(other.vs[index]["name"] for index in piece)
        for piece in other.connected_components()
    }
    ours: dict[int, set[str]] = {}
    for node, number in network.component.items():
        ours.setdefault(number, set()).add(node)
    assert {frozenset(nodes) for nodes in ours.values()} == pieces


@pytest.mark.parametrize("seed", SEEDS)
def test_the_bridges_are_those_of_igraph(seed: int) -> None:
    network = _network(seed)
    other = _igraph(network.graph)
    ends = [other.es[index].tuple for index in other.bridges()]
    assert {frozenset(edge) for edge in network.bridges} == {
        frozenset(other.vs[list(pair)]["name"]) for pair in ends
    }


@pytest.mark.parametrize("seed", SEEDS)
def test_the_widest_pathway_and_its_bottleneck_are_those_of_igraph(seed: int) -> None:
    network = _network(seed)
    other = _igraph(network.graph)
    for hanging in network.sands:
        for footwall in network.sands:
            expected = _widest_by_threshold(other, *network.ends(hanging, footwall))
            assert network.bottleneck(hanging, footwall) == expected
            way = network.widest(hanging, footwall)
            assert (way.bottleneck_area if way else 0.0) == expected


@pytest.mark.parametrize("seed", SEEDS)
def test_minimum_cuts_are_those_of_igraph(seed: int) -> None:
    network = _network(seed)
    other = _igraph(network.graph)
    for hanging in network.sands:
        for footwall in network.sands:
            source, target = network.ends(hanging, footwall)
            value = other.mincut_value(
                other.vs.find(source).index, other.vs.find(target).index, capacity="weight"
            )
            assert network.minimum_cut(hanging, footwall).area == pytest.approx(value, rel=1e-9)
            assert network.cut_areas.get((source, target), 0.0) == pytest.approx(value, rel=1e-9)


@pytest.mark.parametrize("seed", [51, 321, 486, 912, 1377, 1432, 1480, *range(20)])
def test_a_minimum_cut_between_groups_separates_them_and_is_the_least(seed: int) -> None:
    """The first seeds are graphs on which a flow in floats went astray."""
    rng = np.random.default_rng(seed)
    blocks, bodies = rng.integers(2, 6), rng.integers(2, 7)
    graph: nx.Graph[str] = nx.Graph()
    for b in range(blocks):
        graph.add_nodes_from((f"{b}:{a}" for a in range(bodies)), block=b)
    for b in range(blocks - 1):
        for a in range(bodies):
            for c in range(bodies):
                if rng.random() < 0.5:
                    graph.add_edge(f"{b}:{a}", f"{b + 1}:{c}", area=float(10 ** rng.uniform(-3, 4)))
    sources = [f"{blocks - 1}:{a}" for a in range(bodies) if rng.random() < 0.6] or [
        f"{blocks - 1}:0"
    ]
    targets = [f"0:{a}" for a in range(bodies) if rng.random() < 0.6] or ["0:0"]
    cut = minimum_cut(graph, sources, targets)

    no_limit = 1e9
    other = igraph.Graph.TupleList(
        [
            *graph.edges(data="area"),
            *(("source", node, no_limit) for node in sources),
            *((node, "target", no_limit) for node in targets),
        ],
        weights=True,
    )
    ends = other.vs.find("source").index, other.vs.find("target").index
    assert cut.area == pytest.approx(other.mincut_value(*ends, capacity="weight"), rel=1e-6)
    rest = graph.copy()
    rest.remove_edges_from(cut.edges)
    assert not any(nx.has_path(rest, s, t) for s in sources for t in targets)


def _weighted(text: str) -> nx.Graph[str]:
    graph: nx.Graph[str] = nx.Graph()
    for word in text.split():
        weight = float(word[2:])
        graph.add_edge(word[0], word[1], area=weight, less=-weight)
    return graph


G1 = _weighted("AB7 AD5 BC8 BD9 BE7 CE5 DE15 DF6 EF8 EG9 FG11")
G2 = _weighted("ab4 ah8 bc8 bh11 cd7 ci2 cf4 de9 df14 ef10 fg2 gi6 gh1 hi7")


# Graph G1 is a common teaching example of spanning trees (from memory, unseen); the claim that the
# tree holds the extreme paths is in Kleinberg & Tardos, Algorithm Design, exercises of chapter 4.
@pytest.mark.parametrize(("ends", "narrowest"), [("AG", 7), ("AC", 7), ("FG", 11), ("DC", 8)])
def test_widest_paths_of_the_teaching_graph(ends: str, narrowest: float) -> None:
    tree = WidestTree.from_graph(G1)
    assert tree.bottlenecks([ends[0]], [ends[1]]) == {(ends[0], ends[1]): narrowest}
    way = tree.path(*ends)
    assert (way[0], way[-1]) == tuple(ends)
    assert min(G1.edges[edge]["area"] for edge in pairwise(way)) == narrowest


@pytest.mark.parametrize(
    ("ends", "widest"), [("AG", 9), ("AC", 7), ("FG", 9), ("DC", 7), ("AE", 7)]
)
def test_with_weights_turned_round_the_tree_gives_minimax_paths(ends: str, widest: float) -> None:
    tree = WidestTree.from_graph(G1, "less")
    assert sum(size for _, _, size in tree.edges) == -39
    assert tree.bottlenecks([ends[0]], [ends[1]]) == {(ends[0], ends[1]): -widest}


# Cormen et al., Introduction to Algorithms, figure of the minimum spanning tree (graph from
# memory, unseen): weight 37. The minimax values were worked out by enumeration.
@pytest.mark.parametrize(("ends", "widest"), [("ae", 9), ("ai", 8), ("hd", 7), ("bg", 8)])
def test_minimax_paths_of_the_textbook_graph(ends: str, widest: float) -> None:
    tree = WidestTree.from_graph(G2, "less")
    assert sum(size for _, _, size in tree.edges) == -37
    assert tree.bottlenecks([ends[0]], [ends[1]]) == {(ends[0], ends[1]): -widest}


def test_minimum_cut_of_the_maximum_flow_example() -> None:
    """The graph of Cormen et al. chapter 26.1, as printed in the manual of scipy's maximum_flow.

    The published 23 is for one-way edges. Windows let fluid pass both ways, which frees 4-3 and
    3-2: then all 20 of 3-5 and all 4 of 4-5 can be filled (0-1-3: 12, 0-2-3: 8, 0-2-4: 4), so the
    least cut is these two edges, 24.
    """
    graph: nx.Graph[str] = nx.Graph()
    for block, node in enumerate("012345"):
        graph.add_node(node, block=block)
    for u, v, area in [
        ("0", "1", 16.0), ("0", "2", 13.0), ("1", "2", 10.0), ("1", "3", 12.0), ("2", "4", 14.0),
        ("3", "2", 9.0), ("3", "5", 20.0), ("4", "3", 7.0), ("4", "5", 4.0),
    ]:  # fmt: skip
        graph.add_edge(u, v, area=area)
    cut = minimum_cut(graph, ["0"], ["5"])
    assert cut.area == 24.0
    assert cut.edges == (("3", "5"), ("4", "5"))


def test_the_cut_of_a_chain_is_its_narrowest_link() -> None:
    """The second example in the manual of scipy's maximum_flow: 5 then 3 lets 3 through."""
    graph: nx.Graph[str] = nx.Graph()
    for block, node in enumerate("012"):
        graph.add_node(node, block=block)
    graph.add_edge("0", "1", area=5.0)
    graph.add_edge("1", "2", area=3.0)
    cut = minimum_cut(graph, ["0"], ["2"])
    assert cut.area == 3.0
    assert cut.edges == (("1", "2"),)


@pytest.mark.parametrize("seed", range(8))
def test_graphml_read_by_igraph_has_every_attribute(seed: int, tmp_path) -> None:
    graph = _network(seed).graph
    path = tmp_path / "network.graphml"
    path.write_bytes(graphml_bytes(graph))
    other = igraph.Graph.Read_GraphML(str(path))
    assert other["name"] == "test zone"
    assert not other.is_directed()
    nodes = {vertex["id"]: vertex.attributes() for vertex in other.vs}
    assert {node: {"id": node, **values} for node, values in graph.nodes(data=True)} == nodes
    name = other.vs["id"]
    edges = {
        frozenset((name[edge.source], name[edge.target])): edge.attributes() for edge in other.es
    }
    assert {frozenset((u, v)): values for u, v, values in graph.edges(data=True)} == edges


@pytest.mark.parametrize("seed", range(4))
def test_node_link_json_read_by_networkx_is_the_same_graph(seed: int) -> None:
    graph = _network(seed).graph
    again = nx.node_link_graph(json.loads(node_link_json(graph)), edges="edges")
    assert dict(again.nodes(data=True)) == dict(graph.nodes(data=True))
    assert {frozenset(e[:2]): e[2] for e in again.edges(data=True)} == {
        frozenset(e[:2]): e[2] for e in graph.edges(data=True)
    }
    assert again.graph == graph.graph
