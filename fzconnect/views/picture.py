"""What all pictures share: one figure, sources that can be tapped, marks over the data."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Callable, Mapping
from contextlib import AbstractContextManager, nullcontext
from typing import Any

from bokeh.models import ColumnDataSource, HoverTool, TapTool
from bokeh.models.annotations.legends import Legend
from bokeh.models.renderers.glyph_renderer import GlyphRenderer
from bokeh.plotting import figure

from fzconnect.views.look import key_columns
from fzconnect.views.selection import NOTHING, Selection

__all__ = ["Picture"]

ASSUMED_WIDTH = 560  # px, until a browser reports the real one


class Picture(ABC):
    """A bokeh figure that is built once and then only follows its data.

    Attributes
    ----------
    figure : bokeh.plotting.figure
    tappable : dict of str to bokeh.models.ColumnDataSource
        Sources whose glyphs can be chosen by a tap, by name; where a tap hits several, the first
        counts.

    Notes
    -----
    Every source is replaced by one assignment of `source.data`, so that a change is one message.
    """

    figure: figure
    batch: Callable[[], AbstractContextManager[None]] = staticmethod(nullcontext)
    """Gives a context for drawing: the `batch` of the pane that shows the figure."""
    width: float = ASSUMED_WIDTH
    """Pixels across that the data have."""
    _beside_key = 0  # px right of the data that a key may take as well

    def __init__(self) -> None:
        self.tappable: dict[str, ColumnDataSource] = {}
        self._callbacks: list[Callable[[Selection], None]] = []
        self._shown = NOTHING
        self._reported = NOTHING
        self._quiet = False

    @abstractmethod
    def picked(self, source: str, index: int) -> Selection | None:
        """Return what a tap on a glyph means.

        Parameters
        ----------
        source : str
            A name in `tappable`.
        index : int
            Row of the source.

        Returns
        -------
        Selection or None
            None if the row is not there any more.
        """

    @abstractmethod
    def _draw_mark(self, selection: Selection) -> None:
        """Replace the overlay sources by those of a selection."""

    def mark(self, selection: Selection) -> None:
        """Mark a selection over the data; `NOTHING` takes the mark away."""
        if selection != self._reported:
            self._clear_taps()
            self._reported = NOTHING
        self._shown = selection
        self._draw_mark(selection)

    def on_pick(self, callback: Callable[[Selection], None]) -> None:
        """Call back with a selection whenever a tap chooses one, or `NOTHING` at an empty place."""
        if not self._callbacks:
            # only now: bokeh warns when a figure that Python listens to is written to a file
            self.figure.on_change("inner_width", self._on_width)
            for source in self.tappable.values():
                source.selected.on_change("indices", self._on_indices)
        self._callbacks.append(callback)

    def _fit(self) -> None:
        """Set what depends on the width: the key, and in some pictures room for labels."""
        for key in (part for part in self.figure.below if isinstance(part, Legend)):
            # the key may reach under the labels right of the data
            items: Any = key.items
            labels = [item.label["value"] for item in items]
            columns = key_columns(labels, self.width + self._beside_key)
            if key.ncols != columns:
                key.ncols = columns

    def _on_width(self, _attr: str, _old: object, new: int) -> None:
        # a browser has laid the figure out, or its window has another width now
        if new > 0:
            self.width = new
            with self.batch():
                self._fit()

    def _make_tappable(self, renderers: Mapping[str, Any]) -> None:
        """Let taps choose glyphs of these renderers."""
        for name, renderer in renderers.items():
            self.tappable[name] = renderer.data_source
        self.figure.add_tools(TapTool(renderers=list(renderers.values())))

    def _make_hoverable(self, *cards: tuple[GlyphRenderer[Any], str]) -> None:
        """Give renderers a hover card each; the first ones left of the pointer, the last one right.

        So two cards stay apart where a window lies over a layer.
        """
        last = cards[-1][1]
        for renderer, card in cards:
            tool = HoverTool(
                renderers=[renderer],
                tooltips=card,
                attachment="right" if card == last else "left",
                point_policy="follow_mouse",
                visible=False,
            )
            self.figure.add_tools(tool)

    def _replace(self, source: ColumnDataSource, data: dict[str, Any]) -> None:
        """Replace a source's rows; what was tapped in the old rows is forgotten first."""
        if source.selected.indices:
            self._quiet = True
            source.selected.indices = []
            self._quiet = False
        old: Any = source.data
        if any(len(column) for column in (*data.values(), *old.values())):
            source.data = data

    def _clear_taps(self) -> None:
        self._quiet = True
        for source in self.tappable.values():
            if source.selected.indices:
                source.selected.indices = []
        self._quiet = False

    def _on_indices(self, _attr: str, _old: object, _new: object) -> None:
        if self._quiet:
            return
        chosen: Selection | None = NOTHING
        for name, source in self.tappable.items():
            if source.selected.indices:
                chosen = self.picked(name, source.selected.indices[-1])  # the one on top
                break
        # one tap that hits two glyphs arrives as two changes: tell it once
        if chosen is None or chosen == self._reported:
            return
        self._reported = chosen
        for callback in self._callbacks:
            callback(chosen)
