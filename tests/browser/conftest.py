"""A real JupyterLab and a real Chromium for the tests in this folder."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest

pytest.importorskip("playwright", reason="the browser tests need the package playwright")

from .lab import Lab, find_browser, launch, missing_browser, start_lab


@pytest.fixture(scope="session")
def lab(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Lab]:
    """A running JupyterLab with a browser before it; notebooks are opened with `lab.open`."""
    executable = find_browser()
    if executable is None:
        missing_browser()
    with (
        start_lab(tmp_path_factory.mktemp("lab")) as server,
        launch(executable) as browser,
    ):
        yield Lab(server, browser)


@pytest.fixture
def pictures(tmp_path: Path) -> Path:
    """Folder for screenshots."""
    folder = tmp_path / "pictures"
    folder.mkdir()
    return folder
