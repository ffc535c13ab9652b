"""What the section is drawn with: the glyphs, built once, whose sources the view then replaces."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from bokeh.models import ColumnDataSource, DataRange1d, LinearAxis, LinearColorMapper
from bokeh.models.glyphs import MultiLine, Patches, Quad, Segment
from bokeh.plotting import figure

from fzconnect.views import palette
from fzconnect.views.look import (
    LABEL_SIZE,
    SMALL_SIZE,
    add_key,
    base_figure,
    draw,
    one_row,
    style_axis,
    write,
)

__all__ = ["SectionPlot", "section_plot", "section_sources"]

_SEGMENT = ("x0", "y0", "x1", "y1")
_LAYER = ("xs", "ys", "name", "vsh", "top", "base", "thickness")
_TEXT = ("x", "y", "text", "angle", "align", "baseline", "x0", "y0", "y1")
_COLUMNS: dict[str, tuple[str, ...]] = {
    "frame": ("left", "right", "top", "bottom"),
    "sands": _LAYER,
    "shales": _LAYER,
    "strands": (*_SEGMENT, "throw", "share"),
    "tips": (*_SEGMENT, "throw", "share"),
    "windows": (*_SEGMENT, "name", "strand", "area"),
    "contacts": (*_SEGMENT, "name", "strand", "area"),
    "strand names": (*_TEXT, "throw", "share"),
    "block names": _TEXT,
    "marks": _SEGMENT,
    "marked sands": ("xs", "ys"),
}


@dataclass(frozen=True)
class SectionPlot:
    """A drawn section without data.

    Attributes
    ----------
    figure : bokeh.plotting.figure
    name_axes : (axis, axis)
        Axes that carry the names of sands, beside the footwall and beside the hanging wall.
    renderers : dict of str to renderer
        By the name of their source: sands, shales, windows, contacts, strand names.
    """

    figure: figure
    name_axes: tuple[Any, Any]
    renderers: dict[str, Any]


def section_sources() -> dict[str, ColumnDataSource]:
    """Return the empty sources of a section, by name."""
    return {
        name: ColumnDataSource({column: [] for column in columns})
        for name, columns in _COLUMNS.items()
    }


def section_plot(source: dict[str, ColumnDataSource], height: int) -> SectionPlot:
    """Return the glyphs of a section over its sources; depth is down, scales are equal.

    Parameters
    ----------
    source : dict
        As `section_sources` gives it.
    height : int
        Pixels.
    """
    x_range = DataRange1d(range_padding=0)
    y_range = DataRange1d(flipped=True, range_padding=0)
    plot = base_figure(
        height,
        x_range=x_range,
        y_range=y_range,
        match_aspect=True,
        y_axis_label="Depth, m",
        x_axis_label="Across the fault, m",
    )
    name_axes = (LinearAxis(), LinearAxis())
    for axis in name_axes:
        style_axis(axis)
        axis.update(axis_line_color=None, major_tick_out=4, major_tick_in=0)
    plot.left = [name_axes[0], *plot.left]  # names stand next to the rock
    plot.right = [name_axes[1], *plot.right]
    plot.yaxis[1].axis_line_color = None
    frame = draw(
        plot,
        Quad,
        "left",
        "right",
        "top",
        "bottom",
        source=source["frame"],
        fill_alpha=0,
        line_alpha=0,
    )
    x_range.renderers = [frame]
    y_range.renderers = [frame]
    shades = {
        "shales": (palette.SHALES, palette.SHALE_SCALE, palette.SHALE_EDGE, None),
        "sands": (palette.SANDS, palette.SAND_SCALE, palette.SAND_EDGE, "dot"),
    }
    layers = {}
    for name, (colours, (low, high), edge, hatch) in shades.items():
        mapper = LinearColorMapper(palette=list(colours), low=low, high=high)
        style: dict[str, Any] = {
            "line_color": edge,
            "line_width": 0.8 if hatch else 0.4,
            "hatch_pattern": hatch,
            "hatch_color": palette.SAND_EDGE,
            "hatch_alpha": 0.55,
            "hatch_scale": 7,
            "hatch_weight": 1,
        }
        layers[name] = draw(
            plot,
            Patches,
            "xs",
            "ys",
            source=source[name],
            fill_color={"field": "vsh", "transform": mapper},
            **style,
        )
        layers[f"{name} key"] = draw(
            plot,
            Patches,
            "xs",
            "ys",
            source=one_row(xs=[0.0], ys=[0.0]),
            fill_color=colours[len(colours) // (3 if hatch else 2)],
            **style,
        )
    draw(
        plot,
        MultiLine,
        "xs",
        "ys",
        source=source["marked sands"],
        line_color=palette.PAPER,
        line_width=5,
    )
    draw(
        plot,
        MultiLine,
        "xs",
        "ys",
        source=source["marked sands"],
        line_color=palette.ACCENT_DEEP,
        line_width=2.5,
    )
    ends = ("x0", "y0", "x1", "y1")
    strands = draw(
        plot, Segment, *ends, source=source["strands"], line_color=palette.INK, line_width=2.2
    )
    draw(
        plot,
        Segment,
        *ends,
        source=source["tips"],
        line_color=palette.INK,
        line_alpha=0.55,
        line_width=1.2,
        line_dash=[5, 4],
    )
    draw(
        plot,
        Segment,
        *ends,
        source=source["contacts"],
        line_color=palette.PAPER,
        line_width=5,
        line_alpha=0.7,
    )
    contacts = draw(
        plot,
        Segment,
        *ends,
        source=source["contacts"],
        line_color=palette.ACCENT,
        line_width=3,
        line_dash=[2, 3],
    )
    draw(plot, Segment, *ends, source=source["windows"], line_color=palette.PAPER, line_width=13)
    windows = draw(
        plot, Segment, *ends, source=source["windows"], line_color=palette.ACCENT, line_width=10
    )
    draw(plot, Segment, *ends, source=source["marks"], line_color=palette.PAPER, line_width=20)
    draw(
        plot,
        Segment,
        *ends,
        source=source["marks"],
        line_color=palette.ACCENT_DEEP,
        line_width=15,
    )
    names = {}
    for name, colour, weight in (
        ("strand names", palette.INK, "bold"),
        ("block names", palette.QUIET, "normal"),
    ):
        draw(
            plot,
            Segment,
            "x0",
            "y0",
            "x",
            "y1",
            source=source[name],
            line_color=palette.QUIET,
            line_width=0.8,
        )
        names[name] = write(
            plot,
            source[name],
            angle="angle",
            text_align="align",
            text_baseline="baseline",
            text_font_size=LABEL_SIZE if weight == "bold" else SMALL_SIZE,
            text_font_style=weight,
            text_color=colour,
        )
    add_key(
        plot,
        [
            ("sand", layers["sands key"]),
            ("shale", layers["shales key"]),
            ("strand", strands),
            ("window", _key_line(plot, palette.ACCENT, 10)),
            ("unfaulted contact", _key_line(plot, palette.ACCENT, 3, [2, 3])),
            ("tip: no strand", _key_line(plot, palette.QUIET, 1.2, [5, 4])),
        ],
    )
    renderers = {
        "sands": layers["sands"],
        "shales": layers["shales"],
        "strand names": names["strand names"],
        "windows": windows,
        "contacts": contacts,
    }
    return SectionPlot(plot, name_axes, renderers)


def _key_line(plot: Any, colour: str, width: float, dash: Any = "solid") -> Any:
    """Return a line that only the key shows."""
    source = one_row(x0=0.0, y0=0.0, x1=0.0, y1=0.0)
    return draw(
        plot, Segment, *_SEGMENT, source=source, line_color=colour, line_width=width, line_dash=dash
    )
