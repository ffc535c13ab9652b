"""A study written to a folder: tables, graph and report, all of them or none."""

from __future__ import annotations

import sys
import threading
import time
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from fzconnect.network import Study
    from fzconnect.scenario import Scenario

__all__ = ["write_study"]


def write_study(
    scenario: Scenario,
    out: str | Path,
    *,
    inputs: Mapping[str, str] | None = None,
    overwrite: bool = False,
    per_pair: int = 3,
    show: Callable[[Study], None] | None = None,
    progress: bool = True,
) -> Study:
    """Study a scenario, write every result file and the report to a folder, return the study.

    Parameters
    ----------
    scenario : Scenario
    out : path
        Folder to write; one written before by fzconnect is replaced.
    inputs : mapping, optional
        SHA-256 of each input file by name, for the record.
    overwrite : bool
        Replace the folder even if fzconnect did not write it.
    per_pair : int
        Pathways to list for each connected pair.
    show : callable, optional
        Called with the study before the files are made.
    progress : bool
        Whether work that takes over a second shows how far it is, on the error stream.

    Raises
    ------
    OutputError
        If the folder must not or cannot be written; nothing is left half-written.
    """
    from fzconnect.network import study, study_files
    from fzconnect.scenario.store import check_folder, write_folder
    from fzconnect.views import report_html

    check_folder(out, overwrite=overwrite)
    with _Progress("windows and network (longer the first time)", is_shown=progress) as step:
        result = study(scenario)
        step(1, 1)
    if show:
        show(result)
    with _Progress("pathways", is_shown=progress) as step:
        ranked = result.ranked_pathways(per_pair=per_pair, progress=step)
    with _Progress("files and report", is_shown=progress) as step:
        files = study_files(result, ranked, inputs=inputs)
        step(1, 2)
        files["report.html"] = report_html(result, ranked, inputs=inputs)
        step(2, 2)
    write_folder(out, files, overwrite=overwrite)
    return result


class _Progress:
    """A progress bar on the error stream that shows itself only after a second.

    A thread of its own draws it, so that a long step without news is seen to go on.
    """

    def __init__(self, what: str, *, is_shown: bool) -> None:
        self._what = what
        self._done, self._total = 0, 1
        self._ended = threading.Event()
        self._thread = threading.Thread(target=self._draw, daemon=True) if is_shown else None

    def __enter__(self) -> _Progress:
        if self._thread:
            self._thread.start()
        return self

    def __call__(self, done: int, total: int) -> None:
        self._done, self._total = done, total

    def __exit__(self, *_: object) -> None:
        self._ended.set()
        if self._thread:
            self._thread.join()

    def _draw(self) -> None:
        begun = time.time()
        if self._ended.wait(1.0):
            return
        from tqdm import tqdm

        form = "{desc}: {percentage:3.0f}% |{bar:20}| {elapsed}"
        with tqdm(desc=self._what, leave=False, file=sys.stderr, bar_format=form) as bar:
            bar.start_t = begun
            while True:
                bar.total, bar.n = self._total, self._done
                bar.refresh()
                if self._ended.wait(0.5):
                    return
