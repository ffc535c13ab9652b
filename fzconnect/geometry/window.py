"""Windows: where a sand body on one face of a strand meets one on the other face."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fzconnect.geometry.kernel import COLUMNS, LEAST_OVERLAP, trace_windows

if TYPE_CHECKING:
    import pandas as pd

    from fzconnect.geometry.zone import FaultZone

__all__ = ["Windows", "find_windows"]

Array = NDArray[np.float64]
Index = NDArray[np.int64]


@dataclass(frozen=True, eq=False, repr=False)
class Windows:
    """The windows of a fault zone as a structure of arrays, one entry a window.

    Attributes
    ----------
    zone : FaultZone
    strand : (W,) int array
        Strand 1..N, counted from the footwall.
    footwall_body, hanging_wall_body : (W,) int arrays
        Index of the sand body on the footwall side and on the hanging-wall side of the strand.
    is_unfaulted : (W,) bool array
        True for an unfaulted contact: a body that meets itself where the strand has no throw.
    distance_from, distance_to : (W,) arrays, m along the fault
    top, base : (W,) arrays
        Shallowest and deepest point, m.
    max_height : (W,) array
        Largest overlap, m, measured down the depth axis.
    area : (W,) array
        Area on the strand's surface, m2: integral of overlap ds / sin(dip).
    """

    zone: FaultZone
    strand: Index
    footwall_body: Index
    hanging_wall_body: Index
    is_unfaulted: NDArray[np.bool_]
    distance_from: Array
    distance_to: Array
    top: Array
    base: Array
    max_height: Array
    area: Array
    _first_vertex: Index
    _end_vertex: Index
    _vertices: Array

    def __len__(self) -> int:
        return len(self.strand)

    def __repr__(self) -> str:
        strands = self.zone.strand_count
        return f"<Windows: {len(self)} on {strands} strands, {self.area.sum():.6g} m2>"

    def footwall_sand(self, window: int) -> str:
        """Return the name of the sand body on the footwall side of a window."""
        return self.zone.bodies[int(self.footwall_body[window])].name

    def hanging_wall_sand(self, window: int) -> str:
        """Return the name of the sand body on the hanging-wall side of a window."""
        return self.zone.bodies[int(self.hanging_wall_body[window])].name

    def corners(self, window: int) -> tuple[Array, Array, Array]:
        """Return distance, upper depth and lower depth, m, at the corners of a window."""
        part = self._vertices[self._first_vertex[window] : self._end_vertex[window]]
        return part[:, 0], part[:, 1], part[:, 2]

    def outline(self, window: int) -> tuple[Array, Array]:
        """Return distance and depth, m, around a window: along its top, back along its base."""
        distance, upper, lower = self.corners(window)
        return np.concatenate([distance, distance[::-1]]), np.concatenate([upper, lower[::-1]])

    def cut(self, distance: float) -> list[tuple[int, float, float]]:
        """Return (window, top, base) for every window open at a distance along the fault, m.

        At a tip, where an unfaulted contact gives way to a faulted one, it is the unfaulted one.
        """
        open_here = np.flatnonzero(
            (self.distance_from <= distance) & (self.distance_to >= distance)
        )
        cuts: dict[tuple[int, int, int], tuple[int, float, float]] = {}
        for window in open_here.tolist():
            at, upper, lower = self.corners(window)
            top, base = np.interp(distance, at, upper), np.interp(distance, at, lower)
            ends = int(self.footwall_body[window]), int(self.hanging_wall_body[window])
            key = int(self.strand[window]), *ends
            is_first = key not in cuts or self.is_unfaulted[window]
            if base - top >= LEAST_OVERLAP and is_first:
                cuts[key] = window, float(top), float(base)
        return list(cuts.values())

    def table(self) -> pd.DataFrame:
        """Return the windows as a table, one row a window; lengths in m, areas in m2."""
        import pandas as pd  # pandas takes a third of a second to load: only tables pay for it

        names = np.array([body.name for body in self.zone.bodies], dtype=object)
        strand_names = np.array(self.zone.strand_names, dtype=object)
        return pd.DataFrame(
            {
                "strand": self.strand,
                "footwall_side_sand": names[self.footwall_body],
                "hanging_wall_side_sand": names[self.hanging_wall_body],
                "distance_from": self.distance_from,
                "distance_to": self.distance_to,
                "top": self.top,
                "base": self.base,
                "max_height": self.max_height,
                "area": self.area,
                "contact": np.where(self.is_unfaulted, "unfaulted", "faulted").astype(object),
                "strand_name": strand_names[self.strand - 1],
            }
        )

    def _repr_html_(self) -> str:
        return str(self.table().to_html(index=False, float_format=lambda v: f"{v:.6g}"))


def find_windows(zone: FaultZone) -> Windows:
    """Return every window of a fault zone, ordered by strand, bodies and distance.

    Notes
    -----
    Exact: boundaries are straight between stations, so crossings and areas are worked out, not
    sampled. Overlaps under 1e-6 m are none.
    """
    tops, bases = zone.body_faces()
    counts = np.array([zone.strand_count])
    rows, vertices = trace_windows(zone.stations, tops[np.newaxis], bases[np.newaxis], counts)
    column = {name: rows[:, i] for i, name in enumerate(COLUMNS)}
    return Windows(
        zone=zone,
        strand=column["strand"].astype(np.int64) + 1,
        footwall_body=column["footwall_body"].astype(np.int64),
        hanging_wall_body=column["hanging_wall_body"].astype(np.int64),
        is_unfaulted=column["unfaulted"] > 0.0,
        distance_from=column["distance_from"],
        distance_to=column["distance_to"],
        top=column["top"],
        base=column["base"],
        max_height=column["max_height"],
        area=column["area"] / np.sin(np.radians(zone.dip)),
        _first_vertex=column["first_vertex"].astype(np.int64),
        _end_vertex=column["end_vertex"].astype(np.int64),
        _vertices=vertices,
    )
