"""Pictures: functions that turn results into bokeh figures that follow `update`; no ipywidgets."""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fzconnect.views.faces import faces_figure
    from fzconnect.views.pairmatrix import pair_matrix_figure
    from fzconnect.views.pathgraph import pathway_graph_figure
    from fzconnect.views.report import report_html
    from fzconnect.views.section import section_figure
    from fzconnect.views.selection import NOTHING, Selection
    from fzconnect.views.splitbar import split_bar

_HOMES = {
    "NOTHING": "fzconnect.views.selection",
    "Selection": "fzconnect.views.selection",
    "faces_figure": "fzconnect.views.faces",
    "pair_matrix_figure": "fzconnect.views.pairmatrix",
    "pathway_graph_figure": "fzconnect.views.pathgraph",
    "report_html": "fzconnect.views.report",
    "section_figure": "fzconnect.views.section",
    "split_bar": "fzconnect.views.splitbar",
}

__all__ = [
    "NOTHING",
    "Selection",
    "faces_figure",
    "pair_matrix_figure",
    "pathway_graph_figure",
    "report_html",
    "section_figure",
    "split_bar",
]


def __getattr__(name: str) -> Any:
    """Load a public name from its module at its first use."""
    if name not in _HOMES:
        msg = f"module 'fzconnect.views' has no attribute {name!r}"
        raise AttributeError(msg)
    return getattr(import_module(_HOMES[name]), name)
