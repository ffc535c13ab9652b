"""Rooms import only rooms to their left, stay small, and the science runs without a browser."""

from __future__ import annotations

import ast
import os
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

import fzconnect

PACKAGE = Path(fzconnect.__file__).parent
ROOMS = ("scenario", "geometry", "faultrock", "network", "ensemble", "views", "widgets")
BESIDE = {"errors", "units"}  # anyone may import these; they import no room
KERNEL_ROOMS = ("scenario", "geometry", "faultrock", "network", "ensemble")
MODULES = sorted(
    path for path in PACKAGE.rglob("*.py") if "notebooks" not in path.relative_to(PACKAGE).parts
)


def _imports(path: Path) -> Iterator[str]:
    """Yield the full names of the modules that a file imports, wherever in it."""
    here = ["fzconnect", *path.relative_to(PACKAGE).with_suffix("").parts]
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            start = here[: len(here) - node.level] if node.level else []
            base = ".".join([*start, *([node.module] if node.module else [])])
            if base == "fzconnect":
                yield from (f"fzconnect.{alias.name}" for alias in node.names)
            yield base


def _rooms_imported(path: Path) -> set[str]:
    parts = [name.split(".") for name in _imports(path)]
    return {name[1] for name in parts if name[0] == "fzconnect" and len(name) > 1}


def _room(path: Path) -> str:
    return path.relative_to(PACKAGE).parts[0].removesuffix(".py")


def _name(path: Path) -> str:
    return str(path.relative_to(PACKAGE))


@pytest.mark.parametrize("path", MODULES, ids=_name)
def test_a_room_imports_only_rooms_to_its_left(path: Path) -> None:
    room, found = _room(path), _rooms_imported(path)
    if room in ROOMS:
        allowed = {*ROOMS[: ROOMS.index(room) + 1], *BESIDE, "__version__", "data"}
        if room == "widgets":
            allowed.add("output")  # its export writes what the command writes
        assert found <= allowed
    elif room in BESIDE:
        assert found <= BESIDE
    elif room in ("cli", "output"):
        assert "widgets" not in found


def test_the_rooms_that_exist_are_those_of_the_design() -> None:
    folders = {path.parent.name for path in PACKAGE.glob("*/__init__.py")}
    assert folders - {"data", "notebooks"} <= set(ROOMS)
    assert {"scenario", "geometry", "network"} <= folders


@pytest.mark.parametrize("path", MODULES, ids=_name)
def test_only_views_and_widgets_draw(path: Path) -> None:
    top = {name.split(".")[0] for name in _imports(path)}
    if _room(path) in (*KERNEL_ROOMS, "errors", "units"):
        assert not top & {"bokeh", "ipywidgets", "jupyter_bokeh", "IPython", "traitlets"}
    if _room(path) == "views":
        assert not top & {"ipywidgets", "jupyter_bokeh", "IPython", "traitlets"}
    if _name(path) != os.path.join("widgets", "pane.py"):
        assert "jupyter_bokeh" not in top


@pytest.mark.parametrize("path", MODULES, ids=_name)
def test_modules_are_short_and_say_what_they_are_for(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert len(text.splitlines()) < 600
    tree = ast.parse(text)
    assert ast.get_docstring(tree)
    names = [t.id for n in tree.body if isinstance(n, ast.Assign) for t in n.targets
             if isinstance(t, ast.Name)]  # fmt: skip
    assert "__all__" in names or path.name == "__main__.py"


def test_the_import_reader_sees_every_way_to_import() -> None:
    path = PACKAGE / "network" / "graph.py"
    assert "geometry" in _rooms_imported(path), "under TYPE_CHECKING"
    assert "errors" in _rooms_imported(path)
    assert "widgets" not in _rooms_imported(path)


def test_the_science_runs_with_bokeh_and_ipywidgets_blocked() -> None:
    code = """
import sys
for name in ("bokeh", "ipywidgets", "jupyter_bokeh", "IPython", "traitlets"):
    sys.modules[name] = None
import importlib
for room in sys.argv[1:]:
    importlib.import_module(f"fzconnect.{room}")
import fzconnect
result = fzconnect.study(fzconnect.demo())
print(len(result.connected_pairs) > 0)
"""
    rooms = [room for room in KERNEL_ROOMS if (PACKAGE / room / "__init__.py").exists()]
    done = subprocess.run(
        [sys.executable, "-W", "error", "-c", code, *rooms],
        capture_output=True,
        text=True,
        check=False,
        env={**os.environ, "PYTHONPATH": str(PACKAGE.parent)},
    )
    assert (done.stdout.strip(), done.stderr) == ("True", "")
