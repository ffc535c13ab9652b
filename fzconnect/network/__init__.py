"""The graph of sand bodies, every question asked of it, and the files that carry the answers."""

from __future__ import annotations

from fzconnect.network.cut import Cut
from fzconnect.network.export import export_graph, study_files
from fzconnect.network.graph import FaultNetwork
from fzconnect.network.pathway import Pathway
from fzconnect.network.result import Answer, Pair, RankedPathway, Study, study

__all__ = [
    "Answer",
    "Cut",
    "FaultNetwork",
    "Pair",
    "Pathway",
    "RankedPathway",
    "Study",
    "export_graph",
    "study",
    "study_files",
]
