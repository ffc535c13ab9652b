"""`import fzconnect` is light, and every public name is there."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

import fzconnect

HEAVY = ("bokeh", "ipywidgets", "jupyter_bokeh", "networkx", "numba", "numpy", "pandas", "pint")


def _run(code: str, folder: Path) -> str:
    done = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        check=False,
        cwd=folder,
        env={**os.environ, "PYTHONPATH": str(Path(fzconnect.__file__).parents[1])},
    )
    assert done.returncode == 0, done.stderr
    return done.stdout.strip()


@pytest.mark.parametrize("name", HEAVY)
def test_importing_the_package_loads_nothing_heavy(name: str, tmp_path: Path) -> None:
    assert _run(f"import sys, fzconnect; print({name!r} in sys.modules)", tmp_path) == "False"


def test_reading_a_scenario_loads_no_figures_and_no_compiler(tmp_path: Path) -> None:
    code = "import sys, fzconnect as fz; fz.demo(); print({'bokeh', 'numba'} & set(sys.modules))"
    assert _run(code, tmp_path) == "set()"


@pytest.mark.parametrize("name", fzconnect.__all__)
def test_every_public_name_is_there(name: str) -> None:
    assert getattr(fzconnect, name) is not None
    assert name in dir(fzconnect)


def test_every_lazy_name_is_public() -> None:
    assert set(fzconnect._HOMES) <= set(fzconnect.__all__)


def test_a_name_that_is_not_there_is_refused() -> None:
    with pytest.raises(AttributeError, match="module 'fzconnect' has no attribute 'seal_all'"):
        _ = fzconnect.seal_all
