"""Pathways: ways from a hanging-wall sand to a footwall sand, window by window."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import islice, pairwise
from typing import Self

import networkx as nx

__all__ = ["ARROW", "Pathway", "pathways"]

ARROW = " > "


@dataclass(frozen=True)
class Pathway:
    """One way through the network.

    Attributes
    ----------
    nodes : tuple of str
        Sand bodies passed, hanging wall first.
    resistance : float
        Sum of the edges' resistances, 1/m2.
    bottleneck_area : float
        Smallest edge area on the way, m2.
    bottleneck : (str, str)
        The edge that has it.
    bottleneck_strand : int
        The strand that it lies on.
    """

    nodes: tuple[str, ...]
    resistance: float
    bottleneck_area: float
    bottleneck: tuple[str, str]
    bottleneck_strand: int

    @classmethod
    def along(cls, graph: nx.Graph[str], nodes: Sequence[str]) -> Self:
        """Return the pathway along given nodes of a network."""
        edges = list(pairwise(nodes))
        narrow = min(edges, key=lambda edge: graph.edges[edge]["area"])
        return cls(
            nodes=tuple(nodes),
            resistance=sum(graph.edges[edge]["resistance"] for edge in edges),
            bottleneck_area=graph.edges[narrow]["area"],
            bottleneck=narrow,
            bottleneck_strand=graph.edges[narrow]["strand"],
        )

    @property
    def crossings(self) -> int:
        """How many strands it crosses, counted each time."""
        return len(self.nodes) - 1

    @property
    def edges(self) -> tuple[tuple[str, str], ...]:
        """Pairs of neighbouring nodes along the pathway."""
        return tuple(pairwise(self.nodes))

    def __str__(self) -> str:
        return ARROW.join(self.nodes)


def pathways(graph: nx.Graph[str], source: str, target: str, limit: int) -> Iterator[Pathway]:
    """Yield up to `limit` loopless pathways, least resistance first, as they are asked for.

    Notes
    -----
    Yen's method (Yen 1971, Management Science 17: 712-716) as networkx has it. The caller has
    made sure that the two nodes exist and are connected.
    """
    found = nx.shortest_simple_paths(graph, source, target, weight="resistance")
    for nodes in islice(found, limit):
        yield Pathway.along(graph, nodes)
