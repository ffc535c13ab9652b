"""Strand faces: a fault-plane map of every strand side by side, and of the single plane last."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from bokeh.models import ColumnDataSource, FixedTicker, Range1d
from bokeh.models.glyphs import MultiLine, Patch, Patches, Quad, Segment
from numpy.typing import NDArray

from fzconnect.views import palette
from fzconnect.views.look import (
    LABEL_SIZE,
    LINE,
    SMALL_SIZE,
    add_key,
    area_text,
    base_figure,
    draw,
    nice_step,
    number_text,
    one_row,
    set_range,
    spread,
    thinned,
    tooltip,
    write,
)
from fzconnect.views.outline import closed_bands, visible_corners, window_outlines
from fzconnect.views.picture import Picture
from fzconnect.views.selection import Selection, of_edge, of_pair

if TYPE_CHECKING:
    from fzconnect.geometry import FaultZone
    from fzconnect.network import Study

__all__ = ["FacesView", "faces_figure"]

Array = NDArray[np.float64]

_GAP = 0.07
"""Gap between facets, part of the fault's length."""
_LEADER = 0.035
"""Length of the line from a band to its name, part of the width of all facets."""
_PLANE = 88  # px that the title of the last facet takes
_AXES = 150  # px that title, key and axis take from the figure's height
_UNSEEN = 0.35
"""Part of a pixel by which an outline may be off."""


class FacesView(Picture):
    """Fault-plane maps of all strands and of the single plane in one figure."""

    def __init__(self, study: Study, distance: float, height: int) -> None:
        super().__init__()
        self._height = height
        self._study: Study | None = None
        self._sources = {
            name: ColumnDataSource({column: [] for column in columns})
            for name, columns in _EMPTY.items()
        }
        self._build()
        self.update(study, distance)

    def update(self, study: Study, distance: float) -> None:
        """Show another study, or the section line at another distance, m."""
        if study is not self._study:
            self._study = study
            self._fit()
            self._bands(study)
            self._windows(study)
            self._draw_mark(self._shown)
        self._section_line(distance)

    def picked(self, source: str, index: int) -> Selection | None:
        """Return what a tap on a window or an unfaulted contact means."""
        found = self._picks.get(source, ())
        if index >= len(found) or self._study is None:
            return None
        edge, on_plane = found[index]
        if not on_plane:
            return of_edge(self._study, edge)
        lower, upper = (node.partition(": ")[2] for node in edge)
        return of_pair(self._study, upper, lower)

    def _fit(self) -> None:
        super()._fit()
        if self._study is not None:
            self._lay_out(self._study)

    def _lay_out(self, study: Study) -> None:
        """Set the facets' offsets, the ranges, the ticks and the facet titles."""
        zone = study.zone
        first, length = float(zone.stations[0]), zone.length
        count = zone.strand_count + 1
        self._offsets: Array = np.arange(count, dtype=float) * length * (1 + _GAP)
        self._offsets[-1] += _GAP * length  # the single plane stands a little apart
        self._end = float(self._offsets[-1]) + length
        tops, bases = zone.body_faces()
        top, base = float(tops.min()), float(bases.max())
        pad = 0.04 * (base - top)
        self._top, self._base = top - pad, base + pad
        self._pixel = (base - top + 2 * pad) / max(1, self._height - _AXES)
        longest = max(len(body.name) for body in zone.bodies)
        # names stand outside the first and the last facet, also in a narrow figure
        room = min(8 * min(longest, 12) + 16, 0.25 * self.width)  # px on either side
        beside = (_LEADER + room / (self.width - 2 * room)) * self._end
        facet = length / (self._end + 2 * beside) * self.width  # px
        set_range(self.figure.x_range, -beside, self._end + beside)
        foot = self._base + 24 * self._pixel  # below it stands the axis, above it are its labels
        set_range(self.figure.y_range, foot, self._top - 22 * self._pixel)
        step = nice_step(length, max(1, int(facet / 56)))
        ticks = np.arange(np.ceil(first / step) * step, first + length + 1e-6 * step, step)
        marks = [
            (float(offset + tick - first), number_text(float(tick)))
            for offset in self._offsets
            for tick in ticks
            # the last label of a facet would run into the first one of the next
            if offset == self._offsets[-1] or tick - first <= 0.88 * length
        ]
        self._sources["ticks"].data = {
            "x": [x for x, _ in marks],
            "y": [self._base + 14 * self._pixel] * len(marks),
            "text": [text for _, text in marks],
            "y0": [self._base] * len(marks),
            "y1": [self._base + 5 * self._pixel] * len(marks),
        }
        ends = f"{number_text(first)} to {number_text(first + length)}"
        self.figure.xaxis[0].axis_label = f"Along the fault, m: {ends} in each frame"
        longest = max(len(name) for name in zone.strand_names)
        prefix = "strand " if facet > 9 * (7 + longest) else ""
        plane = "single plane" if facet + room > _PLANE else "plane"
        self._sources["titles"].data = {
            "x": self._offsets,
            "y": np.full(count, self._top - 11 * self._pixel),
            "text": [*(f"{prefix}{name}" for name in zone.strand_names), plane],
        }
        self._sources["frames"].data = {
            "left": self._offsets,
            "right": self._offsets + length,
            "top": np.full(count, self._top),
            "bottom": np.full(count, self._base),
        }

    def _bands(self, study: Study) -> None:
        """Replace the sand bands of both sides, each side one glyph, and the names beside them."""
        zone, plane = study.zone, study.single_plane.zone
        along = zone.stations - zone.stations[0]
        tops, bases = zone.body_faces()
        plane_tops, plane_bases = plane.body_faces()
        tops, bases = np.concatenate([tops, plane_tops]), np.concatenate([bases, plane_bases])
        lines = np.concatenate([tops, bases]).reshape(-1, len(along))
        whole = np.zeros(len(along), dtype=np.intp)
        kept = visible_corners(along, lines, whole, _UNSEEN * self._pixel)
        x = self._offsets[:, np.newaxis] + along[kept]
        for side, name in enumerate(("footwall bands", "hanging bands")):
            self._sources[name].data = closed_bands(
                x, tops[:, side][..., kept], bases[:, side][..., kept]
            )
        reach = _LEADER * self._end
        self._names("names left", zone, tops[0, 0, :, 0], bases[0, 0, :, 0], 0.0, -reach)
        ends = tops[-1, 1, :, -1], bases[-1, 1, :, -1]
        self._names("names right", zone, *ends, self._end, reach)

    def _names(
        self, name: str, zone: FaultZone, top: Array, base: Array, at: float, reach: float
    ) -> None:
        """Name the bands at one end of the figure, moved apart, with leaders to the bands."""
        middle, gap = 0.5 * (top + base), LINE * self._pixel
        most = int((self._base - self._top) / gap)
        rows = np.argsort(-(base - top), kind="stable")[:most]
        rows = np.sort(rows)
        places = np.clip(spread(middle[rows], gap), self._top, self._base)
        rows = rows[thinned(places, (base - top)[rows], 0.8 * gap)] if len(rows) else rows
        places = np.clip(spread(middle[rows], gap), self._top, self._base)
        count = len(rows)
        self._sources[name].data = {
            "x": [at + reach * 1.1] * count,
            "y": places.tolist(),
            "text": [zone.bodies[i].name for i in rows],
            "x0": [at + 0.1 * reach] * count,
            "x1": [at + reach] * count,
            "y0": middle[rows].tolist(),
        }

    def _windows(self, study: Study) -> None:
        """Replace the windows and unfaulted contacts of all facets."""
        rows: dict[str, list[tuple[Any, ...]]] = {"windows": [], "contacts": []}
        picks: dict[str, list[tuple[tuple[str, str], bool]]] = {"windows": [], "contacts": []}
        last = len(self._offsets) - 1
        for windows, on_plane in ((study.windows, False), (study.single_plane.windows, True)):
            zone = windows.zone
            blocks, names = zone.block_names, [body.name for body in zone.bodies]
            facet = np.full(len(windows), last) if on_plane else windows.strand - 1
            shift = self._offsets[facet] - float(zone.stations[0])
            listed = zip(
                *window_outlines(windows, shift, _UNSEEN * self._pixel),
                windows.strand.tolist(),
                windows.footwall_body.tolist(),
                windows.hanging_wall_body.tolist(),
                windows.is_unfaulted.tolist(),
                windows.area.tolist(),
                strict=True,
            )
            for xs, ys, strand, a, b, unfaulted, area in listed:
                kind = "contacts" if unfaulted else "windows"
                where = "single plane" if on_plane else f"strand {zone.strand_names[strand - 1]}"
                rows[kind].append(
                    (xs, ys, f"{names[a]} against {names[b]}", where, area_text(area))
                )
                edge = (f"{blocks[strand - 1]}: {names[a]}", f"{blocks[strand]}: {names[b]}")
                picks[kind].append((edge, on_plane))
        self._picks = picks
        for kind, found in rows.items():
            columns = list(zip(*found, strict=True)) or [()] * 5
            data = dict(zip(_WINDOW, map(list, columns), strict=True))
            self._replace(self._sources[kind], data)

    def _section_line(self, distance: float) -> None:
        if self._study is None:
            return
        x = self._offsets + distance - float(self._study.zone.stations[0])
        self._sources["section"].data = {
            "x0": x,
            "y0": np.full(len(x), self._top),
            "x1": x,
            "y1": np.full(len(x), self._base),
        }

    def _draw_mark(self, selection: Selection) -> None:
        chosen, on_plane = set(selection.edges), set(selection.plane_edges)
        xs, ys = [], []
        for kind in ("windows", "contacts"):
            data = self._sources[kind].data
            for row, (edge, plane) in enumerate(self._picks[kind]):
                if edge in (on_plane if plane else chosen):
                    xs.append([*data["xs"][row], data["xs"][row][0]])
                    ys.append([*data["ys"][row], data["ys"][row][0]])
        self._replace(self._sources["marks"], {"xs": xs, "ys": ys})

    def _build(self) -> None:
        source = self._sources
        plot = self.figure = base_figure(
            self._height,
            title="Strand faces",
            x_range=Range1d(start=0, end=1),
            y_range=Range1d(start=1, end=0),
            x_axis_label="Distance along the fault, m",
            y_axis_label="Depth, m",
            outline_line_color=None,
        )
        draw(
            plot,
            Quad,
            "left",
            "right",
            "top",
            "bottom",
            source=source["frames"],
            fill_color="#F3F5F7",
            line_color=palette.RULE,
        )
        sand: dict[str, Any] = {
            "fill_color": palette.BAND_FILL,
            "line_color": palette.SAND_EDGE,
            "line_width": 1.4,
        }
        draw(plot, Patch, "x", "y", source=source["footwall bands"], **sand)
        violet: dict[str, Any] = {
            "fill_color": palette.ACCENT,
            "fill_alpha": 0.85,
            "line_color": palette.ACCENT,
            "line_width": 1,
        }
        joined: dict[str, Any] = {
            "fill_color": palette.ACCENT_PALE,
            "fill_alpha": 0.6,
            "line_color": palette.ACCENT,
            "line_width": 0.8,
            "hatch_pattern": "right_diagonal_line",
            "hatch_color": palette.ACCENT,
            "hatch_alpha": 0.8,
            "hatch_scale": 7,
            "hatch_weight": 1,
        }
        contacts = draw(plot, Patches, "xs", "ys", source=source["contacts"], **joined)
        windows = draw(plot, Patches, "xs", "ys", source=source["windows"], **violet)
        dashed: dict[str, Any] = {"line_color": palette.INK, "line_width": 1.4, "line_dash": [6, 3]}
        draw(plot, Patch, "x", "y", source=source["hanging bands"], fill_alpha=0, **dashed)
        draw(
            plot,
            MultiLine,
            "xs",
            "ys",
            source=source["marks"],
            line_color=palette.PAPER,
            line_width=6,
        )
        draw(
            plot,
            MultiLine,
            "xs",
            "ys",
            source=source["marks"],
            line_color=palette.ACCENT_DEEP,
            line_width=3,
        )
        ends = ("x0", "y0", "x1", "y1")
        here: dict[str, Any] = {
            "line_color": palette.INK,
            "line_width": 1.4,
            "line_dash": "dotdash",
        }
        draw(plot, Segment, *ends, source=source["section"], **here)
        for name, align in (("names left", "right"), ("names right", "left")):
            draw(
                plot,
                Segment,
                "x0",
                "y0",
                "x1",
                "y",
                source=source[name],
                line_color=palette.QUIET,
                line_width=0.8,
            )
            write(plot, source[name], text_align=align, text_font_size=SMALL_SIZE)
        # as glyphs: other ticks on an axis would have bokeh lay out all figures of a page anew
        plot.xaxis[0].ticker = FixedTicker(ticks=[])
        plot.xaxis[0].axis_line_color = None
        draw(plot, Segment, "x", "y0", "x", "y1", source=source["ticks"], line_color=palette.QUIET)
        write(plot, source["ticks"], text_align="center")
        write(
            plot,
            source["titles"],
            text_font_size=LABEL_SIZE,
            text_font_style="bold",
        )
        shape = one_row(xs=[0.0], ys=[0.0])
        line = one_row(x0=0.0, y0=0.0, x1=0.0, y1=0.0)
        add_key(
            plot,
            [
                (
                    "footwall-side sand",
                    draw(plot, Patches, "xs", "ys", source=shape, **sand),
                ),
                (
                    "hanging-wall-side sand",
                    draw(plot, Patches, "xs", "ys", source=shape, fill_alpha=0, **dashed),
                ),
                ("window", draw(plot, Patches, "xs", "ys", source=shape, **violet)),
                ("unfaulted contact", draw(plot, Patches, "xs", "ys", source=shape, **joined)),
                ("section", draw(plot, Segment, *ends, source=line, **here)),
            ],
        )
        card = tooltip(("@name", ""), ("on", "@where"), ("area", "@area"))
        self._make_hoverable((windows, card), (contacts, card))
        self._make_tappable({"windows": windows, "contacts": contacts})


_WINDOW = ("xs", "ys", "name", "where", "area")
_NAMES = ("x", "y", "text", "x0", "x1", "y0")
_EMPTY: dict[str, tuple[str, ...]] = {
    "frames": ("left", "right", "top", "bottom"),
    "footwall bands": ("x", "y"),
    "hanging bands": ("x", "y"),
    "windows": _WINDOW,
    "contacts": _WINDOW,
    "marks": ("xs", "ys"),
    "section": ("x0", "y0", "x1", "y1"),
    "names left": _NAMES,
    "names right": _NAMES,
    "titles": ("x", "y", "text"),
    "ticks": ("x", "y", "text", "y0", "y1"),
}


def faces_figure(study: Study, distance: float, *, height: int = 460) -> FacesView:
    """Return the strand faces of a study, with the single plane last.

    Parameters
    ----------
    study : Study
    distance : float
        Where the section line stands, m along the fault.
    height : int, default 460
        Pixels.

    Returns
    -------
    FacesView
        With `figure`, `update(study, distance)`, `mark(selection)`, `picked(source, index)` and
        `on_pick(callback)`.
    """
    return FacesView(study, distance, height)
