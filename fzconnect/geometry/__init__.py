"""Blocks, faces, sand bodies and windows: the only room that knows about depth and throw.

Conventions: depth in metres, positive down; distance in metres along the fault; throw positive
where the hanging wall is down. Strands are numbered 1..N and blocks 0..N from the footwall to the
hanging wall. Arrays are ordered [strand, side, boundary or body, station]; side 0 is a strand's
footwall face, side 1 its hanging-wall face.
"""

from __future__ import annotations

from fzconnect.geometry.body import SandBody, sand_bodies
from fzconnect.geometry.coverage import Coverage, coverage, coverage_warning
from fzconnect.geometry.section import Section
from fzconnect.geometry.window import Windows, find_windows
from fzconnect.geometry.zone import FaultZone

__all__ = [
    "Coverage",
    "FaultZone",
    "SandBody",
    "Section",
    "Windows",
    "coverage",
    "coverage_warning",
    "find_windows",
    "sand_bodies",
]
