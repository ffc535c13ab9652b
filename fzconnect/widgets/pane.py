"""The one place where a bokeh layout becomes a notebook widget.

Everything that is known about the bridge between bokeh and ipywidgets is kept here, so that the
rest of the package never meets it:

- The bridge's browser side reads `window.Bokeh` when it draws, and fails without it. So the
  library itself is put out as an output just before the widget, by every cell that shows one:
  each cell then stands alone, also when it is run again, when an earlier cell was deleted, or
  when the page is loaded anew and the cells are drawn from what was saved. `output_notebook`
  does the same by hand, but puts out every component twice (about 8 MB); what a layout needs is
  about 1.3 MB.
- The bridge draws what it serialised when it was built, not what the layout is now. So the
  layout is serialised again just before it is shown, and whenever the browser asks for the whole
  state, as it does after a page is loaded anew.
- Every single change of a bokeh property costs three messages, and two more for every array. A
  patch may hold many changes, so those made inside `FigurePane.batch` go as one, with the arrays
  inside its text: three messages for a whole step of a slider.
- The bridge's browser side sends every change that it has taken from Python back to Python, whole
  columns included, each by itself: most of the work of a slider step, on both sides. BokehJS marks
  such changes as not to be told on (`sync`), and the script that loads it makes that count.
- Closing the bridge twice raises a KeyError; a pane may be closed as often as one likes.
"""

from __future__ import annotations

import json
from collections.abc import Iterator
from contextlib import contextmanager
from hashlib import sha256
from math import isfinite
from typing import Any

from bokeh.core.serialization import Serializer
from bokeh.document.events import (
    ColumnDataChangedEvent,
    ColumnsStreamedEvent,
    DocumentPatchedEvent,
)
from bokeh.document.json import PatchJson
from bokeh.embed.bundle import bundle_for_objs_and_resources
from bokeh.models import LayoutDOM
from bokeh.protocol.messages.patch_doc import patch_doc
from bokeh.resources import INLINE
from IPython.display import Javascript, display
from ipywidgets import Layout, Widget
from jupyter_bokeh import BokehModel

__all__ = ["FigurePane", "bokehjs", "show"]


class _Bridge(BokehModel):
    """The bridge widget, with fresh state for a newly loaded page and one patch for a batch."""

    _held: list[DocumentPatchedEvent] | None = None

    def get_state(self, key: Any = None, drop_defaults: bool = False) -> Any:
        # The whole state is asked for when a page is loaded anew while the kernel lives on. What
        # was serialised at the last display is out of date by then.
        state = super().get_state(key=key, drop_defaults=drop_defaults)
        if key is None and self.comm is not None and "render_bundle" in state:
            bundle = self._model_to_traits(self._model)
            state["render_bundle"] = self.trait_metadata("render_bundle", "to_json")(bundle, self)
        return state

    def _document_patched(self, event: DocumentPatchedEvent) -> None:
        if self._held is None or event.setter is self:
            super()._document_patched(event)
            return
        if isinstance(event, ColumnsStreamedEvent):
            # Columns are read when they are sent: rows added after a change that is still held
            # would go twice, once with the columns and once by themselves.
            event = ColumnDataChangedEvent(event.document, event.model, "data")
        # An older change of the same thing takes the newer value instead of both being sent.
        if not any(_combine(old, event) for old in reversed(self._held)):
            self._held.append(event)

    def close(self) -> None:
        if self.comm is not None:
            super().close()

    @contextmanager
    def _one_patch(self) -> Iterator[None]:
        if self._held is not None:  # an outer batch sends for the inner ones
            yield
            return
        self._held = []
        try:
            yield
        finally:
            # Also after an error: what has changed by then must reach the browser.
            events, self._held = self._held, None
            self._send_patch(events)

    def _send_patch(self, events: list[DocumentPatchedEvent]) -> None:
        if not events or self.comm is None:
            return
        message = _patch(events)
        for part in (message.header_json, message.metadata_json, message.content_json):
            self.send({"msg": "patch", "payload": part})
        for buffer in message.buffers:
            self.send({"msg": "patch", "payload": json.dumps(buffer.ref)})
            self.send({"msg": "patch"}, [buffer.to_bytes()])


class _Serializer(Serializer):
    """Bokeh's serializer with a way past lists of plain numbers or text.

    It visits every number of nested lists by itself, which took most of a slider step.
    """

    def _encode_list(self, obj: list[Any]) -> Any:
        if _is_plain(obj) or (set(map(type, obj)) == {list} and all(map(_is_plain, obj))):
            return obj
        return super()._encode_list(obj)


def _is_plain(values: list[Any]) -> bool:
    """Tell whether JSON writes a list as it is: text alone, or finite numbers alone."""
    kinds = set(map(type, values))
    return kinds == {str} or (kinds == {float} and all(map(isfinite, values)))


def _patch(events: list[DocumentPatchedEvent]) -> patch_doc:
    """Return the message that `Protocol().create("PATCH-DOC", events)` makes, sooner."""
    models = events[0].document.models
    # arrays inside the text: by themselves each would be two messages more
    serializer = _Serializer(references=models.synced_references, deferred=False)
    content = PatchJson(events=serializer.encode(events))
    models.flush_synced(lambda model: not serializer.has_ref(model))
    message = patch_doc(patch_doc.create_header(), {}, content)
    message.add_buffers(*serializer.buffers)
    return message


def _combine(old: DocumentPatchedEvent, new: DocumentPatchedEvent) -> bool:
    """Return whether sending the old change, late, sends the new one as well."""
    if isinstance(old, ColumnDataChangedEvent) and isinstance(new, ColumnDataChangedEvent):
        return old.model is new.model and old.cols is None
    return old.combine(new)


class FigurePane:
    """One bokeh layout, shown as a notebook widget.

    Build the layout once and change its data; a pane never takes another layout. Figures that
    share sources, ranges or tools must be in one layout, because a bokeh model belongs to one
    document.

    Parameters
    ----------
    layout : bokeh.models.LayoutDOM
        A figure, or a row, column or grid of figures.
    width : str, default "100%"
        CSS width of the pane. In an `HBox` it takes the room that the others leave.

    Attributes
    ----------
    layout : bokeh.models.LayoutDOM
        As given.
    widget : ipywidgets.DOMWidget
        What goes into ipywidgets boxes. Show the outermost box by `show(box, pane)`. To hide the
        pane set `widget.layout.display = "none"`, to bring it back `None`; changes made while it
        is hidden arrive. Taking it out of its box and back shows an old state.

    Notes
    -----
    Displayed in two cells, both follow every change made in Python; what a hand does in one
    (a selection, a pan of the axes) reaches Python but not the other one, until the next display.

    Examples
    --------
    >>> from bokeh.plotting import figure
    >>> pane = FigurePane(figure(width=200, height=100))
    >>> with pane.batch():
    ...     pane.layout.title.text = "Section"
    ...     pane.layout.height = 120
    >>> pane.close()
    """

    def __init__(self, layout: LayoutDOM, *, width: str = "100%") -> None:
        if not isinstance(layout, LayoutDOM):
            # Refused here: a bridge that fails half-built complains again when it is collected.
            msg = f"layout must be a bokeh figure or layout, got {type(layout).__name__}"
            raise TypeError(msg)
        self.layout = layout
        # A stretching figure collapses beside another widget in an HBox unless its pane may grow
        # from nothing and shrink below its content.
        self.widget = _Bridge(layout, layout=Layout(width=width, flex="1 1 0", min_width="0"))

    @property
    def closed(self) -> bool:
        """Whether the pane was closed, by `close` or with all widgets of the notebook."""
        return self.widget.comm is None

    def refresh(self) -> None:
        """Serialise the layout as it is now; pages that show it draw it anew."""
        if not self.closed:
            self.widget.update_from_model(self.layout)

    @contextmanager
    def batch(self) -> Iterator[None]:
        """Send all changes made inside as one patch; batches may be nested.

        A property changed more than once is sent once, with its last value.
        """
        if self.closed:
            yield
            return
        with self.widget._one_patch():
            yield

    def show(self) -> None:
        """Display the pane by itself in the current cell."""
        show(self.widget, self)

    def _ipython_display_(self, **_: Any) -> None:
        self.show()

    def close(self) -> None:
        """Take the pane off every page and free it; safe to call again."""
        if not self.closed:
            self.widget.close()
            self.widget.layout.close()

    def __repr__(self) -> str:
        state = "closed" if self.closed else "open"
        return f"FigurePane({type(self.layout).__name__}, {state})"


def bokehjs(*layouts: LayoutDOM) -> str:
    """Return JavaScript that loads what the layouts need of BokehJS, from the installed package.

    Parameters
    ----------
    *layouts : bokeh.models.LayoutDOM
        The layouts to be shown; none at all means every component.

    Returns
    -------
    str
        A script that runs without a network and does nothing for parts that are there already.
    """
    bundle = bundle_for_objs_and_resources(list(layouts) or None, INLINE)
    # Loaded twice, BokehJS keeps its first copy anyway, but only after the page has read all of
    # the second; a mark on the first spares that.
    parts = "\n".join(
        f"part({json.dumps(_mark(source))}, function() {{\n{source}\n}});"
        for source in bundle.js_raw
    )
    return f"""(function(root) {{
const part = function(mark, run) {{
  const there = (root.Bokeh || {{}}).fzconnect_parts || [];
  if (there.includes(mark)) return;
  run.call(root);
  root.Bokeh.fzconnect_parts = there.concat([mark]);
}};
{parts}
{_QUIET}
}})(window);"""


_QUIET = """
const {Document} = root.Bokeh.require("document/document");
if (!Document.fzconnect_is_quiet) {
  Document.fzconnect_is_quiet = true;
  const tell = Document.prototype._trigger_on_change;
  const kinds = ["ModelChanged", "ColumnDataChanged", "ColumnsStreamed", "ColumnsPatched"];
  Document.prototype._trigger_on_change = function(event) {
    if (event.sync !== false || !kinds.includes(event.kind)) tell.call(this, event);
  };
}
"""


def _mark(source: str) -> str:
    return sha256(source.encode()).hexdigest()[:16]


def show(root: Widget, *panes: FigurePane) -> None:
    """Display a widget that holds figure panes, so that they draw and draw what is true now.

    Parameters
    ----------
    root : ipywidgets.Widget
        The outermost box, or a pane's own widget.
    *panes : FigurePane
        Every pane inside it.

    Notes
    -----
    A class that shows such a box calls this from `_ipython_display_`, and needs no other call in
    the notebook, neither `output_notebook` nor an import of bokeh.
    """
    if panes:
        display(Javascript(bokehjs(*(pane.layout for pane in panes))))
    for pane in panes:
        pane.refresh()
    display(root)
