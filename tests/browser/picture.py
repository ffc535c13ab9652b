"""Make the picture of the workbench in the README: `python tests/browser/picture.py`.

A screenshot of the first notebook in a real JupyterLab, cut to the workbench, with a pair chosen so
that marks show. It needs Chromium.
"""

from __future__ import annotations

import sys
import tempfile
from io import BytesIO
from pathlib import Path

from PIL import Image

ROOT = Path(__file__).parents[2]
sys.path.insert(0, str(ROOT))  # run as a script, not as a module

from tests.browser.lab import Lab, find_browser, launch, start_lab  # noqa: E402  the path is first

__all__ = ["make"]

NOTEBOOK = ROOT / "notebooks" / "01-first-look.ipynb"
PICTURE = ROOT / "notebooks" / "images" / "workbench.png"
PAIR = ("S4", "S4")
WIDTH, MOST = 1400, 400_000  # px of the window, bytes of the file


def make(path: Path) -> int:
    """Write the picture to `path` and return its size in bytes.

    Raises
    ------
    RuntimeError
        If the page shows trouble, or the picture takes more than 400 kB.
    """
    browser = find_browser()
    if browser is None:
        msg = "no Chromium found on this machine: the picture needs one"
        raise RuntimeError(msg)
    with (
        tempfile.TemporaryDirectory() as scratch,
        start_lab(Path(scratch)) as server,
        launch(browser) as chromium,
        Lab(server, chromium).open(NOTEBOOK, width=WIDTH, height=2200) as view,
    ):
        menus = view.page.locator(".fz-workbench select")
        for index, sand in enumerate(PAIR, start=1):
            view.find(".fz-workbench select", index)
            menus.nth(index).select_option(label=sand)
        view.wait_until(lambda: "widest pathway" in view.text(".fz-marked"))
        view.page.wait_for_timeout(2000)  # all pictures have followed
        view.page.mouse.move(5, 5)
        bench = view.find(".fz-workbench")
        bench.evaluate("bench => bench.scrollIntoView()")
        if view.troubles:
            msg = f"the page shows trouble: {view.troubles}"
            raise RuntimeError(msg)
        shot = Image.open(BytesIO(bench.screenshot()))
    path.parent.mkdir(parents=True, exist_ok=True)
    few = shot.convert("RGB").quantize(128, dither=Image.Dither.NONE)
    few.save(path, optimize=True)
    size = path.stat().st_size
    if size > MOST:
        msg = f"{path} takes {size} bytes, allowed are {MOST}"
        raise RuntimeError(msg)
    return size


if __name__ == "__main__":
    size = make(PICTURE)
    print(f"{PICTURE.relative_to(ROOT)}: {size / 1000:.0f} kB")  # noqa: T201  a command
