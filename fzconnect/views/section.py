"""The section: blocks, layers, strands and windows across the zone at one distance."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fzconnect.views.look import (
    LINE,
    area_text,
    block_text,
    number_text,
    relabel,
    set_title,
    spread,
    thinned,
    tooltip,
)
from fzconnect.views.picture import Picture
from fzconnect.views.sectionplot import section_plot, section_sources
from fzconnect.views.selection import Selection, of_edge, of_node

if TYPE_CHECKING:
    from fzconnect.geometry import FaultZone, Section
    from fzconnect.network import Study

__all__ = ["SectionView", "section_figure"]

Array = NDArray[np.float64]

_STRETCHES = (1, 2, 3, 5, 10, 20, 50)
_WIDE_ENOUGH = 0.32
"""Part of the depth range that the zone should cover across before it needs no stretching."""
_TOO_WIDE = 0.8
_BESIDE = 0.22
"""Part of the depth range shown of the footwall and of the hanging wall."""
_TOO_SMALL = 1e-6
_UPRIGHT_LENS, _UPRIGHT_ZONE, _UPRIGHT_BESIDE = 0.22, 0.9, 0.34
"""Parts of the depth range: an upright lens, all of them together at most, and the rock beside."""
_LENS_NAME, _WALL_NAME = 42, 90  # px that the names of a lens and of a wall take, with air
_WALL_PART = 64  # px that the longer word of a wall's name takes, with air
_AXES = 132  # px that title, key and axis take from the figure's height


class SectionView(Picture):
    """The section across the zone at one distance along the fault.

    Attributes
    ----------
    figure : bokeh.plotting.figure
    stretch : int
        How many times distances across the fault are stretched; 1 is equal scale.
    is_upright : bool
        Whether strands are drawn upright and lenses equally wide, to see what touches what, and
        not to scale. Change it with `stand`.
    """

    _beside_key = 30  # names of sands stand there

    def __init__(self, study: Study, distance: float, height: int, is_upright: bool) -> None:
        super().__init__()
        self.stretch = 0
        self.is_upright = is_upright
        self._height = height
        self._zone: FaultZone | None = None
        self._sources = section_sources()
        self._plot = section_plot(self._sources, height)
        self.figure = self._plot.figure
        self._listen()
        self.update(study, distance)

    def update(self, study: Study, distance: float) -> None:
        """Show another study or another distance, m.

        Raises
        ------
        NetworkError
            If the distance is not on the fault.
        """
        zone = study.zone
        if zone is not self._zone:
            self._zone = zone
            self._frame(zone)
        section = zone.at(distance)
        if self.is_upright:
            section = section.upright(self._lens)
        self._study, self._section = study, section
        set_title(self.figure, f"Section at {number_text(distance)} m")
        self._layers(zone, section)
        self._strands(zone, section)
        self._windows(study, section)
        self._name_sands(zone, section)
        self._draw_mark(self._shown)

    def stand(self, is_upright: bool) -> None:
        """Draw the strands upright, or to scale with their dip."""
        if is_upright != self.is_upright:
            self.is_upright = is_upright
            self._zone = None
            self.update(self._study, self._section.distance)

    def picked(self, source: str, index: int) -> Selection | None:
        """Return what a tap on a window, a contact or a sand means."""
        found = self._picks.get(source, ())
        if index >= len(found):
            return None
        if source == "sands":
            return of_node(found[index])
        return of_edge(self._study, found[index])

    def _fit(self) -> None:
        super()._fit()
        if self._zone is not None:
            self._zone = None
            self.update(self._study, self._section.distance)

    def _frame(self, zone: FaultZone) -> None:
        """Set what holds for a zone at every distance: scale, edges and depth range."""
        depths = np.concatenate([zone.faces[0, 0], zone.faces[-1, 1]])
        top, base = float(zone.faces.min()), float(zone.faces.max())
        span = base - top
        lenses = zone.strand_count - 1
        if self.is_upright:
            self._lens = span * min(_UPRIGHT_LENS, _UPRIGHT_ZONE / max(1, lenses))
            slope, zone_width, stretch = 0.0, lenses * self._lens, 1
        else:
            slope = 1.0 / np.tan(np.radians(zone.dip)) if zone.dip < 90.0 else 0.0
            zone_width = float(zone.lens_width.sum())
            column = float((depths.max(axis=0) - depths.min(axis=0)).max())
            stretch = _stretch((zone_width + slope * column) / span)
        self._scale(stretch)
        self._span = (top, base)
        self._room = 4.0 * span / stretch  # rock drawn beside the zone, past any frame
        beside = _BESIDE * span / stretch
        if self.is_upright:
            room = min(_WALL_PART, 0.3 * self.width)  # px at least
            beside = max(_UPRIGHT_BESIDE * span, zone_width * room / (self.width - 2 * room))
        pixel = span / max(1, self._height - _AXES)  # metres that a pixel stands for, about
        half = 0.5 * (zone_width + slope * span)
        if not self.is_upright:  # scales are coupled: a narrow figure draws depths smaller, too
            pixel = max(pixel, 2 * (half + beside) * stretch / self.width)
            beside = max(beside, (_WALL_PART + 18) * pixel / stretch)
            pixel = max(pixel, 2 * (half + beside) * stretch / self.width)
        across = 2 * (half + beside) / self.width if self.is_upright else pixel / stretch
        self._pixel, self._pixel_x = pixel, across
        self._fits_lens = self.is_upright and self._lens >= _LENS_NAME * across
        self._is_wide = beside >= _WALL_NAME * across
        names = max(len(name) for name in zone.strand_names)
        self._names_upright = zone.strand_count > 1 and names > 3
        above = (26 + 9 * names if self._names_upright else 38) * pixel
        below = (
            70 if zone.strand_count > 1 and not self._fits_lens else 34 if self._is_wide else 50
        ) * pixel
        self._sources["frame"].data = {
            "left": [-half - beside],
            "right": [half + beside],
            "top": [top - above],
            "bottom": [base + below],
        }

    def _scale(self, stretch: int) -> None:
        """Set how distances across are drawn, and say it on the axis."""
        axis = self.figure.xaxis[0]
        self.stretch = stretch
        self.figure.aspect_scale = float(stretch)
        self.figure.match_aspect = not self.is_upright
        axis.major_label_text_alpha = 0.0 if self.is_upright else 1.0
        axis.major_tick_line_alpha = axis.major_label_text_alpha
        if self.is_upright:
            axis.axis_label = "strands upright, not to scale"
        else:
            scale = "equal scale" if stretch == 1 else f"stretched {stretch} times"
            axis.axis_label = f"Across the fault, m ({scale})"

    def _layers(self, zone: FaultZone, section: Section) -> None:
        """Replace the layers of every block: corners, names and what the hover card tells."""
        depth = section.boundaries
        edges = section.extent(self._room)
        left, right = _sides(section, edges)
        corners_x = np.stack([left[:, :-1], right[:, :-1], right[:, 1:], left[:, 1:]], axis=-1)
        corners_y = np.stack([depth[:, :-1], depth[:, :-1], depth[:, 1:], depth[:, 1:]], axis=-1)
        vsh = np.array([zone.across(zone.vsh, block) for block in range(len(depth))])
        sand, blocks = np.array(zone.is_sand), [block_text(name) for name in zone.block_names]
        for source, chosen in (("sands", sand), ("shales", ~sand)):
            layers = [zone.layer_names[i] for i in np.flatnonzero(chosen)]
            self._replace(
                self._sources[source],
                {
                    "xs": np.round(corners_x[:, chosen].reshape(-1, 4), 2).tolist(),
                    "ys": np.round(corners_y[:, chosen].reshape(-1, 4), 2).tolist(),
                    "name": [f"{name} in {block}" for block in blocks for name in layers],
                    "vsh": vsh[:, chosen].ravel(),
                    "top": depth[:, :-1][:, chosen].ravel(),
                    "base": depth[:, 1:][:, chosen].ravel(),
                    "thickness": np.diff(depth, axis=1)[:, chosen].ravel(),
                },
            )
        body_of = {
            layer: body.name for body in zone.bodies for layer in range(body.first, body.last + 1)
        }
        sands = [body_of[int(layer)] for layer in np.flatnonzero(sand)]
        self._picks: dict[str, list[Any]] = {
            "sands": [f"{b}: {s}" for b in zone.block_names for s in sands]
        }

    def _strands(self, zone: FaultZone, section: Section) -> None:
        """Replace the strands' lines, the names above them and the names of the blocks."""
        top, base = self._span
        count = zone.strand_count
        x_top = np.array([float(section.strand_x(k, top)) for k in range(count)])
        x_base = np.array([float(section.strand_x(k, base)) for k in range(count)])
        shares = _at(zone, zone.shares, section.distance)
        tip = np.abs(shares) < _TOO_SMALL
        reach = 6 * self._pixel
        lean = section.slope * reach
        lines: dict[str, list[Any]] = {
            "x0": (x_top - lean).tolist(),
            "y0": [top - reach] * count,
            "x1": (x_base + lean).tolist(),
            "y1": [base + reach] * count,
            "throw": _at(zone, zone.strand_throw, section.distance).tolist(),
            "share": (100.0 * shares).tolist(),
        }
        for name, chosen in (("strands", ~tip), ("tips", tip)):
            rows = np.flatnonzero(chosen).tolist()
            self._replace(
                self._sources[name],
                {key: [column[row] for row in rows] for key, column in lines.items()},
            )
        # names stand apart where strands do not; a thin line leads from each to its own
        pixel_x = self._pixel_x
        start = x_top - lean
        apart = 15 if self._names_upright else 8 * max(map(len, zone.strand_names)) + 6
        self._sources["strand names"].data = {
            "x": spread(start, apart * pixel_x).tolist(),
            "y": [top - 3.2 * reach] * count,
            "text": list(zone.strand_names),
            "throw": lines["throw"],
            "share": lines["share"],
            "angle": [np.pi / 2 if self._names_upright else 0.0] * count,
            "align": ["left" if self._names_upright else "center"] * count,
            "baseline": ["middle" if self._names_upright else "bottom"] * count,
            "x0": start.tolist(),
            "y0": [top - reach] * count,
            "y1": [top - 2.9 * reach] * count,
        }
        end = x_base + lean
        middle = 0.5 * (end[:-1] + end[1:])
        names = middle if self._fits_lens else spread(middle, 15 * pixel_x)
        foot = base + 2.9 * reach  # where leaders end
        flat = self._fits_lens
        outer = [float(end[0]) - 8 * pixel_x, float(end[-1]) + 8 * pixel_x]
        if count > 1 and not flat:
            outer = [
                min(outer[0], float(names[0]) - 12 * pixel_x),
                max(outer[1], float(names[-1]) + 12 * pixel_x),
            ]
        self._sources["block names"].data = {
            "x": [outer[0], *names.tolist(), outer[1]],
            "y": [base + (1.6 if flat else 3.2) * reach] * (count + 1),
            "text": [
                name if self._is_wide else name.replace("g w", "g\nw") for name in zone.block_names
            ],
            "angle": [0.0, *[0.0 if flat else np.pi / 2] * (count - 1), 0.0],
            "align": ["right", *["center" if flat else "right"] * (count - 1), "left"],
            "baseline": ["top", *["top" if flat else "middle"] * (count - 1), "top"],
            "x0": [outer[0], *(names if flat else middle).tolist(), outer[1]],
            "y0": [foot, *[foot if flat else base + reach] * (count - 1), foot],
            "y1": [foot] * (count + 1),
        }

    def _windows(self, study: Study, section: Section) -> None:
        """Replace the windows and unfaulted contacts that are open at this distance."""
        windows, zone = study.windows, study.zone
        cuts = windows.cut(section.distance)
        blocks = zone.block_names
        rows: dict[str, list[tuple[Any, ...]]] = {"windows": [], "contacts": []}
        picks: dict[str, list[Any]] = {"windows": [], "contacts": []}
        for window, top, base in cuts:
            strand = int(windows.strand[window]) - 1
            lower, upper = windows.footwall_sand(window), windows.hanging_wall_sand(window)
            kind = "contacts" if windows.is_unfaulted[window] else "windows"
            offset = section.strand_positions[strand]
            x0 = offset + (top - section.reference_depth) * section.slope
            x1 = offset + (base - section.reference_depth) * section.slope
            rows[kind].append(
                (
                    x0,
                    top,
                    x1,
                    base,
                    f"{lower} against {upper}",
                    zone.strand_names[strand],
                    area_text(windows.area[window]),
                )
            )
            picks[kind].append((f"{blocks[strand]}: {lower}", f"{blocks[strand + 1]}: {upper}"))
        for kind, found in rows.items():
            columns = list(zip(*found, strict=True)) or [()] * 7
            names = ("x0", "y0", "x1", "y1", "name", "strand", "area")
            data = {name: list(column) for name, column in zip(names, columns, strict=True)}
            self._replace(self._sources[kind], data)
        self._picks |= picks

    def _name_sands(self, zone: FaultZone, section: Section) -> None:
        """Label sand bodies on both edges of the picture, the thickest where room is short."""
        first = [body.first for body in zone.bodies]
        past = [body.last + 1 for body in zone.bodies]
        for axis, block in zip(self._plot.name_axes, (0, -1), strict=True):
            depth = section.boundaries[block]
            middle, thick = 0.5 * (depth[first] + depth[past]), depth[past] - depth[first]
            kept = thinned(middle, thick, 0.95 * LINE * self._pixel)
            relabel(axis, {float(round(middle[i], 2)): zone.bodies[i].name for i in kept})

    def _draw_mark(self, selection: Selection) -> None:
        zone, section = self._study.zone, self._section
        chosen = set(selection.edges)
        marks: dict[str, list[Any]] = {"x0": [], "y0": [], "x1": [], "y1": []}
        for kind in ("windows", "contacts"):
            data = self._sources[kind].data
            rows = [row for row, edge in enumerate(self._picks[kind]) if edge in chosen]
            for name, column in marks.items():
                column.extend(data[name][row] for row in rows)
        self._replace(self._sources["marks"], marks)
        edges = section.extent(self._room)
        xs, ys = [], []
        for node in selection.nodes:
            block_name, _, sand = node.partition(": ")
            body = next((body for body in zone.bodies if body.name == sand), None)
            if body is None or block_name not in zone.block_names:
                continue
            block = zone.block_names.index(block_name)
            x_top, y_top = section.outline(block, body.first, edges)
            x_base, y_base = section.outline(block, body.last, edges)
            xs.append([*x_top[:2].tolist(), *x_base[2:].tolist(), float(x_top[0])])
            ys.append([*y_top[:2].tolist(), *y_base[2:].tolist(), float(y_top[0])])
        self._replace(self._sources["marked sands"], {"xs": xs, "ys": ys})

    def _listen(self) -> None:
        """Give the glyphs their hover cards, and let windows, contacts and sands be tapped."""
        drawn = self._plot.renderers
        card = tooltip(
            ("@name", ""),
            ("vsh", "@vsh{0.00}"),
            ("thickness", "@thickness{0.0} m"),
            ("depth", "@top{0} to @base{0} m"),
        )
        window = tooltip(
            ("@name", ""),
            ("strand", "@strand"),
            ("depth here", "@y0{0.0} to @y1{0.0} m"),
            ("area along the fault", "@area"),
        )
        strand = tooltip(
            ("strand @text", ""),
            ("throw here", "@throw{0.0} m"),
            ("share here", "@share{0} %"),
        )
        self._make_hoverable(
            (drawn["windows"], window),
            (drawn["contacts"], window),
            (drawn["strand names"], strand),
            (drawn["sands"], card),
            (drawn["shales"], card),
        )
        self._make_tappable(
            {"windows": drawn["windows"], "contacts": drawn["contacts"], "sands": drawn["sands"]}
        )


def _sides(section: Section, edges: tuple[float, float]) -> tuple[Array, Array]:
    """Return x, m, of the left and right end of every boundary in every block: (N + 1, U + 1)."""
    depth, positions = section.boundaries, section.strand_positions[:, np.newaxis]
    lean = (depth - section.reference_depth) * section.slope
    left = np.vstack([np.full(depth.shape[1], edges[0]), positions + lean[1:]])
    right = np.vstack([positions + lean[:-1], np.full(depth.shape[1], edges[1])])
    return left, right


def _at(zone: FaultZone, values: Array, distance: float) -> Array:
    """Return (N, S) values of the strands at a distance: (N,) array."""
    return np.array([np.interp(distance, zone.stations, row) for row in values])


def _stretch(part: float) -> int:
    """Return how many times to stretch a zone that is `part` as wide across as it is deep."""
    fits = [n for n in _STRETCHES if n == 1 or part * n <= _TOO_WIDE]
    return next((n for n in fits if part * n >= _WIDE_ENOUGH), fits[-1])


def section_figure(
    study: Study, distance: float, *, height: int = 540, is_upright: bool = False
) -> SectionView:
    """Return the section across a study's zone at a distance along the fault.

    Parameters
    ----------
    study : Study
    distance : float
        m along the fault.
    height : int, default 540
        Pixels.
    is_upright : bool, default False
        Draw strands upright and lenses equally wide, to see what touches what. Otherwise equal
        scale, or, for a zone too narrow to be seen, the least stretching across that makes it
        visible. The axis says which.

    Returns
    -------
    SectionView
        With `figure`, `update(study, distance)`, `mark(selection)`, `picked(source, index)` and
        `on_pick(callback)`.

    Raises
    ------
    NetworkError
        If the distance is not on the fault.
    """
    return SectionView(study, distance, height, is_upright)
