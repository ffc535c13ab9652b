"""The common look of all pictures: type, frames, keys, and how numbers and labels are set."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from bokeh.models import ColumnDataSource, FixedTicker
from bokeh.models.annotations.legends import Legend, LegendItem
from bokeh.models.glyph import Glyph
from bokeh.models.glyphs import (
    MultiLine,
    Patch,
    Patches,
    Quad,
    Rect,
    Scatter,
    Segment,
    Text,
)
from bokeh.models.renderers.glyph_renderer import GlyphRenderer
from bokeh.plotting import figure
from numpy.typing import NDArray

from fzconnect.views.palette import INK, PAPER, QUIET, RULE

__all__ = [
    "FONT",
    "LABEL_SIZE",
    "LINE",
    "SMALL_SIZE",
    "add_key",
    "area_text",
    "base_figure",
    "block_text",
    "draw",
    "key_columns",
    "nice_step",
    "number_text",
    "one_row",
    "relabel",
    "set_range",
    "set_title",
    "spread",
    "style_axis",
    "thinned",
    "tooltip",
    "write",
]

FONT = "'Source Sans Pro', 'Segoe UI', 'Helvetica Neue', Arial, sans-serif"
TITLE_SIZE = "16px"
LABEL_SIZE = "14px"
SMALL_SIZE = "13px"
LINE = 16
"""Pixels that one line of small text takes."""

Array = NDArray[np.float64]

_KEY_GLYPH, _CHARACTER = 36, 6.0  # px: a glyph of the key with its gaps, a character beside it


def base_figure(height: int, **options: Any) -> figure:
    """Return an empty figure in the common look; it takes the width it is given.

    Parameters
    ----------
    height : int
        Pixels, axes and title included.
    options
        Passed on to bokeh's `figure`.
    """
    settings: dict[str, Any] = {
        "height": height,
        "sizing_mode": "stretch_width",
        "min_width": 300,
        "tools": "pan,wheel_zoom,box_zoom,reset,save",
        "active_drag": None,
        "active_scroll": None,
        "toolbar_location": "above",
        "background_fill_color": PAPER,
        "border_fill_color": PAPER,
        "outline_line_color": RULE,
    }
    plot = figure(**(settings | options))
    plot.toolbar.logo = None
    plot.toolbar.autohide = True
    title: Any = plot.title
    title.update(text_font=FONT, text_font_size=TITLE_SIZE, text_color=INK, text_font_style="bold")
    for axis in plot.axis:
        style_axis(axis)
    plot.grid.visible = False
    return plot


def style_axis(axis: Any) -> None:
    """Give an axis the common look."""
    axis.update(
        axis_label_text_font=FONT,
        axis_label_text_font_size=LABEL_SIZE,
        axis_label_text_font_style="normal",
        axis_label_text_color=QUIET,
        major_label_text_font=FONT,
        major_label_text_font_size=SMALL_SIZE,
        major_label_text_color=INK,
        axis_line_color=RULE,
        major_tick_line_color=QUIET,
        minor_tick_line_color=None,
    )


def add_key(plot: figure, items: Sequence[tuple[str, GlyphRenderer[Any]]]) -> Legend:
    """Add a key below a figure, in words; each entry shows the glyph of its renderer."""
    key = Legend(
        items=[LegendItem(label=words, renderers=[glyph]) for words, glyph in items],
        orientation="horizontal",
        ncols=2,
        location="left",
        border_line_color=None,
        background_fill_color=None,
        label_text_font=FONT,
        label_text_font_size=SMALL_SIZE,
        label_text_color=INK,
        glyph_width=24,
        glyph_height=16,
        spacing=8,
        margin=2,
    )
    key.update(padding=2)
    plot.add_layout(key, "below")
    return key


def key_columns(labels: Sequence[str], width: float) -> int:
    """Return into how many columns a key goes that has this width, px, for itself.

    Examples
    --------
    >>> key_columns(["sand", "shale", "window", "unfaulted contact"], 250)
    2
    """
    lengths = [_KEY_GLYPH + _CHARACTER * len(label) for label in labels]
    for count in range(len(labels), 1, -1):
        if sum(max(lengths[start::count]) for start in range(count)) <= width:
            return count
    return 1


def one_row(**columns: Any) -> ColumnDataSource:
    """Return a source with one row, for a glyph that only appears in the key."""
    return ColumnDataSource({name: [value] for name, value in columns.items()})


def relabel(axis: Any, labels: dict[float, str]) -> None:
    """Put labels at given places of an axis and nowhere else; silent if nothing changes."""
    places = list(labels)
    ticker = axis.ticker
    if not isinstance(ticker, FixedTicker):
        axis.ticker = FixedTicker(ticks=places, minor_ticks=[])
    elif list(ticker.ticks) != places:
        ticker.ticks = places
    if axis.major_label_overrides != labels:
        axis.major_label_overrides = labels


def set_range(shown: Any, start: float, end: float) -> None:
    """Set both ends of a range, and where `reset` goes; silent if nothing changes."""
    if (shown.start, shown.end) != (start, end):
        shown.update(start=start, end=end, reset_start=start, reset_end=end)


def set_title(plot: figure, text: str) -> None:
    """Set a figure's title; silent if nothing changes."""
    title: Any = plot.title
    if title.text != text:
        title.text = text


def spread(wanted: Sequence[float] | Array, gap: float) -> Array:
    """Return label places that keep a gap and stay as near as can be to the places wanted.

    Parameters
    ----------
    wanted : (n,) sequence, increasing
    gap : float, at least 0
        Least distance between neighbours, in the unit of the places.

    Notes
    -----
    Least squares under the gap: neighbours that would come too close are pooled and centred on
    the mean of what they want (pool-adjacent-violators).

    Examples
    --------
    >>> spread([0.0, 1.0, 10.0], 3.0).tolist()
    [-1.0, 2.0, 10.0]
    """
    pools: list[tuple[float, int]] = []
    for rank, place in enumerate(wanted):
        mean, size = float(place) - gap * rank, 1
        while pools and pools[-1][0] > mean:
            before, count = pools.pop()
            mean = (mean * size + before * count) / (size + count)
            size += count
        pools.append((mean, size))
    places = np.array([mean for mean, size in pools for _ in range(size)])
    return np.asarray(places + gap * np.arange(len(places)), dtype=float)


def thinned(
    wanted: Sequence[float] | Array, weight: Sequence[float] | Array, gap: float
) -> list[int]:
    """Return which labels fit with a gap between them, heaviest first; indices in order."""
    kept: list[int] = []
    for index in np.argsort(-np.asarray(weight), kind="stable").tolist():
        if all(abs(wanted[index] - wanted[other]) >= gap for other in kept):
            kept.append(index)
    return sorted(kept)


def nice_step(length: float, most: int) -> float:
    """Return the smallest of 1, 2, 5 times a power of ten that fits at most `most` times.

    Examples
    --------
    >>> nice_step(3100, 4), nice_step(1, 2)
    (1000.0, 0.5)
    """
    power = 10.0 ** np.floor(np.log10(length / most) - 1)
    steps = (power * factor for factor in (1, 2, 5, 10, 20, 50, 100))
    return float(next(step for step in steps if length / step <= most + 1e-9))


def number_text(value: float) -> str:
    """Return a number with thin spaces between thousands, to three digits if it is small.

    Examples
    --------
    >>> number_text(12345.6), number_text(0.01234)
    ('12\u202f346', '0.0123')
    """
    return f"{value:,.0f}".replace(",", "\u202f") if abs(value) >= 100 else f"{value:.3g}"


def area_text(value: float) -> str:
    """Return an area, given in m2, in words."""
    return f"{number_text(value)} m²"


def draw(
    plot: figure, kind: type[Glyph], *fields: Any, source: ColumnDataSource, **style: Any
) -> GlyphRenderer[Any]:
    """Add a glyph to a figure and return its renderer.

    Parameters
    ----------
    plot : figure
    kind : subclass of bokeh's Glyph
    fields
        Columns, or values, for the glyph's coordinates in their usual order.
    source : ColumnDataSource
    style
        Properties of the glyph.

    Notes
    -----
    bokeh's own methods (`figure.segment` and so on) add copies of every glyph for states that no
    picture uses; without them a figure is built and stored several times faster.
    """
    coordinates = dict(zip(_COORDINATES[kind], fields, strict=False))
    renderer = plot.add_glyph(source, kind(**coordinates, **style))
    # a tap chooses, and marks are drawn over the data: what is chosen or not keeps its look
    renderer.update(selection_glyph=None, nonselection_glyph=None)
    return renderer


_COORDINATES: dict[type[Glyph], tuple[str, ...]] = {
    MultiLine: ("xs", "ys"),
    Patch: ("x", "y"),
    Patches: ("xs", "ys"),
    Quad: ("left", "right", "top", "bottom"),
    Rect: ("x", "y", "width", "height"),
    Scatter: ("x", "y"),
    Segment: ("x0", "y0", "x1", "y1"),
    Text: ("x", "y", "text"),
}


def block_text(block: str) -> str:
    """Return a block's name as it stands in a sentence.

    Examples
    --------
    >>> block_text("footwall"), block_text("lens 1")
    ('the footwall', 'lens 1')
    """
    return block if block.startswith("lens") else f"the {block}"


def write(plot: figure, source: ColumnDataSource, **style: Any) -> GlyphRenderer[Any]:
    """Add text to a figure from the columns x, y and text of a source."""
    settings: dict[str, Any] = {
        "text_font": {"value": FONT},
        "text_font_size": SMALL_SIZE,
        "text_color": INK,
        "text_baseline": "middle",
    }
    return draw(plot, Text, "x", "y", "text", source=source, **(settings | style))


def tooltip(*rows: tuple[str, str]) -> str:
    """Return a hover card: a bold first row, then names and values. Values are bokeh fields."""
    head, *rest = rows
    lines = "".join(
        f'<div><span style="color:{QUIET}">{name}</span> {value}</div>' for name, value in rest
    )
    return (
        f'<div style="font:14px {FONT};color:{INK};padding:2px 4px;max-width:300px">'
        f"<div><b>{head[0]}</b> {head[1]}</div>{lines}</div>"
    )
