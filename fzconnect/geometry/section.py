"""A section across the zone at one distance: blocks, strands and the windows cut there."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fzconnect.errors import NetworkError

if TYPE_CHECKING:
    from fzconnect.geometry.zone import FaultZone

__all__ = ["Section", "cut"]

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Section:
    """The zone cut across at one distance, footwall on the left, hanging wall on the right.

    Attributes
    ----------
    distance : float
        Distance along the fault, m.
    boundaries : (N + 1, U + 1) array
        Depths, m, of the layer boundaries in each block.
    reference_depth : float
        Depth, m, at which `strand_positions` holds: the middle of the drawn rock.
    strand_positions : (N,) array
        Horizontal position, m, of each strand at the reference depth; the middle of the zone is 0.
    slope : float
        Metres to the right for each metre down: 1 / tan(dip). The hanging wall lies above a
        strand, so strands lean to the right with depth.
    """

    distance: float
    boundaries: Array
    reference_depth: float
    strand_positions: Array
    slope: float

    def upright(self, lens_width: float) -> Section:
        """Return the section with strands upright and every lens as wide as given, m.

        What touches what is the same; only distances across the fault lose their meaning.
        """
        positions = lens_width * np.arange(len(self.strand_positions), dtype=float)
        return replace(self, strand_positions=positions - positions.mean(), slope=0.0)

    def strand_x(self, strand: int, depth: Array | float) -> Array:
        """Return the horizontal position, m, of strand 0..N-1 at given depths, m."""
        offset = (np.asarray(depth, dtype=float) - self.reference_depth) * self.slope
        return np.asarray(self.strand_positions[strand] + offset)

    def extent(self, margin: float) -> tuple[float, float]:
        """Return the left and right edge, m, that leave `margin` beside the outermost strands."""
        depths = np.array([self.boundaries.min(), self.boundaries.max()])
        left = self.strand_x(0, depths).min() - margin
        right = self.strand_x(len(self.strand_positions) - 1, depths).max() + margin
        return float(left), float(right)

    def outline(self, block: int, layer: int, edges: tuple[float, float]) -> tuple[Array, Array]:
        """Return x and depth, m, of the four corners of a layer in a block, as two (4,) arrays.

        Parameters
        ----------
        block : int, 0..N
        layer : int, 0..U-1
        edges : (left, right)
            Where the footwall and the hanging wall are cut off, m.
        """
        top, base = self.boundaries[block, layer], self.boundaries[block, layer + 1]
        depth = np.array([top, base])
        last = len(self.strand_positions)
        left = np.full(2, edges[0]) if block == 0 else self.strand_x(block - 1, depth)
        right = np.full(2, edges[1]) if block == last else self.strand_x(block, depth)
        return (
            np.array([left[0], right[0], right[1], left[1]]),
            np.array([top, top, base, base]),
        )


def cut(zone: FaultZone, distance: float) -> Section:
    """Return the section of `zone` at a distance along the fault, m."""
    first, last = float(zone.stations[0]), float(zone.stations[-1])
    if not first <= distance <= last:
        msg = (
            f"a section at {distance:g} m is off the fault, which runs from {first:g} to {last:g} m"
        )
        raise NetworkError(msg)
    # the two stations around the distance, and how far it is between them
    left = int(np.clip(np.searchsorted(zone.stations, distance) - 1, 0, len(zone.stations) - 2))
    part = (distance - zone.stations[left]) / (zone.stations[left + 1] - zone.stations[left])
    blocks = np.stack([zone.block_boundaries(block) for block in range(zone.strand_count + 1)])
    boundaries = blocks[:, :, left] * (1.0 - part) + blocks[:, :, left + 1] * part
    positions = np.concatenate([[0.0], np.cumsum(zone.lens_width)])
    return Section(
        distance=float(distance),
        boundaries=boundaries,
        reference_depth=float(0.5 * (boundaries.min() + boundaries.max())),
        strand_positions=positions - positions.mean(),
        slope=float(1.0 / np.tan(np.radians(zone.dip))) if zone.dip < 90.0 else 0.0,
    )
