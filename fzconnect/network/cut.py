"""Minimum cuts: the windows of least total area that hold chosen sands together."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import networkx as nx

__all__ = ["Cut", "minimum_cut", "whole_capacities"]

_SOURCE, _TARGET = "\0source", "\0target"  # cannot clash: names hold no control characters


@dataclass(frozen=True)
class Cut:
    """Edges that separate chosen sands if all of them are closed.

    Attributes
    ----------
    area : float
        Total area, m2; 0 if the sands are not connected in the first place.
    edges : tuple of (str, str)
        The edges cut, footwall side first.
    """

    area: float
    edges: tuple[tuple[str, str], ...]


def minimum_cut(graph: nx.Graph[str], sources: Sequence[str], targets: Sequence[str]) -> Cut:
    """Return a cut of least area between two groups of nodes.

    Notes
    -----
    By the maximum flow with areas as capacities (Ford & Fulkerson 1956); groups are joined to one
    end each by edges without a limit.
    """
    capacities, _ = whole_capacities(graph)
    # networkx reads an edge without capacity as one without a limit
    capacities.add_edges_from((_SOURCE, node) for node in sources)
    capacities.add_edges_from((node, _TARGET) for node in targets)
    _, (near, _far) = nx.minimum_cut(capacities, _SOURCE, _TARGET)
    block = graph.nodes
    edges = sorted(
        (u, v) if block[u]["block"] < block[v]["block"] else (v, u)
        for u, v in graph.edges
        if (u in near) != (v in near)
    )
    return Cut(float(sum(graph.edges[edge]["area"] for edge in edges)), tuple(edges))


def whole_capacities(graph: nx.Graph[str]) -> tuple[nx.Graph[str], int]:
    """Return the graph with areas as whole `capacity`, and the power of two of their scale.

    Notes
    -----
    Flow methods of networkx tell a saturated edge by `flow == capacity`, which rounding of floats
    breaks: the edges that they then name need not be a least cut, or any cut. The smallest area
    sets the power, so that every area becomes a whole number without loss.
    """
    areas = [float(attributes["area"]) for _, _, attributes in graph.edges(data=True)]
    power = 53 - math.frexp(min(areas, default=1.0))[1]
    whole: nx.Graph[str] = nx.Graph()
    whole.add_nodes_from(graph)
    whole.add_edges_from(
        (u, v, {"capacity": int(math.ldexp(area, power))})
        for (u, v), area in zip(graph.edges, areas, strict=True)
    )
    return whole, power
