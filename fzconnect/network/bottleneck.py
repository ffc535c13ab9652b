"""Widest pathways: the maximum spanning forest by window area."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from functools import cached_property
from typing import Self

import networkx as nx

__all__ = ["WidestTree"]


@dataclass(frozen=True, eq=False)
class WidestTree:
    """A spanning forest that holds, between any two nodes, a pathway as wide as any.

    Attributes
    ----------
    edges : tuple of (str, str, float)
        The forest's edges, widest first, each with its width.

    Notes
    -----
    The path between two nodes of a maximum spanning tree maximises the least edge on the way
    (the cycle property of spanning trees; Kleinberg & Tardos, Algorithm Design, chapter 4).
    """

    edges: tuple[tuple[str, str, float], ...]

    @classmethod
    def from_graph(cls, graph: nx.Graph[str], width: str = "area") -> Self:
        """Return the widest forest of a network by an edge attribute, with Kruskal's method."""
        sets: nx.utils.UnionFind[str] = nx.utils.UnionFind()
        kept = []
        edges = [(u, v, float(data[width])) for u, v, data in graph.edges(data=True)]
        # names break ties, so that the forest does not hang on the order of insertion
        for u, v, size in sorted(edges, key=lambda edge: (-edge[2], edge[0], edge[1])):
            if sets[u] != sets[v]:
                sets.union(u, v)
                kept.append((u, v, size))
        return cls(tuple(kept))

    @cached_property
    def _tree(self) -> nx.Graph[str]:
        tree: nx.Graph[str] = nx.Graph()
        tree.add_edges_from((u, v) for u, v, _ in self.edges)
        return tree

    def path(self, source: str, target: str) -> list[str]:
        """Return the nodes of the widest pathway, an empty list if the two are not connected."""
        tree = self._tree
        if source not in tree or target not in tree or not nx.has_path(tree, source, target):
            return []
        return list(nx.shortest_path(tree, source, target))

    def bottlenecks(
        self, sources: Collection[str], targets: Collection[str]
    ) -> dict[tuple[str, str], float]:
        """Return the bottleneck width of every source and target that are connected.

        Notes
        -----
        Edges come widest first, so the edge that brings two nodes into one piece for the first
        time is the narrowest on their widest pathway. Each pair is touched once.
        """
        piece: dict[str, tuple[list[str], list[str], list[str]]] = {}
        found: dict[tuple[str, str], float] = {}
        for u, v, size in self.edges:
            first = piece.get(u) or _alone(u, sources, targets)
            second = piece.get(v) or _alone(v, sources, targets)
            if len(first[0]) < len(second[0]):
                first, second = second, first
            for s in first[1]:
                found.update(((s, t), size) for t in second[2])
            for s in second[1]:
                found.update(((s, t), size) for t in first[2])
            for mine, other in zip(first, second, strict=True):
                mine.extend(other)
            piece.update(dict.fromkeys((u, v, *second[0]), first))
        return found


def _alone(
    node: str, sources: Collection[str], targets: Collection[str]
) -> tuple[list[str], list[str], list[str]]:
    """Return a piece of one node: its nodes, its sources and its targets."""
    return [node], [node] if node in sources else [], [node] if node in targets else []
