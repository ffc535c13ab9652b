"""Coverage: how much of the sands faces rock outside the column, which nobody knows."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from fzconnect.geometry.kernel import facing_area

if TYPE_CHECKING:
    from fzconnect.geometry.zone import FaultZone

__all__ = ["Coverage", "coverage", "coverage_warning"]

_WORTH_SAYING = 0.001
_SIDES = ("footwall", "hanging wall")


@dataclass(frozen=True)
class Coverage:
    """What part of the sands on one face of a strand faces rock outside the column.

    Attributes
    ----------
    strand : int
        1..N, counted from the footwall.
    strand_name : str
    side : str
        "footwall" or "hanging wall": the face on which the sands lie.
    outside : float
        Part of the area of these sands, 0 to 1, that faces rock above or below the other face's
        column.
    """

    strand: int
    strand_name: str
    side: str
    outside: float


def coverage(zone: FaultZone) -> tuple[Coverage, ...]:
    """Return the coverage of both faces of every strand, footwall to hanging wall."""
    tops, bases = zone.body_faces()
    found = []
    for k, name in enumerate(zone.strand_names):
        for side in (0, 1):
            other = zone.faces[k, 1 - side]
            total = float(np.trapezoid(bases[k, side] - tops[k, side], zone.stations).sum())
            inside = sum(
                facing_area(zone.stations, top, base, other[0], other[-1])
                for top, base in zip(tops[k, side], bases[k, side], strict=True)
            )
            outside = min(1.0, max(0.0, 1.0 - inside / total)) if total else 0.0
            found.append(Coverage(k + 1, name, _SIDES[side], outside))
    return tuple(found)


def coverage_warning(zone: FaultZone) -> str | None:
    """Return one sentence on the face that meets most rock outside the column, None if none does.

    Such rock is unknown: windows may be missing there, and it is not a seal.
    """
    worst = max(coverage(zone), key=lambda one: one.outside)
    if worst.outside < _WORTH_SAYING:
        return None
    if zone.strand_count == 1:
        where = f"{worst.side}'s sands"
    else:
        where = f"sands on the {worst.side} face of strand {worst.strand_name}"
    part = 100.0 * worst.outside
    percent = f"{part:.0f}" if part >= 10.0 else f"{part:.2g}"  # .2g would write 100 as 1e+02
    return (
        f"column too short for this throw: {percent} % of the {where} face rock outside the "
        "column, which is unknown, not a seal"
    )
