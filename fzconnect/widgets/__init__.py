"""Notebook controls: ipywidgets and state, no geology; every number comes from the rooms below."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fzconnect.widgets.pane import FigurePane
    from fzconnect.widgets.scheduler import Scheduler
    from fzconnect.widgets.splitbar import SplitBar
    from fzconnect.widgets.workbench import Workbench

_HOMES = {
    "FigurePane": "fzconnect.widgets.pane",
    "Scheduler": "fzconnect.widgets.scheduler",
    "SplitBar": "fzconnect.widgets.splitbar",
    "Workbench": "fzconnect.widgets.workbench",
}

__all__ = ["FigurePane", "Scheduler", "SplitBar", "Workbench"]


def __getattr__(name: str) -> Any:
    """Load a public name from its module at its first use."""
    if name not in _HOMES:
        msg = f"module 'fzconnect.widgets' has no attribute {name!r}"
        raise AttributeError(msg)
    return getattr(import_module(_HOMES[name]), name)
