"""Every notebook is stored clean and runs from top to bottom."""

from __future__ import annotations

import shutil
import warnings
from pathlib import Path

import nbformat
import pytest

FOLDER = Path(__file__).parents[2] / "notebooks"
NOTEBOOKS = sorted(FOLDER.glob("*.ipynb"))


def test_there_are_notebooks():
    assert NOTEBOOKS


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_stored_without_outputs(path):
    for cell in nbformat.read(path, as_version=4).cells:
        assert cell.cell_type != "code" or (not cell.outputs and cell.execution_count is None)


@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_no_long_functions(path):
    for cell in nbformat.read(path, as_version=4).cells:
        if cell.cell_type == "code" and "def " in cell.source:
            assert len(cell.source.splitlines()) <= 15


@pytest.mark.notebook
@pytest.mark.parametrize("path", NOTEBOOKS, ids=lambda path: path.stem)
def test_runs_from_top_to_bottom(path, tmp_path):
    with warnings.catch_warnings():
        # the client libraries of Jupyter warn of things that they will change themselves
        warnings.simplefilter("ignore")
        from nbclient import NotebookClient

        shutil.copy(path, tmp_path)
        notebook = nbformat.read(path, as_version=4)
        client = NotebookClient(
            notebook, timeout=120, resources={"metadata": {"path": str(tmp_path)}}
        )
        client.execute()
    errors = [
        output
        for cell in notebook.cells
        for output in cell.get("outputs", ())
        if output.output_type == "error" or output.get("name") == "stderr"
    ]
    assert not errors
