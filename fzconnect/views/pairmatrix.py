"""The sand-pair matrix: which sands connect, across the zone and across a single plane."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from bokeh.models import ColumnDataSource, LinearColorMapper, Range1d
from bokeh.models.glyphs import Rect, Scatter

from fzconnect.views import palette
from fzconnect.views.look import (
    LINE,
    SMALL_SIZE,
    add_key,
    area_text,
    base_figure,
    draw,
    one_row,
    relabel,
    set_range,
    set_title,
    tooltip,
)
from fzconnect.views.picture import Picture
from fzconnect.views.selection import Selection, of_pair

if TYPE_CHECKING:
    from fzconnect.network import Pair, Study

__all__ = ["OUTCOMES", "PairMatrixView", "outcome", "pair_matrix_figure"]

OUTCOMES: dict[tuple[bool, bool], str] = {
    (True, True): "connected in both",
    (True, False): "gained: only the zone",
    (False, True): "lost: only the single plane",
    (False, False): "neither",
}
"""What a cell says, by (connected across the zone, connected across the single plane)."""

_KINDS = tuple(OUTCOMES)
_FILLS = (palette.ACCENT_PALE, palette.ACCENT, palette.PAPER, "#F3F5F7")
_INKS = (palette.ACCENT_DEEP, palette.PAPER, palette.INK, "#A9B0B9")
_MARKERS = ("circle", "cross", "x", "dot")
_AXES = 150  # px that title, key and axis take from the figure's height


class PairMatrixView(Picture):
    """Hanging-wall sands down, footwall sands across, one cell a pair."""

    def __init__(self, study: Study, height: int) -> None:
        super().__init__()
        self._height = height
        self._study: Study | None = None
        self._sources = {
            name: ColumnDataSource({column: [] for column in columns})
            for name, columns in _EMPTY.items()
        }
        self._build()
        self.update(study)

    def update(self, study: Study, distance: float | None = None) -> None:
        """Show another study; pairs are of the whole fault, so the distance changes nothing."""
        if study is self._study:
            return
        self._study = study
        sands = study.network.sands
        count = len(sands)
        set_range(self.figure.x_range, -0.5, count - 0.5)
        set_range(self.figure.y_range, count - 0.5, -0.5)
        cell = (self._height - _AXES) / count  # px, about: cells are as tall, and mostly wider
        every = int(np.ceil(0.9 * LINE / cell))
        labels = {float(i): sands[i] for i in range(0, count, every)}
        relabel(self.figure.xaxis[0], labels)
        relabel(self.figure.yaxis[0], labels)
        size = float(np.clip(0.55 * cell, 5, 16))
        across, down = np.meshgrid(np.arange(count, dtype=float), np.arange(count, dtype=float))
        kinds = [(pair.connected, pair.connected_single_plane) for pair in study.pairs]
        numbers = [_KINDS.index(kind) for kind in kinds]
        codes = np.array(numbers, dtype=float)
        self._replace(
            self._sources["cells"],
            {
                "x": across.ravel(),
                "y": down.ravel(),
                "kind": codes,
                "marker": [_MARKERS[number] for number in numbers],
                "size": np.where(codes == len(_KINDS) - 1, 0.6 * size, size),
                "hanging": [pair.hanging_wall_sand for pair in study.pairs],
                "foot": [pair.footwall_sand for pair in study.pairs],
                "words": [_words(pair) for pair in study.pairs],
            },
        )
        zone, plane = (sum(kind[i] for kind in kinds) for i in (0, 1))
        title = f"Sand pairs: {zone} of {len(kinds)}, single plane {plane}"
        set_title(self.figure, title)
        item: Any
        for item, (kind, words) in zip(self._key.items, OUTCOMES.items(), strict=True):
            label = {"value": f"{words} ({kinds.count(kind)})"}
            if item.label != label:
                item.label = label
        self._fit()
        self._draw_mark(self._shown)

    def picked(self, source: str, index: int) -> Selection | None:
        """Return what a tap on a cell means."""
        if self._study is None or source != "cells" or index >= len(self._study.pairs):
            return None
        pair = self._study.pairs[index]
        return of_pair(self._study, pair.hanging_wall_sand, pair.footwall_sand)

    def _draw_mark(self, selection: Selection) -> None:
        sands = self._study.network.sands if self._study else ()
        if selection.pair and set(selection.pair) <= set(sands):
            hanging, foot = (float(sands.index(sand)) for sand in selection.pair)
            self._replace(self._sources["mark"], {"x": [foot], "y": [hanging]})
        else:
            self._replace(self._sources["mark"], {"x": [], "y": []})

    def _build(self) -> None:
        source = self._sources
        plot = self.figure = base_figure(
            self._height,
            title=" ",
            x_range=Range1d(start=0, end=1),
            y_range=Range1d(start=1, end=0),
            x_axis_label="Sand in the footwall",
            y_axis_label="Sand in the hanging wall",
            x_axis_location="above",
        )
        for axis in plot.axis:
            axis.update(major_tick_line_color=None, axis_line_color=None)
        plot.xaxis[0].update(major_label_orientation=0.7, major_label_text_font_size=SMALL_SIZE)
        cells = draw(
            plot,
            Rect,
            "x",
            "y",
            1,
            1,
            source=source["cells"],
            fill_color=_by_kind(_FILLS),
            line_color=palette.RULE,
            line_width=1,
        )
        draw(
            plot,
            Scatter,
            "x",
            "y",
            source=source["cells"],
            marker="marker",
            size="size",
            line_color=_by_kind(_INKS),
            fill_color=_by_kind(_INKS),
            line_width=2.4,
        )
        for colour, width in ((palette.PAPER, 7), (palette.ACCENT_DEEP, 3.5)):
            draw(
                plot,
                Rect,
                "x",
                "y",
                1,
                1,
                source=source["mark"],
                fill_alpha=0,
                line_color=colour,
                line_width=width,
            )
        items = []
        for number, words in enumerate(OUTCOMES.values()):
            ink = palette.ACCENT if _INKS[number] == palette.PAPER else _INKS[number]
            glyph = draw(
                plot,
                Scatter,
                "x",
                "y",
                source=one_row(x=np.nan, y=np.nan),
                marker=_MARKERS[number],
                size=13,
                line_color=ink,
                fill_color=ink,
                line_width=2.4,
            )
            items.append((words, glyph))
        self._key = add_key(plot, items)
        card = tooltip(
            ("@hanging", "in the hanging wall, <b>@foot</b> in the footwall"),
            ("", "@words"),
        )
        self._make_hoverable((cells, card))
        self._make_tappable({"cells": cells})


_EMPTY: dict[str, tuple[str, ...]] = {
    "cells": ("x", "y", "kind", "marker", "size", "hanging", "foot", "words"),
    "mark": ("x", "y"),
}


def _by_kind(colours: tuple[str, ...]) -> Any:
    """Return a colour by the number of the outcome."""
    mapper = LinearColorMapper(palette=list(colours), low=-0.5, high=len(colours) - 0.5)
    return {"field": "kind", "transform": mapper}


def outcome(pair: Pair) -> str:
    """Return in words whether a pair connects across the zone and across a single plane."""
    return OUTCOMES[pair.connected, pair.connected_single_plane]


def _words(pair: Pair) -> str:
    """Return what the hover card says of a pair; short where nothing connects."""
    if not (pair.connected or pair.connected_single_plane):
        return outcome(pair)
    areas = [pair.bottleneck_area, pair.bottleneck_area_single_plane]
    zone, plane = (area_text(area) if area else "none" for area in areas)
    return f"{outcome(pair)}; bottleneck {zone}, on a single plane {plane}"


def pair_matrix_figure(study: Study, *, height: int = 480) -> PairMatrixView:
    """Return the sand-pair matrix of a study.

    Parameters
    ----------
    study : Study
    height : int, default 480
        Pixels.

    Returns
    -------
    PairMatrixView
        With `figure`, `update(study)`, `mark(selection)`, `picked(source, index)` and
        `on_pick(callback)`.
    """
    return PairMatrixView(study, height)
