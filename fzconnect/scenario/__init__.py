"""What the user says about a fault zone: models, checks and files."""

from __future__ import annotations

from fzconnect.scenario.column import Column, Layer
from fzconnect.scenario.model import Scenario
from fzconnect.scenario.options import (
    Evidence,
    FaultRock,
    Flow,
    Fluid,
    Source,
    SplitDraw,
    ThrowDraw,
    Uncertainty,
)
from fzconnect.scenario.reader import demo, input_files, load
from fzconnect.scenario.strands import Conduit, Strands, StrandShare
from fzconnect.scenario.throw import Cutoff, Throw
from fzconnect.scenario.writer import save, starter_files

__all__ = [
    "Column",
    "Conduit",
    "Cutoff",
    "Evidence",
    "FaultRock",
    "Flow",
    "Fluid",
    "Layer",
    "Scenario",
    "Source",
    "SplitDraw",
    "StrandShare",
    "Strands",
    "Throw",
    "ThrowDraw",
    "Uncertainty",
    "demo",
    "input_files",
    "load",
    "save",
    "starter_files",
]
