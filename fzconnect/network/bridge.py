"""Bridges: edges without which the network falls into more pieces."""

from __future__ import annotations

from collections.abc import Collection, Iterable

import networkx as nx

__all__ = ["parting_bridges"]


def parting_bridges(
    graph: nx.Graph[str],
    bridges: Iterable[tuple[str, str]],
    sources: Collection[str],
    targets: Collection[str],
) -> list[tuple[str, str]]:
    """Return those bridges without which some source no longer reaches some target.

    Notes
    -----
    Other bridges lead to dead ends. A bridge is an edge of every spanning tree, so what lies on
    its far side is what hangs below it in a depth-first tree; time is linear in the edges.
    """
    parent: dict[str, str] = {}
    below = {node: [int(node in sources), int(node in targets)] for node in graph}
    tree = list(nx.dfs_edges(graph))
    for upper, lower in reversed(tree):
        parent[lower] = upper
        below[upper][0] += below[lower][0]
        below[upper][1] += below[lower][1]
    root: dict[str, str] = {}
    for upper, lower in tree:
        root[lower] = root.get(upper, upper)
    found: list[tuple[str, str]] = []
    for u, v in bridges:
        lower = v if parent.get(v) == u else u
        here, everywhere = below[lower], below[root[lower]]
        there = everywhere[0] - here[0], everywhere[1] - here[1]
        if here[0] * there[1] or here[1] * there[0]:
            found.append((u, v))
    return found
