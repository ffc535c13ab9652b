"""The pathway graph: blocks across, depth down, sand bodies as bars, windows as lines."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from bokeh.models import ColumnDataSource, Range1d
from bokeh.models.glyphs import Rect, Scatter, Segment

from fzconnect.views import palette
from fzconnect.views.look import (
    LABEL_SIZE,
    LINE,
    SMALL_SIZE,
    add_key,
    area_text,
    base_figure,
    block_text,
    draw,
    one_row,
    set_range,
    spread,
    thinned,
    tooltip,
    write,
)
from fzconnect.views.picture import Picture
from fzconnect.views.selection import Selection, of_edge, of_node

if TYPE_CHECKING:
    from fzconnect.network import Study

__all__ = ["PathwayGraphView", "pathway_graph_figure"]

_HALF = 0.11
"""Half the width of a bar; blocks are 1 apart."""
_LEADER = 26  # px from a bar to its name, leader and air included
_CHARACTER = 7  # px that a character of a name takes
_WALL_NAME, _LENS_NAME = 84, 46  # px that the names of a wall and of a lens take, with air
_AXES = 150  # px that title, key and axis take from the figure's height


class PathwayGraphView(Picture):
    """Sand bodies of every block and the windows that join them."""

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
        """Show another study; the graph is of the whole fault, so the distance changes nothing."""
        if study is self._study:
            return
        self._study = study
        self._nodes(study)
        self._edges(study)
        self._fit()
        self._draw_mark(self._shown)

    def picked(self, source: str, index: int) -> Selection | None:
        """Return what a tap on a window or on a sand body means."""
        if self._study is None or index >= len(self._picks.get(source, ())):
            return None
        if source == "nodes":
            return of_node(self._picks[source][index])
        return of_edge(self._study, self._picks[source][index])

    def _nodes(self, study: Study) -> None:
        graph = study.network.graph
        ids = list(graph)
        nodes = [graph.nodes[node] for node in ids]
        middle = np.array([0.5 * (n["crest_depth"] + n["base_depth"]) for n in nodes])
        thick = np.array([n["thickness"] for n in nodes])
        block = np.array([n["block"] for n in nodes], dtype=float)
        top, base = float((middle - thick / 2).min()), float((middle + thick / 2).max())
        pad = 0.03 * (base - top)
        self._pixel = (base - top + 2 * pad) / max(1, self._height - _AXES)
        self._top, self._base = top - pad, base + pad
        set_range(self.figure.y_range, self._base, self._top - 66 * self._pixel)
        shown = np.maximum(thick, 4 * self._pixel)
        self._where = dict(zip(ids, zip(block.tolist(), middle.tolist(), strict=True), strict=True))
        self._shown_thickness = dict(zip(ids, shown.tolist(), strict=True))
        self._picks: dict[str, list[Any]] = {"nodes": ids}
        self._replace(
            self._sources["nodes"],
            {
                "x": block,
                "y": middle,
                "height": shown,
                "vsh": np.array([n["mean_vsh"] for n in nodes]),
                "thickness": thick,
                "crest": np.array([n["crest_depth"] for n in nodes]),
                "name": [n["sand"] for n in nodes],
                "block": [block_text(n["block_name"]) for n in nodes],
            },
        )

    def _edges(self, study: Study) -> None:
        graph = study.network.graph
        edges = [study.network.ordered(edge) for edge in graph.edges]
        facts = [graph.edges[edge] for edge in edges]
        widest = max((fact["area"] for fact in facts), default=1.0)
        critical = set(study.network.critical_windows)
        self._rows: dict[tuple[str, str], tuple[float, float, float, float, float]] = {}
        rows: dict[str, list[tuple[Any, ...]]] = {"windows": [], "contacts": []}
        picks: dict[str, list[Any]] = {"windows": [], "contacts": []}
        for edge, fact in zip(edges, facts, strict=True):
            (left, y0), (right, y1) = self._where[edge[0]], self._where[edge[1]]
            width = 1.5 + 8.5 * float(np.sqrt(fact["area"] / widest))
            place = (left + _HALF, y0, right - _HALF, y1, width)
            self._rows[edge] = place
            kind = "contacts" if fact["contact"] == "unfaulted" else "windows"
            rows[kind].append(
                (
                    *place,
                    f"{edge[0]} against {edge[1]}",
                    fact["strand_name"],
                    area_text(fact["area"]),
                    fact["max_height"],
                    "critical" if edge in critical else "not critical",
                )
            )
            picks[kind].append(edge)
        self._picks |= picks
        for kind, found in rows.items():
            columns = list(zip(*found, strict=True)) or [()] * len(_EDGE)
            self._replace(self._sources[kind], dict(zip(_EDGE, map(list, columns), strict=True)))
        places = [self._rows[edge] for edge in edges if edge in critical]
        self._sources["critical"].data = {
            "x": [0.5 * (x0 + x1) for x0, _, x1, _, _ in places],
            "y": [0.5 * (y0 + y1) for _, y0, _, y1, _ in places],
        }

    def _fit(self) -> None:
        super()._fit()
        if self._study is not None:
            self._names(self._study)

    def _names(self, study: Study) -> None:
        """Name blocks and strands above, and the sands beside both outer columns."""
        zone = study.zone
        blocks, last = zone.block_names, zone.strand_count
        longest = max(len(body.name) for body in zone.bodies)
        room = min(_LEADER + 8 * min(longest, 14), 0.3 * self.width)  # px on either side
        unit = (self.width - 2 * room) / (last + 2 * _HALF)  # px from block to block
        beside = room / unit
        set_range(self.figure.x_range, -beside - _HALF, last + beside + _HALF)
        walls = (name if unit > _WALL_NAME else name.replace(" ", "\n") for name in blocks)
        titles = {float(j): name for j, name in enumerate(walls) if j in (0, last)}
        if unit > _LENS_NAME:
            titles |= {float(j): blocks[j] for j in range(1, last)}
        elif last > 1:
            titles[0.5 * last] = f"lenses 1 to {last - 1}"
        self._sources["titles"].data = {
            "x": list(titles),
            "y": [self._top - 28 * self._pixel] * len(titles),
            "text": list(titles.values()),
        }
        prefix = "strand " if unit > _CHARACTER * (7 + max(map(len, zone.strand_names))) else ""
        self._sources["strands"].data = {
            "x": [j + 0.5 for j in range(last)],
            "y": [self._top - 14 * self._pixel] * last,
            "text": [f"{prefix}{name}" for name in zone.strand_names],
        }
        self._sources["columns"].data = {
            "x0": [float(j) for j in range(last + 1)],
            "y0": [self._top] * (last + 1),
            "x1": [float(j) for j in range(last + 1)],
            "y1": [self._base] * (last + 1),
        }
        gap, step = LINE * self._pixel, 0.5 * _LEADER / unit
        columns: dict[str, list[Any]] = {name: [] for name in _NAME}
        for block, sign, align in ((0, -1.0, "right"), (last, 1.0, "left")):
            ids = [f"{blocks[block]}: {sand}" for sand in study.network.sands]
            middle = np.array([self._where[node][1] for node in ids])
            thick = np.array([self._shown_thickness[node] for node in ids])
            places = np.clip(spread(middle, gap), self._top, self._base)
            edge = block + sign * _HALF
            for i in thinned(places, thick, 0.85 * gap):
                row = (edge + 1.25 * sign * step, places[i], study.network.sands[i], align)
                for name, value in zip(
                    _NAME, (*row, edge, middle[i], edge + sign * step), strict=True
                ):
                    columns[name].append(value)
        self._sources["names"].data = {**columns}

    def _draw_mark(self, selection: Selection) -> None:
        places = [self._rows[edge] for edge in selection.edges if edge in self._rows]
        parts = list(zip(*places, strict=True)) or [()] * 5
        marks: dict[str, Any] = dict(zip(_EDGE[:5], map(list, parts), strict=True))
        marks["casing"] = [width + 7 for width in marks["width"]]
        marks["width"] = [width + 3 for width in marks["width"]]
        self._replace(self._sources["marked edges"], marks)
        nodes = [node for node in selection.nodes if node in self._where]
        columns = {
            "x": [self._where[node][0] for node in nodes],
            "y": [self._where[node][1] for node in nodes],
            "height": [self._shown_thickness[node] + 6 * self._pixel for node in nodes],
        }
        self._replace(self._sources["marked nodes"], columns)

    def _build(self) -> None:
        source = self._sources
        plot = self.figure = base_figure(
            self._height,
            title="Pathway graph",
            x_range=Range1d(start=0, end=1),
            y_range=Range1d(start=1, end=0),
            y_axis_label="Depth, m",
            outline_line_color=None,
        )
        # blocks are named by glyphs: other labels on an axis would have bokeh lay out all figures
        # of a page anew
        plot.xaxis.visible = False
        ends = ("x0", "y0", "x1", "y1")
        draw(plot, Segment, *ends, source=source["columns"], line_color=palette.RULE, line_width=1)
        violet: dict[str, Any] = {
            "line_color": palette.ACCENT,
            "line_alpha": 0.62,
            "line_cap": "butt",
        }
        windows = draw(plot, Segment, *ends, source=source["windows"], line_width="width", **violet)
        contacts = draw(
            plot,
            Segment,
            *ends,
            source=source["contacts"],
            line_width="width",
            line_dash=[2, 3],
            **violet,
        )
        draw(
            plot,
            Segment,
            *ends,
            source=source["marked edges"],
            line_color=palette.PAPER,
            line_width="casing",
        )
        draw(
            plot,
            Segment,
            *ends,
            source=source["marked edges"],
            line_color=palette.ACCENT_DEEP,
            line_width="width",
        )
        diamond: dict[str, Any] = {
            "marker": "diamond",
            "size": 14,
            "fill_color": palette.PAPER,
            "line_color": palette.ACCENT_DEEP,
            "line_width": 2,
        }
        draw(plot, Scatter, "x", "y", source=source["critical"], **diamond)
        draw(
            plot,
            Rect,
            "x",
            "y",
            2 * _HALF + 0.06,
            "height",
            source=source["marked nodes"],
            fill_color=palette.ACCENT_DEEP,
            line_color=palette.PAPER,
            line_width=2,
        )
        bar: dict[str, Any] = {"line_color": palette.INK, "line_width": 1}
        nodes = draw(
            plot,
            Rect,
            "x",
            "y",
            2 * _HALF,
            "height",
            source=source["nodes"],
            fill_color=palette.SANDS[14],
            **bar,
        )
        for name, style in (
            (
                "titles",
                {
                    "text_align": "center",
                    "text_baseline": "bottom",
                    "text_font_size": LABEL_SIZE,
                    "text_font_style": "bold",
                },
            ),
            ("names", {"text_align": "align", "text_font_size": SMALL_SIZE}),
            (
                "strands",
                {
                    "text_align": "center",
                    "text_color": palette.QUIET,
                    "text_font_size": SMALL_SIZE,
                },
            ),
        ):
            write(plot, source[name], **style)
        draw(
            plot,
            Segment,
            "x0",
            "y0",
            "x1",
            "y",
            source=source["names"],
            line_color=palette.QUIET,
            line_width=0.8,
        )
        line: dict[str, Any] = {"x0": 0.0, "y0": 0.0, "x1": 0.0, "y1": 0.0}
        dotted = violet | {"line_dash": [2, 3]}
        add_key(
            plot,
            [
                (
                    "sand",
                    draw(
                        plot,
                        Rect,
                        "x0",
                        "y0",
                        0,
                        0,
                        source=one_row(**line),
                        fill_color=palette.SANDS[14],
                        **bar,
                    ),
                ),
                (
                    "window, by area",
                    draw(plot, Segment, *ends, source=one_row(**line), line_width=7, **violet),
                ),
                (
                    "unfaulted contact",
                    draw(plot, Segment, *ends, source=one_row(**line), line_width=5, **dotted),
                ),
                (
                    "critical window",
                    draw(
                        plot, Scatter, "x0", "y0", source=one_row(x0=np.nan, y0=np.nan), **diamond
                    ),
                ),
            ],
        )
        edge_card = tooltip(
            ("@name", ""),
            ("strand", "@strand"),
            ("area", "@area"),
            ("greatest height", "@tall{0.0} m"),
            ("alone on its way:", "@critical"),
        )
        node_card = tooltip(
            ("@name", "in @block"),
            ("mean thickness", "@thickness{0.0} m"),
            ("mean vsh", "@vsh{0.00}"),
            ("crest", "@crest{0} m"),
        )
        self._make_hoverable((nodes, node_card), (windows, edge_card), (contacts, edge_card))
        self._make_tappable({"windows": windows, "contacts": contacts, "nodes": nodes})


_EDGE = ("x0", "y0", "x1", "y1", "width", "name", "strand", "area", "tall", "critical")
_NAME = ("x", "y", "text", "align", "x0", "y0", "x1")
_EMPTY: dict[str, tuple[str, ...]] = {
    "columns": ("x0", "y0", "x1", "y1"),
    "nodes": ("x", "y", "height", "vsh", "thickness", "crest", "name", "block"),
    "windows": _EDGE,
    "contacts": _EDGE,
    "critical": ("x", "y"),
    "names": _NAME,
    "titles": ("x", "y", "text"),
    "strands": ("x", "y", "text"),
    "marked edges": ("x0", "y0", "x1", "y1", "width", "casing"),
    "marked nodes": ("x", "y", "height"),
}


def pathway_graph_figure(study: Study, *, height: int = 500) -> PathwayGraphView:
    """Return the pathway graph of a study.

    Parameters
    ----------
    study : Study
    height : int, default 500
        Pixels.

    Returns
    -------
    PathwayGraphView
        With `figure`, `update(study)`, `mark(selection)`, `picked(source, index)` and
        `on_pick(callback)`.
    """
    return PathwayGraphView(study, height)
