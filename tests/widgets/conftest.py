"""Widgets without a browser: messages are recorded instead of sent, and leaks are noticed."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import comm
import pytest
from comm.base_comm import BaseComm
from ipywidgets import Widget
from ipywidgets.widgets.widget import _instances


class Wire:
    """Every message that widgets sent, in order."""

    def __init__(self) -> None:
        self.messages: list[dict[str, Any]] = []

    def clear(self) -> None:
        self.messages.clear()

    @property
    def custom(self) -> list[Any]:
        """Contents of custom messages; patches of bokeh documents are such."""
        sent = (message["data"] for message in self.messages)
        return [data["content"] for data in sent if data.get("method") == "custom"]

    def updates(self, name: str) -> list[Any]:
        """Values sent for a trait."""
        sent = (message["data"] for message in self.messages)
        states = [data["state"] for data in sent if data.get("method") == "update"]
        return [state[name] for state in states if name in state]


@pytest.fixture(autouse=True)
def wire(monkeypatch: pytest.MonkeyPatch) -> Iterator[Wire]:
    """Record messages; after the test every widget that it made must be closed."""
    record = Wire()

    class Recorder(BaseComm):
        def publish_msg(self, msg_type: str, data: Any = None, **rest: Any) -> None:
            record.messages.append({"comm_id": self.comm_id, "data": data or {}})

    monkeypatch.setattr(comm, "create_comm", lambda *args, **keys: Recorder(*args, **keys))
    before = set(_instances)
    yield record
    left = [widget for key, widget in _instances.items() if key not in before]
    names = sorted(type(widget).__name__ for widget in left)
    for widget in left:
        Widget.close(widget)
    assert names == [], "widgets were left open"
