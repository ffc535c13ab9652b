"""Start JupyterLab, open a notebook in Chromium, run it and act on it as a user would."""

from __future__ import annotations

import itertools
import os
import re
import shutil
import socket
import subprocess
import sys
import time
import urllib.request
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from dataclasses import dataclass, field
from pathlib import Path
from typing import NoReturn

import pytest
from playwright.sync_api import (
    Browser,
    ConsoleMessage,
    Locator,
    Page,
    Request,
    Route,
    sync_playwright,
)

import fzconnect

__all__ = ["Lab", "Server", "View", "find_browser", "launch", "missing_browser", "start_lab"]

BROWSERS = ("chromium", "chromium-browser", "google-chrome", "google-chrome-stable", "chrome")
FLAGS = [
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
]
OUTSIDE = re.compile(r"^(?:https?|wss?)://(?!127\.0\.0\.1[:/])")
TOKEN = "look"

LATE = "Cannot send"

# Console errors that say nothing about our notebooks: text, and why it is let pass.
HARMLESS: tuple[tuple[re.Pattern[str], str], ...] = ()


def find_browser() -> str | None:
    """Return the path of a Chromium on this machine, or None."""
    return next(filter(None, map(shutil.which, BROWSERS)), None)


def missing_browser() -> NoReturn:
    """Skip for want of a browser; on a build machine, where there must be one, fail."""
    text = f"no Chromium found on this machine (looked for {', '.join(BROWSERS)})"
    if os.environ.get("CI", "").strip().lower() in {"1", "true", "yes", "on"}:
        pytest.fail(f"{text}, but CI is set, so the browser tests must run", pytrace=False)
    pytest.skip(f"{text}: the browser tests were not run")


@dataclass(frozen=True)
class Server:
    """A running JupyterLab: its port and the folder that it serves."""

    port: int
    root: Path


@contextmanager
def start_lab(scratch: Path) -> Iterator[Server]:
    """Run JupyterLab with this Python, serving an empty folder, apart from any user settings."""
    root, settings = scratch / "root", scratch / "settings"
    root.mkdir()
    # Windowed notebooks build cells only when they scroll into view, which hides what a test
    # looks for and, in some releases, drops plots.
    _write(
        settings / "@jupyterlab/notebook-extension/tracker.jupyterlab-settings",
        '{"windowingMode": "none"}',
    )
    _write(
        settings / "@jupyterlab/apputils-extension/notification.jupyterlab-settings",
        '{"fetchNews": "false", "checkForUpdates": false}',
    )
    with socket.socket() as probe:
        probe.bind(("127.0.0.1", 0))
        port = probe.getsockname()[1]
    command = [
        sys.executable, "-m", "jupyterlab", "--no-browser", "--allow-root", "--ip=127.0.0.1",
        f"--port={port}", "--ServerApp.port_retries=0", f"--IdentityProvider.token={TOKEN}",
        f"--ServerApp.root_dir={root}", f"--LabApp.user_settings_dir={settings}",
        f"--LabApp.workspaces_dir={scratch / 'workspaces'}", "--LabApp.news_url=None",
        "--LabApp.check_for_updates_class=jupyterlab.NeverCheckForUpdate",
    ]  # fmt: skip
    environment = {
        **os.environ,
        # The kernel must meet the package under test, wherever it was imported from here.
        "PYTHONPATH": os.pathsep.join(
            filter(None, [str(Path(fzconnect.__file__).parents[1]), os.environ.get("PYTHONPATH")])
        ),
        "JUPYTER_CONFIG_DIR": str(scratch / "config"),
        "JUPYTER_DATA_DIR": str(scratch / "data"),
        "JUPYTER_RUNTIME_DIR": str(scratch / "runtime"),
        "IPYTHONDIR": str(scratch / "ipython"),
    }
    log = scratch / "lab.log"
    with (
        log.open("w") as out,
        subprocess.Popen(command, stdout=out, stderr=out, env=environment, cwd=root) as process,
    ):
        try:
            _wait_for_server(process, port, log)
            yield Server(port, root)
        finally:
            process.terminate()  # shuts the kernels down, too
            try:
                process.wait(20)
            except subprocess.TimeoutExpired:
                process.kill()


def _wait_for_server(process: subprocess.Popen[bytes], port: int, log: Path) -> None:
    for _ in range(240):
        try:
            url = f"http://127.0.0.1:{port}/api?token={TOKEN}"
            with urllib.request.urlopen(url, timeout=2) as answer:
                answer.read()
            return
        except OSError:
            if process.poll() is not None:
                break
            time.sleep(0.5)
    pytest.fail(f"JupyterLab did not start:\n{log.read_text()[-2000:]}", pytrace=False)


def _write(path: Path, text: str) -> None:
    path.parent.mkdir(parents=True, exist_ok=True)
    path.write_text(text)


@contextmanager
def launch(executable: str) -> Iterator[Browser]:
    """Run Chromium."""
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=executable, args=FLAGS)
        try:
            yield browser
        finally:
            browser.close()


class Lab:
    """A running JupyterLab and a browser; opens notebooks."""

    def __init__(self, server: Server, browser: Browser) -> None:
        self._server, self._browser = server, browser
        self._numbers = itertools.count(1)

    @contextmanager
    def open(
        self,
        notebook: Path,
        *,
        width: int = 1400,
        height: int = 1600,
        run: bool = True,
        limit: float = 240,
    ) -> Iterator[View]:
        """Open a notebook from a scratch copy of its folder, and run all its cells.

        Parameters
        ----------
        notebook
            The notebook file. Nothing is written to its folder.
        width, height
            Size of the browser window, px.
        run
            Whether to run all cells and wait until they are done.
        limit
            Time allowed for all cells, s.
        """
        folder = self._server.root / f"{next(self._numbers)}"
        shutil.copytree(notebook.parent, folder, ignore=shutil.ignore_patterns(".*"))
        context = self._browser.new_context(viewport={"width": width, "height": height})
        try:
            view = View(context.new_page())
            url = f"http://127.0.0.1:{self._server.port}/doc/tree/{folder.name}/{notebook.name}"
            view.visit(f"{url}?token={TOKEN}")
            if run:
                view.run_all(limit=limit)
            yield view
        finally:
            context.close()


@dataclass
class View:
    """A page that shows a notebook, and what went wrong on it so far."""

    page: Page
    console_errors: list[str] = field(default_factory=list)
    failed_requests: list[str] = field(default_factory=list)
    outside_requests: list[str] = field(default_factory=list)

    _leaving: bool = False

    def __post_init__(self) -> None:
        self.page.on("console", self._on_console)
        self.page.on("pageerror", lambda error: self.console_errors.append(str(error)))
        self.page.on("requestfailed", self._on_failed)
        # Stopped as well as noted, so that a test ends the same with and without a network.
        self.page.context.route(OUTSIDE, self._on_outside)

    def _on_console(self, message: ConsoleMessage) -> None:
        harmless = any(pattern.search(message.text) for pattern, _ in HARMLESS)
        if message.type == "error" and not harmless:
            self.console_errors.append(f"{message.text} ({message.location.get('url')})")

    def _on_failed(self, request: Request) -> None:
        # A page that is left drops what it was fetching; that is no trouble.
        if not (self._leaving and request.failure == "net::ERR_ABORTED"):
            self.failed_requests.append(f"{request.url} ({request.failure})")

    def _on_outside(self, route: Route) -> None:
        self.outside_requests.append(route.request.url)
        route.abort()

    @property
    def troubles(self) -> list[str]:
        """Everything that a user would call broken: errors, failed and outside requests."""
        cells = self.page.locator(
            "[data-mime-type='application/vnd.jupyter.stderr'],"
            "[data-mime-type='application/vnd.jupyter.error']"
        )
        broken = self.page.get_by_text("Click to show javascript error")
        return [
            *(f"console: {text}" for text in self.console_errors),
            *(f"request failed: {url}" for url in self.failed_requests),
            *(f"request to the outside: {url}" for url in self.outside_requests),
            *(f"cell: {text[-600:]}" for text in cells.all_inner_texts()),
            *(["a widget failed to draw"] * broken.count()),
        ]

    def visit(self, url: str) -> None:
        """Load a notebook page and wait for its kernel."""
        self.page.goto(url)
        self._wait_for_kernel()

    def reload(self) -> None:
        """Load the page anew; the kernel lives on."""
        self._leaving = True
        self.page.reload()
        self._leaving = False
        self._wait_for_kernel()

    def _wait_for_kernel(self) -> None:
        self.page.wait_for_selector(".jp-Notebook .jp-Cell", timeout=90_000)
        self.page.wait_for_selector(".jp-Spinner", state="hidden", timeout=90_000)
        # The mark in the toolbar says "idle" already before there is a kernel, and cells run then
        # are silently left alone; the status bar knows better.
        self.page.locator("#jp-main-statusbar").get_by_text("| Idle").wait_for(timeout=90_000)

    def menu(self, *path: str) -> None:
        """Choose an entry of the menu bar, such as "Run", "Run All Cells"."""
        self.page.locator(".jp-Notebook .jp-Cell .jp-InputPrompt").first.click()
        for depth, name in enumerate(path):
            bar = ".lm-MenuBar" if depth == 0 else ".lm-Menu"
            entry = self.page.locator(f"{bar}-itemLabel").get_by_text(name, exact=True)
            entry.last.click()

    def run_all(self, *, limit: float = 240) -> None:
        """Run all cells and wait until they are done."""
        self.menu("Run", "Run All Cells")
        self.wait_until_done(limit=limit)
        prompts = self.page.locator(".jp-CodeCell .jp-InputPrompt").all_inner_texts()
        if not any(re.search(r"\d", prompt) for prompt in prompts):
            pytest.fail(f"no cell was run; the prompts are {prompts}")

    def restart_and_run_all(self, *, limit: float = 240) -> None:
        """Start the kernel anew, run all cells and wait until they are done."""
        self.menu("Kernel", "Restart Kernel and Run All Cells…")
        self.page.locator(".jp-Dialog-button.jp-mod-warn").click()
        self.wait_until_done(limit=limit)
        # Widgets of the kernel that is gone may still want to tell it something.
        self.console_errors[:] = [e for e in self.console_errors if e.split(" (")[0] != LATE]

    def run_cell(self, index: int, *, limit: float = 60) -> None:
        """Run one cell, counted from zero, and wait until it is done."""
        self.page.locator(".jp-Notebook .jp-Cell .jp-InputPrompt").nth(index).click()
        self.page.keyboard.press("Control+Enter")
        self.wait_until_done(limit=limit)

    def wait_until_done(self, *, limit: float = 60) -> None:
        """Wait until no cell runs or waits for its turn."""
        self.page.wait_for_timeout(300)  # the prompts take a moment to show the star
        self.page.wait_for_function(
            "Array.from(document.querySelectorAll('.jp-Notebook .jp-InputPrompt'))"
            ".every(prompt => !prompt.textContent.includes('[*]'))",
            timeout=1000 * limit,
        )
        self.page.wait_for_selector(
            ".jp-Notebook-ExecutionIndicator[data-status=idle]",
            state="attached",
            timeout=1000 * limit,
        )

    def save(self) -> None:
        """Save the notebook with its outputs."""
        self.page.locator(".jp-Notebook .jp-Cell .jp-InputPrompt").first.click()
        self.page.keyboard.press("Control+s")
        self.page.wait_for_selector(".jp-mod-dirty", state="detached", timeout=20_000)

    def find(self, css: str, index: int = 0) -> Locator:
        """Return the match of a CSS selector with this number, once it is on the page."""
        match = self.page.locator(css).nth(index)
        match.wait_for(state="visible", timeout=30_000)
        return match

    def text(self, css: str, index: int = 0) -> str:
        """Return the text of a match."""
        return self.find(css, index).inner_text()

    def press(self, key: str, css: str, index: int = 0) -> None:
        """Focus a widget and press a key on it."""
        self.find(css, index).focus()
        self.page.keyboard.press(key)

    def drag(
        self,
        start: Sequence[float],
        end: Sequence[float],
        *,
        steps: int = 20,
        seconds: float = 0.5,
        release: bool = True,
    ) -> None:
        """Drag from one point of the page to another, in px, as evenly as a hand does."""
        mouse = self.page.mouse
        mouse.move(*start)
        mouse.down()
        for step in range(1, steps + 1):
            part = step / steps
            mouse.move(*(a + part * (b - a) for a, b in zip(start, end, strict=True)))
            self.page.wait_for_timeout(1000 * seconds / steps)
        if release:
            mouse.up()

    def point(self, css: str, x: float, y: float, index: int = 0) -> tuple[float, float]:
        """Return the page coordinates of a point in a match, given as fractions of its box."""
        match = self.find(css, index)
        match.scroll_into_view_if_needed()
        box = match.bounding_box()
        assert box is not None
        return box["x"] + x * box["width"], box["y"] + y * box["height"]

    def wait_for_text(self, css: str, text: str, index: int = 0, *, limit: float = 10) -> None:
        """Wait until a match reads `text`."""
        match = self.find(css, index)
        if not self._holds(lambda: match.inner_text() == text, limit):
            pytest.fail(f"{css} reads {match.inner_text()!r} after {limit:g} s, not {text!r}")

    def wait_for_change(self, css: str, old: str, index: int = 0, *, limit: float = 10) -> str:
        """Wait until the text of a match differs from `old`, and return it."""
        match = self.find(css, index)
        if not self._holds(lambda: match.inner_text() != old, limit):
            pytest.fail(f"{css} still reads {old!r} after {limit:g} s")
        return match.inner_text()

    def wait_until(self, holds: Callable[[], bool], *, limit: float = 10) -> None:
        """Wait until a condition holds."""
        if not self._holds(holds, limit):
            pytest.fail(f"what was waited for did not come in {limit:g} s")

    def _holds(self, condition: Callable[[], bool], limit: float) -> bool:
        end = time.perf_counter() + limit
        while not condition():
            if time.perf_counter() > end:
                return False
            self.page.wait_for_timeout(20)
        return True

    def time_key(self, key: str, css: str, watched: str, index: int = 0) -> float:
        """Return the time in ms from pressing a key to the change of a text, in the page's clock.

        The page itself watches the text, so that the way to the test and back is not counted.
        """
        self.find(css, index).focus()
        self.page.evaluate(
            """watched => {
                // Looked up anew every time: widgets replace their nodes.
                const text = () => document.querySelector(watched)?.innerText;
                const old = text();
                window.changed = new Promise((resolve, reject) => {
                    window.addEventListener("keydown", () => {
                        const pressed = performance.now();
                        const look = () => {
                            const passed = performance.now() - pressed;
                            if (text() !== old) resolve(passed);
                            else if (passed > 10000) reject(new Error("no change in 10 s"));
                            else requestAnimationFrame(look);
                        };
                        look();
                    }, {capture: true, once: true});
                });
            }""",
            watched,
        )
        self.page.keyboard.press(key)
        return float(self.page.evaluate("window.changed"))

    def shot(self, path: Path) -> None:
        """Take a picture of the window."""
        self.page.screenshot(path=str(path))
