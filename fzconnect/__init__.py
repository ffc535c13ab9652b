"""Multi-strand fault-zone connectivity: which sands reach which, through which windows.

The public names load their rooms only when they are used, so that `import fzconnect` stays light.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fzconnect.geometry import FaultZone, Windows, find_windows
    from fzconnect.network import FaultNetwork, Study, export_graph, study
    from fzconnect.output import write_study
    from fzconnect.scenario import Scenario, demo, load, save
    from fzconnect.widgets.workbench import Workbench, workbench

__version__ = "0.1.0"

_HOMES = {
    "FaultZone": "fzconnect.geometry",
    "Windows": "fzconnect.geometry",
    "find_windows": "fzconnect.geometry",
    "FaultNetwork": "fzconnect.network",
    "Study": "fzconnect.network",
    "export_graph": "fzconnect.network",
    "study": "fzconnect.network",
    "Scenario": "fzconnect.scenario",
    "demo": "fzconnect.scenario",
    "load": "fzconnect.scenario",
    "save": "fzconnect.scenario",
    "Workbench": "fzconnect.widgets.workbench",
    "workbench": "fzconnect.widgets.workbench",
    "write_study": "fzconnect.output",
}

__all__ = [
    "FaultNetwork",
    "FaultZone",
    "Scenario",
    "Study",
    "Windows",
    "Workbench",
    "__version__",
    "demo",
    "export_graph",
    "find_windows",
    "load",
    "save",
    "study",
    "workbench",
    "write_study",
]


def __getattr__(name: str) -> Any:
    """Load a public name from its room at its first use."""
    if name not in _HOMES:
        msg = f"module 'fzconnect' has no attribute {name!r}"
        raise AttributeError(msg)
    value = getattr(import_module(_HOMES[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted(__all__)
