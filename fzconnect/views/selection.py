"""What is chosen, in one form that every picture can mark and the workbench can pass around."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from fzconnect.views.look import area_text

if TYPE_CHECKING:
    from fzconnect.network import Pathway, Study

__all__ = [
    "NOTHING",
    "Edge",
    "Selection",
    "of_edge",
    "of_node",
    "of_pair",
    "of_pathway",
    "renewed",
    "windows_menu",
]

Edge = tuple[str, str]


@dataclass(frozen=True)
class Selection:
    """Parts of the network that are chosen together.

    Attributes
    ----------
    nodes : tuple of str
        Node ids.
    edges : tuple of (str, str)
        Edges of the zone's network, footwall-side node first.
    pair : (str, str) or None
        Hanging-wall sand and footwall sand, where a pair is chosen.
    label : str
        What is chosen, in words.
    plane_edges : tuple of (str, str)
        Edges of the single plane's network.
    """

    nodes: tuple[str, ...] = ()
    edges: tuple[Edge, ...] = ()
    pair: tuple[str, str] | None = None
    label: str = ""
    plane_edges: tuple[Edge, ...] = ()

    def __bool__(self) -> bool:
        return bool(self.nodes or self.edges or self.pair or self.plane_edges)


NOTHING = Selection()
"""Nothing is chosen."""


def of_node(node: str) -> Selection:
    """Return the selection of one sand body in one block."""
    return Selection(nodes=(node,), label=node)


def of_edge(study: Study, edge: Edge) -> Selection:
    """Return the selection of one edge with its two sand bodies."""
    edge = study.network.ordered(edge)
    attributes = study.network.graph.edges[edge]
    kind = "unfaulted contact" if attributes["contact"] == "unfaulted" else "window"
    label = (
        f"{kind} on strand {attributes['strand_name']}: {edge[0]} against {edge[1]}, "
        f"{area_text(attributes['area'])}"
    )
    return Selection(nodes=edge, edges=(edge,), label=label)


def windows_menu(study: Study) -> tuple[list[Edge], list[str]]:
    """Return all edges of the zone, the largest area first, and a short text for each of them."""
    graph, critical = study.network.graph, set(study.network.critical_windows)
    edges = sorted(graph.edges, key=lambda edge: -graph.edges[edge]["area"])
    ordered = [study.network.ordered(edge) for edge in edges]
    labels = []
    for edge in ordered:
        facts = graph.edges[edge]
        lower, upper = (graph.nodes[node]["sand"] for node in edge)
        rank = ", critical" if edge in critical else ""
        kind = "unfaulted, " if facts["contact"] == "unfaulted" else ""
        area = area_text(facts["area"])
        labels.append(f"{facts['strand_name']}: {lower} against {upper}, {kind}{area}{rank}")
    return ordered, labels


def of_pathway(study: Study, pathway: Pathway) -> Selection:
    """Return the selection of a pathway and of the pair that it joins."""
    edges = tuple(study.network.ordered(edge) for edge in pathway.edges)
    pair = tuple(study.network.graph.nodes[pathway.nodes[end]]["sand"] for end in (0, -1))
    label = f"pathway {pathway}, bottleneck {area_text(pathway.bottleneck_area)}"
    return Selection(pathway.nodes, edges, (pair[0], pair[1]), label)


def of_pair(study: Study, hanging_wall_sand: str, footwall_sand: str) -> Selection:
    """Return the selection of a pair: its widest pathway, or its two ends if there is none.

    Raises
    ------
    NetworkError
        If a sand is not in the network.
    """
    ends = study.network.ends(hanging_wall_sand, footwall_sand)
    words = f"{hanging_wall_sand} in the hanging wall, {footwall_sand} in the footwall"
    widest = study.network.widest(hanging_wall_sand, footwall_sand)
    plane = study.single_plane.network
    plane_widest = plane.widest(hanging_wall_sand, footwall_sand)
    plane_edges = tuple(plane.ordered(edge) for edge in plane_widest.edges) if plane_widest else ()
    pair = (hanging_wall_sand, footwall_sand)
    if widest is None:
        outcome = "connected only by the single plane" if plane_widest else "not connected"
        return Selection(ends, (), pair, f"{words}: {outcome}", plane_edges)
    edges = tuple(study.network.ordered(edge) for edge in widest.edges)
    outcome = f"widest pathway, bottleneck {area_text(widest.bottleneck_area)}"
    return Selection(widest.nodes, edges, pair, f"{words}: {outcome}", plane_edges)


def renewed(study: Study, selection: Selection) -> Selection:
    """Return a selection as it stands in a changed study; what is gone is left out."""
    if selection.pair and set(selection.pair) <= set(study.network.sands):
        return of_pair(study, *selection.pair)
    edges = tuple(edge for edge in selection.edges if study.network.graph.has_edge(*edge))
    if len(edges) == 1:
        return of_edge(study, edges[0])
    nodes = tuple(node for node in selection.nodes if node in study.network.graph)
    if not nodes or (selection.edges and not edges):
        return NOTHING
    return Selection(nodes, edges, None, selection.label)
