"""The harness says so when there is no browser, and fails where there must be one."""

from __future__ import annotations

import shutil

import pytest

from .lab import find_browser, missing_browser


def test_a_browser_is_looked_for_under_its_usual_names(monkeypatch: pytest.MonkeyPatch) -> None:
    there = {"chrome": "/usr/bin/chrome", "chromium-browser": "/usr/bin/chromium-browser"}
    monkeypatch.setattr(shutil, "which", there.get)
    assert find_browser() == "/usr/bin/chromium-browser"
    there.clear()
    assert find_browser() is None


@pytest.mark.parametrize("value", ["", "0", "false"])
def test_without_a_browser_tests_are_skipped_with_a_sentence(
    monkeypatch: pytest.MonkeyPatch, value: str
) -> None:
    monkeypatch.setenv("CI", value)
    with pytest.raises(pytest.skip.Exception, match="the browser tests were not run"):
        missing_browser()


@pytest.mark.parametrize("value", ["true", "1", "True"])
def test_without_a_browser_a_build_machine_fails(
    monkeypatch: pytest.MonkeyPatch, value: str
) -> None:
    monkeypatch.setenv("CI", value)
    with pytest.raises(pytest.fail.Exception, match=r"no Chromium found .* but CI is set"):
        missing_browser()
