"""Windows and network as a plain Python and networkx loop: the yardstick of the benchmarks.

The same answers, written as one would write them first: every pair of bodies on every strand and
segment, crossings by hand, areas and heights summed into a networkx graph.
"""

from __future__ import annotations

import networkx as nx
import numpy as np

from fzconnect.geometry import FaultZone

__all__ = ["plain_network"]


def _segment(
    a0: tuple[float, float],
    a1: tuple[float, float],
    b0: tuple[float, float],
    b1: tuple[float, float],
) -> tuple[float, float]:
    """Return area over a unit length and greatest height of the overlap of two bodies."""
    places = [0.0, 1.0]
    for left, right in ((a0[0] - b0[0], a1[0] - b1[0]), (a0[1] - b0[1], a1[1] - b1[1])):
        if left * right < 0.0:
            places.append(left / (left - right))
    places.sort()
    overlaps = []
    for x in places:
        top = max(a0[0] * (1 - x) + a1[0] * x, b0[0] * (1 - x) + b1[0] * x)
        base = min(a0[1] * (1 - x) + a1[1] * x, b0[1] * (1 - x) + b1[1] * x)
        overlaps.append(base - top)
    area = 0.0
    for i in range(len(places) - 1):
        before, now, width = overlaps[i], overlaps[i + 1], places[i + 1] - places[i]
        if before >= 0.0 and now >= 0.0:
            area += 0.5 * (before + now) * width
        elif before > 0.0 or now > 0.0:
            area += 0.5 * max(before, now) ** 2 / abs(before - now) * width
    return area, max(0.0, *overlaps)


def plain_network(zone: FaultZone) -> nx.Graph[str]:
    """Return the network of a zone with the `area` and `max_height` of every edge."""
    graph: nx.Graph[str] = nx.Graph()
    names = zone.block_names
    for block in names:
        graph.add_nodes_from(f"{block}: {body.name}" for body in zone.bodies)
    slope = float(np.sin(np.radians(zone.dip)))
    stations = zone.stations.tolist()
    tops, bases = (depths.tolist() for depths in zone.body_faces())
    for k in range(zone.strand_count):
        for a, lower in enumerate(zone.bodies):
            for b, upper in enumerate(zone.bodies):
                area = height = 0.0
                ta, ba, tb, bb = tops[k][0][a], bases[k][0][a], tops[k][1][b], bases[k][1][b]
                for i in range(len(stations) - 1):
                    part, high = _segment(
                        (ta[i], ba[i]),
                        (ta[i + 1], ba[i + 1]),
                        (tb[i], bb[i]),
                        (tb[i + 1], bb[i + 1]),
                    )
                    area += part * (stations[i + 1] - stations[i])
                    height = max(height, high)
                if height >= 1e-6 and area > 0.0:
                    graph.add_edge(
                        f"{names[k]}: {lower.name}",
                        f"{names[k + 1]}: {upper.name}",
                        area=area / slope,
                        max_height=height,
                    )
    return graph
