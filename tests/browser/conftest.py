"""A real JupyterLab and a real Chromium for the tests in this folder."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from pathlib import Path
from statistics import median

import pytest

from .lab import Lab, find_browser, launch, missing_browser, start_lab


# Not for the whole session: while the browser is driven, an event loop counts as running in this
# thread, and tests elsewhere that mean to have none, or their own, would meet it.
@pytest.fixture(scope="package")
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


MEASURED: list[str] = []


@pytest.fixture(scope="session")
def measured() -> Callable[[str, Sequence[float]], float]:
    """A function that takes times in ms, has them printed after the tests, returns the median."""

    def note(what: str, times: Sequence[float]) -> float:
        middle = median(times)
        ends = f"{min(times):.0f} to {max(times):.0f} ms, n={len(times)}"
        MEASURED.append(f"{what}: median {middle:.0f} ms, {ends}")
        return middle

    return note


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    for line in MEASURED:
        terminalreporter.write_line(line)


@pytest.fixture
def pictures(tmp_path: Path) -> Path:
    """Folder for screenshots."""
    folder = tmp_path / "pictures"
    folder.mkdir()
    return folder
