"""The network: sand bodies of every block as nodes, the windows between them as edges."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any, Self

import networkx as nx
import numpy as np

from fzconnect.errors import NetworkError, nearest
from fzconnect.network.bottleneck import WidestTree
from fzconnect.network.bridge import parting_bridges
from fzconnect.network.cut import Cut, minimum_cut, whole_capacities
from fzconnect.network.pathway import Pathway, pathways

if TYPE_CHECKING:
    import pandas as pd

    from fzconnect.geometry import FaultZone, Windows

__all__ = ["FOOTWALL", "HANGING_WALL", "FaultNetwork", "node_id"]

FOOTWALL = "footwall"
HANGING_WALL = "hanging wall"


def node_id(block_name: str, sand: str) -> str:
    """Return the id of a node, for example "lens 1: S2 to S3"."""
    return f"{block_name}: {sand}"


@dataclass(frozen=True, eq=False, repr=False)
class FaultNetwork:
    """Sand bodies of every block, linked across each strand by their windows.

    Attributes
    ----------
    graph : networkx.Graph
        Node ids are text, "block: sand". Attributes are plain Python numbers and text, so that
        GraphML and JSON carry them to any other program.
    sands : tuple of str
        Names of the sand bodies, top to base.

    Notes
    -----
    Node attributes: `block` (0..N from the footwall), `block_name`, `sand`, `thickness` (m, mean
    along the fault), `mean_vsh`, `crest_depth` and `base_depth` (m, shallowest and deepest
    point), and, where every layer of the body has it, `permeability` (mD, along the bedding).

    Edge attributes: `strand` (1..N), `strand_name`, `windows` (how many), `area` and its parts
    `faulted_area` and `unfaulted_area` (m2), `max_height`, `top`, `base`, `distance_from`,
    `distance_to` (m), `contact` ("faulted", "unfaulted" or "both") and `resistance` (1/m2: the
    inverse of the area, by which pathways are ranked as long as no fault rock is on the windows).
    """

    graph: nx.Graph[str]
    sands: tuple[str, ...]

    @classmethod
    def from_windows(cls, zone: FaultZone, windows: Windows) -> Self:
        """Return the network of a fault zone and its windows."""
        graph: nx.Graph[str] = nx.Graph(name=zone.name)
        graph.add_nodes_from(_nodes(zone))
        graph.add_edges_from(_edges(zone, windows))
        return cls(graph, tuple(body.name for body in zone.bodies))

    def node(self, block_name: str, sand: str) -> str:
        """Return the id of a sand body in a block.

        Raises
        ------
        NetworkError
            If the block or the sand is not in the network.
        """
        name = node_id(block_name, sand)
        if name not in self.graph:
            if sand not in self.sands:
                msg = (
                    f'no sand body is called "{sand}"{nearest(sand, self.sands)} '
                    f"(there are: {', '.join(self.sands)})"
                )
            else:
                blocks = list(dict.fromkeys(self.graph.nodes[n]["block_name"] for n in self.graph))
                msg = f'no block is called "{block_name}" (there are: {", ".join(blocks)})'
            raise NetworkError(msg)
        return name

    def ends(self, hanging_wall_sand: str, footwall_sand: str) -> tuple[str, str]:
        """Return the ids of a sand in the hanging wall and of one in the footwall."""
        return self.node(HANGING_WALL, hanging_wall_sand), self.node(FOOTWALL, footwall_sand)

    @cached_property
    def component(self) -> dict[str, int]:
        """Number of the connected component of every node."""
        return {
            node: number
            for number, nodes in enumerate(nx.connected_components(self.graph))
            for node in nodes
        }

    @cached_property
    def bridges(self) -> tuple[tuple[str, str], ...]:
        """Edges without which the network falls into more pieces, footwall side first."""
        return tuple(self.ordered((edge[0], edge[1])) for edge in nx.bridges(self.graph))

    @cached_property
    def critical_windows(self) -> tuple[tuple[str, str], ...]:
        """Single windows that alone keep a hanging-wall sand and a footwall sand connected.

        Bridges to dead ends are not among them, nor bridges of several windows.
        """
        parting = parting_bridges(self.graph, self.bridges, *self.outer_nodes)
        return tuple(edge for edge in parting if self.graph.edges[edge]["windows"] == 1)

    @cached_property
    def widest_tree(self) -> WidestTree:
        """The maximum spanning tree by window area, which holds every widest pathway."""
        return WidestTree.from_graph(self.graph)

    @cached_property
    def bottlenecks(self) -> dict[tuple[str, str], float]:
        """Bottleneck area, m2, of every connected (hanging-wall node, footwall node)."""
        return self.widest_tree.bottlenecks(*self.outer_nodes)

    @cached_property
    def cut_areas(self) -> dict[tuple[str, str], float]:
        """Minimum-cut area, m2, of every connected (hanging-wall node, footwall node).

        Notes
        -----
        From the tree of Gomory & Hu (1961): as many maximum flows as there are sand bodies in a
        piece serve every pair in it, and the least edge between two nodes is their minimum cut.
        """
        whole, power = whole_capacities(self.graph)
        trees = [
            nx.gomory_hu_tree(whole.subgraph(nodes))
            for nodes in nx.connected_components(whole)
            if len(nodes) > 1
        ]
        forest: nx.Graph[str] = nx.compose_all(trees) if trees else nx.Graph()
        cuts = WidestTree.from_graph(forest, "weight").bottlenecks(*self.outer_nodes)
        return {ends: math.ldexp(cut, -power) for ends, cut in cuts.items()}

    @property
    def outer_nodes(self) -> tuple[frozenset[str], frozenset[str]]:
        """Nodes of the hanging wall and nodes of the footwall."""
        return (
            frozenset(node_id(HANGING_WALL, sand) for sand in self.sands),
            frozenset(node_id(FOOTWALL, sand) for sand in self.sands),
        )

    def is_connected(self, hanging_wall_sand: str, footwall_sand: str) -> bool:
        """Tell whether a hanging-wall sand reaches a footwall sand."""
        source, target = self.ends(hanging_wall_sand, footwall_sand)
        return self.component[source] == self.component[target]

    def bottleneck(self, hanging_wall_sand: str, footwall_sand: str) -> float:
        """Return the least area, m2, shared by two sand bodies on the widest pathway; 0 if none."""
        return self.bottlenecks.get(self.ends(hanging_wall_sand, footwall_sand), 0.0)

    def widest(self, hanging_wall_sand: str, footwall_sand: str) -> Pathway | None:
        """Return the pathway whose bottleneck is as wide as can be, None if there is none."""
        nodes = self.widest_tree.path(*self.ends(hanging_wall_sand, footwall_sand))
        return Pathway.along(self.graph, nodes) if nodes else None

    def pathways(
        self, hanging_wall_sand: str, footwall_sand: str, *, limit: int = 10
    ) -> Iterator[Pathway]:
        """Return an iterator over pathways, least resistance first; they are found as asked for.

        Parameters
        ----------
        hanging_wall_sand, footwall_sand : str
        limit : int, at least 1
            How many pathways at most.

        Raises
        ------
        NetworkError
            At once, if a sand is not in the network or the limit is under 1.
        """
        source, target = self.ends(hanging_wall_sand, footwall_sand)
        if limit < 1:
            msg = f"limit must be at least 1 pathway, got {limit}"
            raise NetworkError(msg)
        if self.component[source] != self.component[target]:
            return iter(())
        return pathways(self.graph, source, target, limit)

    def minimum_cut(
        self, hanging_wall_sands: str | Iterable[str], footwall_sands: str | Iterable[str]
    ) -> Cut:
        """Return the windows of least total area that separate chosen sands.

        Parameters
        ----------
        hanging_wall_sands, footwall_sands : str or iterable of str
            One sand body or several on each side.

        Raises
        ------
        NetworkError
            If a sand is not in the network, or a side is empty.
        """
        sources = [self.node(HANGING_WALL, sand) for sand in _listed(hanging_wall_sands)]
        targets = [self.node(FOOTWALL, sand) for sand in _listed(footwall_sands)]
        if not sources or not targets:
            msg = "a minimum cut needs at least one sand on each side of the fault"
            raise NetworkError(msg)
        return minimum_cut(self.graph, sources, targets)

    def links_table(self) -> pd.DataFrame:
        """Return the links as a table, one row an edge; lengths in m, areas in m2."""
        import pandas as pd

        rows = [
            {"footwall_side": first, "hanging_wall_side": second, **self.graph.edges[first, second]}
            for first, second in map(self.ordered, self.graph.edges)
        ]
        return pd.DataFrame(rows)

    def _repr_html_(self) -> str:
        return str(self.links_table().to_html(index=False, float_format=lambda v: f"{v:.6g}"))

    def ordered(self, edge: tuple[str, str]) -> tuple[str, str]:
        """Return an edge with its footwall-side node first."""
        first, second = edge
        blocks = self.graph.nodes
        return edge if blocks[first]["block"] < blocks[second]["block"] else (second, first)

    def __repr__(self) -> str:
        graph = self.graph
        return f"<FaultNetwork: {len(graph)} sand bodies, {graph.number_of_edges()} links>"


def _listed(sands: str | Iterable[str]) -> list[str]:
    return [sands] if isinstance(sands, str) else list(sands)


def _contact(faulted: float, unfaulted: float) -> str:
    """Return in words what kind of contact an edge is, from its two areas, m2."""
    if faulted and unfaulted:
        return "both"
    return "faulted" if faulted else "unfaulted"


def _nodes(zone: FaultZone) -> Iterator[tuple[str, dict[str, Any]]]:
    """Yield every sand body of every block with its attributes."""
    length = zone.length
    first = [body.first for body in zone.bodies]
    past = [body.last + 1 for body in zone.bodies]
    for block, block_name in enumerate(zone.block_names):
        depth = zone.block_boundaries(block)
        area = np.asarray(np.trapezoid(np.diff(depth, axis=0), zone.stations, axis=1))
        mean = area / length
        vsh = zone.across(zone.vsh, block)
        permeability = None
        if zone.permeability is not None:
            permeability = zone.across(zone.permeability, block)
        crest, deepest = depth[first].min(axis=1), depth[past].max(axis=1)
        for number, body in enumerate(zone.bodies):
            layers = slice(body.first, body.last + 1)
            weight = mean[layers]
            attributes: dict[str, Any] = {
                "block": block,
                "block_name": block_name,
                "sand": body.name,
                "thickness": float(weight.sum()),
                "mean_vsh": float(weight @ vsh[layers] / weight.sum()),
                "crest_depth": float(crest[number]),
                "base_depth": float(deepest[number]),
            }
            if permeability is not None and not np.isnan(permeability[layers]).any():
                attributes["permeability"] = float(weight @ permeability[layers] / weight.sum())
            yield node_id(block_name, body.name), attributes


def _edges(zone: FaultZone, windows: Windows) -> Iterator[tuple[str, str, dict[str, Any]]]:
    """Yield one edge for each strand and pair of sand bodies that share windows.

    Windows come ordered by strand and bodies, so those of one edge are neighbours.
    """
    if not len(windows):
        return
    names, blocks = [body.name for body in zone.bodies], zone.block_names
    key = np.stack([windows.strand, windows.footwall_body, windows.hanging_wall_body])
    start = np.flatnonzero(np.r_[True, (np.diff(key) != 0).any(axis=0)])
    faulted = np.add.reduceat(np.where(windows.is_unfaulted, 0.0, windows.area), start).tolist()
    unfaulted = np.add.reduceat(np.where(windows.is_unfaulted, windows.area, 0.0), start).tolist()
    height = np.maximum.reduceat(windows.max_height, start).tolist()
    top = np.minimum.reduceat(windows.top, start).tolist()
    base = np.maximum.reduceat(windows.base, start).tolist()
    distance_from = np.minimum.reduceat(windows.distance_from, start).tolist()
    distance_to = np.maximum.reduceat(windows.distance_to, start).tolist()
    count = np.diff(np.r_[start, len(windows)]).tolist()
    for i, (strand, a, b) in enumerate(key[:, start].T.tolist()):
        area = faulted[i] + unfaulted[i]
        yield (
            node_id(blocks[strand - 1], names[a]),
            node_id(blocks[strand], names[b]),
            {
                "strand": strand,
                "strand_name": zone.strand_names[strand - 1],
                "windows": count[i],
                "area": area,
                "faulted_area": faulted[i],
                "unfaulted_area": unfaulted[i],
                "max_height": height[i],
                "top": top[i],
                "base": base[i],
                "distance_from": distance_from[i],
                "distance_to": distance_to[i],
                "contact": _contact(faulted[i], unfaulted[i]),
                "resistance": 1.0 / area,
            },
        )
