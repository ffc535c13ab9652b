"""Make the README's picture of the workbench: `python -m tests.browser.picture`.

A real screenshot of the first notebook in JupyterLab and Chromium, with a pair chosen so that the
marks show, cropped to the workbench.
"""

from __future__ import annotations

import sys
import tempfile
from io import BytesIO
from pathlib import Path

from PIL import Image

from .lab import Lab, find_browser, launch, start_lab
from .test_workbench import LOWER, MATRIX, NOTEBOOK, PICTURE, UPPER, choose

TARGET = NOTEBOOK.parent / "images" / "workbench.png"
LARGEST = 400_000
"""Bytes that the picture may have."""
SIZE = (1280, 1500)
SHOWN = 1180
"""Pixels of the workbench's height that are kept: down to the end of the strand faces."""


def main() -> int:
    """Write the picture; return 1 if it is too large."""
    browser_path = find_browser()
    if browser_path is None:
        sys.stderr.write("the picture needs Chromium\n")
        return 1
    with (
        tempfile.TemporaryDirectory() as scratch,
        start_lab(Path(scratch)) as server,
        launch(browser_path) as browser,
        Lab(server, browser).open(NOTEBOOK, width=SIZE[0], height=SIZE[1]) as view,
    ):
        view.find(PICTURE, MATRIX)
        choose(view, UPPER, "S7")
        choose(view, LOWER, "S4")
        view.wait_until(lambda: "S7 in the hanging wall" in view.text(".fz-marked"))
        view.page.wait_for_timeout(1500)
        bench = view.page.locator(".fz-workbench")
        bench.evaluate("bench => bench.scrollIntoView({block: 'start'})")
        view.page.wait_for_timeout(800)
        box = bench.bounding_box()
        assert box is not None
        clip = {"x": box["x"], "y": box["y"], "width": box["width"], "height": SHOWN}
        shot = view.page.screenshot(clip=clip)
    # 128 colours are enough for flat tones, and a third of the bytes
    picture = Image.open(BytesIO(shot)).convert("RGB").quantize(128)
    TARGET.parent.mkdir(exist_ok=True)
    picture.save(TARGET, optimize=True)
    size = TARGET.stat().st_size
    sys.stdout.write(f"{TARGET}: {picture.size[0]} x {picture.size[1]}, {size} bytes\n")
    return 0 if size <= LARGEST else 1


if __name__ == "__main__":
    sys.exit(main())
