"""The throw-split bar: one piece per strand, as wide as its share of the throw.

Pieces run from the footwall to the hanging wall. Their widths sum to the whole throw; antithetic
strands, whose share is negative, take their part back in a second lane below, hatched, so that
what is left ends at 100 %.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

from bokeh.models import ColumnDataSource, HoverTool, Range1d
from bokeh.models.annotations import Span
from bokeh.plotting import figure

from fzconnect.views.look import FONT, LABEL_SIZE, SMALL_SIZE
from fzconnect.views.palette import ACCENT, INK

__all__ = ["Joint", "SplitBarView", "split_bar"]

TINTS = ("#E3E0EA", "#CFCAD9")  # neighbours differ; the joint between them carries the meaning
LANE, SECOND_LANE = (0.0, 1.0), (-0.85, -0.2)
MIDDLE, ABOVE = 0.5, 1.32
ROWS_BELOW = (-0.26, -0.66)  # labels of pieces too narrow for them; neighbours take turns
MARGIN = 0.015  # of the bar's length, free at either end for half a handle
EDGE = 0.05  # of the bar's length: nearer to an end, labels below would leave the figure
HANDLE = 15  # px, across
CHARACTER = 6.8  # px, mean width of a label's character
ASSUMED_WIDTH = 480  # px of the bar, until a browser reports the real one


@dataclass(frozen=True)
class Joint:
    """Where two pieces of the bar meet: a place on it (share) and the strands' indices."""

    at: float
    left: int
    right: int


class SplitBarView:
    """A bokeh figure of the throw split that follows `update`.

    Attributes
    ----------
    figure : bokeh.models.Plot
        The figure; its horizontal axis is the share of the throw, as a fraction.
    joints : tuple of Joint
        The joints that are drawn, from left to right. None touches a strand that is antithetic or
        has its tip here; a strand of share zero lies between two joints at one place.
    """

    def __init__(self, names: Sequence[str], shares: Sequence[float], tips: Sequence[bool]) -> None:
        self.joints: tuple[Joint, ...] = ()
        self._pieces = ColumnDataSource(_columns(_PIECE))
        self._hatched = ColumnDataSource(_columns(_HATCHED))
        self._labels = ColumnDataSource(_columns(_LABEL))
        self._handles = ColumnDataSource(_columns(_HANDLE))
        self._range = Range1d(start=0, end=1)
        self._heading = ColumnDataSource({"x": [], "y": [], "words": []})
        self._total = Span(
            location=1,
            dimension="height",
            line_color=INK,
            line_dash="dashed",
            visible=False,
            level="underlay",
        )
        self._width, self._span = ASSUMED_WIDTH, 0.0
        self.figure = self._draw()
        self.figure.on_change("inner_width", self._on_width)
        self.update(names, shares, tips)

    def update(
        self,
        names: Sequence[str],
        shares: Sequence[float],
        tips: Sequence[bool] | None = None,
    ) -> None:
        """Draw other shares.

        Parameters
        ----------
        names : sequence of str
            Strands, footwall to hanging wall.
        shares : sequence of float
            Share of the throw of each, sum 1; negative for an antithetic strand.
        tips : sequence of bool, optional
            Whether the strand has its tip here, which is why its share is zero. Default: none.
        """
        tips = tips if tips is not None else [False] * len(shares)
        strands = list(zip(names, shares, tips, strict=True))
        self._shown = (names, shares, tips)
        span = max(1.0, sum(share for share in shares if share > 0))
        pieces, labels, ends = _columns(_PIECE), _columns(_LABEL), {}
        _add(labels, 0.0, ABOVE, "footwall", "left")
        _add(labels, span, ABOVE, "hanging wall", "right")
        if span > 1:
            _add(labels, 1.0, sum(SECOND_LANE) / 2, "whole throw  ", "right")
        forward, back, below = 0.0, span, 0
        for index, (name, share, tip) in enumerate(strands):
            if share < 0:
                left, right = back + share, back
                back = left
                _add(pieces, left, right, *SECOND_LANE, TINTS[0], "right_diagonal_line")
                _add(
                    labels,
                    (left + right) / 2,
                    sum(SECOND_LANE) / 2,
                    f"{name}  {_percent(share)}, antithetic",
                    "center",
                )
                continue
            left, right = forward, forward + share
            forward = right
            if not tip:
                ends[index] = (left, right)
            if share > 0:
                _add(pieces, left, right, *LANE, TINTS[index % 2], " ")
            text = f"{name}  tip" if tip else f"{name}  {_percent(share)}"
            room = (right - left) / span * self._width - HANDLE
            if len(text) * CHARACTER <= room:
                _add(labels, (left + right) / 2, MIDDLE, text, "center")
            elif len(name) * CHARACTER <= room:
                _add(labels, (left + right) / 2, MIDDLE, name, "center")
            else:
                at = (left + right) / 2
                align = (
                    "left" if at < EDGE * span else "right" if at > span - EDGE * span else "center"
                )
                _add(labels, at, ROWS_BELOW[below % 2], text, align)
                below += 1
        self.joints = tuple(Joint(ends[a][1], a, b) for a, b in pairwise(ends))
        self._total.visible = span > 1
        heading = "Throw split: drag a joint" if self.joints else "Throw split"
        if span != self._span or [heading] != self._heading.data["words"]:
            self._heading.data = {"x": [span / 2], "y": [ABOVE], "words": [heading]}
        if span != self._span:
            self._span = span
            self._range.update(start=-MARGIN * span, end=(1 + MARGIN) * span)
        self._pieces.data = pieces
        hatched = _columns(_HATCHED)
        for left, right, _, _, _, hatch in zip(*pieces.values(), strict=True):
            if hatch.strip():
                _add(hatched, left, right, *SECOND_LANE)
        if hatched["x0"] or self._hatched.data["x0"]:
            self._hatched.data = hatched
        self._labels.data = labels
        self._handles.data = {
            "x": [joint.at for joint in self.joints],
            "y": [MIDDLE] * len(self.joints),
        }

    def nearest_joint(self, at: float, *, reach_px: float = 24) -> Joint | None:
        """Return the joint nearest to a place on the bar, or None if none is within reach.

        Parameters
        ----------
        at : float
            Place on the bar, as a share of the throw.
        reach_px : float, default 24
            Reach in screen pixels.
        """
        scale = self._width / (self._span * (1 + 2 * MARGIN))
        near = min(self.joints, key=lambda joint: abs(joint.at - at), default=None)
        return near if near is not None and abs(near.at - at) * scale <= reach_px else None

    def _on_width(self, _attr: str, _old: object, new: int) -> None:
        # A browser has laid the figure out: other labels may fit now.
        self._width = new
        self.update(*self._shown)

    def _draw(self) -> figure:
        plot = figure(
            height=88,
            sizing_mode="stretch_width",
            min_width=220,
            x_range=self._range,
            y_range=Range1d(start=-0.9, end=1.65),
            tools="",
            toolbar_location=None,
            outline_line_color=None,
            min_border=2,
        )
        plot.axis.visible = False
        plot.grid.visible = False
        plot.quad(
            "left",
            "right",
            "top",
            "bottom",
            source=self._pieces,
            fill_color="fill",
            line_color="#8B8497",
        )
        # by themselves, because browsers are slow at patterns and mostly there is none to draw
        plot.quad(
            "x0",
            "x1",
            "y0",
            "y1",
            source=self._hatched,
            fill_alpha=0,
            line_alpha=0,
            hatch_pattern="right_diagonal_line",
            hatch_color="#BDB7C9",  # light: a label has to be read over it
            hatch_scale=8,
            hatch_weight=1,
        )
        plot.text(
            "x",
            "y",
            "text",
            source=self._labels,
            text_align="align",
            text_color=INK,
            text_font={"value": FONT},
            text_font_size=SMALL_SIZE,
            text_baseline="middle",
        )
        plot.text(
            "x",
            "y",
            "words",
            source=self._heading,
            text_align="center",
            text_baseline="middle",
            text_color=INK,
            text_font={"value": FONT},
            text_font_size=LABEL_SIZE,
            text_font_style="bold",
        )
        plot.add_layout(self._total)
        plot.scatter(
            "x",
            "y",
            source=self._handles,
            marker="dash",
            angle=1.5707963267948966,
            size=36,
            line_width=3,
            line_color=ACCENT,
        )
        handles = plot.scatter(
            "x",
            "y",
            source=self._handles,
            size=HANDLE,
            marker="diamond",
            fill_color="white",
            line_color=ACCENT,
            line_width=2.5,
            hover_fill_color=ACCENT,
            hover_line_color=ACCENT,
        )
        # No words wanted: the handle fills under the pointer, which says that it can be taken.
        plot.add_tools(HoverTool(renderers=[handles], tooltips=None))
        return plot


Columns = dict[str, Any]
_PIECE = ("left", "right", "bottom", "top", "fill", "hatch")
_HATCHED = ("x0", "x1", "y0", "y1")
_LABEL = ("x", "y", "text", "align")
_HANDLE = ("x", "y")


def _columns(names: Sequence[str]) -> Columns:
    return {name: [] for name in names}


def _add(columns: Columns, *row: object) -> None:
    for column, value in zip(columns.values(), row, strict=True):
        column.append(value)


def _percent(share: float) -> str:
    """Return a share in per cent, with one decimal only where it says something."""
    number = f"{100 * share:.1f}".removesuffix(".0").replace("-", "−")
    return f"{number} %"


def split_bar(
    names: Sequence[str],
    shares: Sequence[float],
    tips: Sequence[bool] | None = None,
) -> SplitBarView:
    """Return the throw-split bar: a figure with one piece per strand, and joints between them.

    Parameters
    ----------
    names : sequence of str
        Strands, footwall to hanging wall.
    shares : sequence of float
        Share of the throw of each strand, sum 1; negative for an antithetic strand, zero where a
        strand does not exist.
    tips : sequence of bool, optional
        Whether the strand has its tip here. Default: none has.

    Returns
    -------
    SplitBarView
        With `figure`, `joints` and `update(names, shares, tips)`.

    Examples
    --------
    >>> bar = split_bar(["1", "2", "3"], [0.5, 0.3, 0.2])
    >>> [(joint.at, joint.left, joint.right) for joint in bar.joints]
    [(0.5, 0, 1), (0.8, 1, 2)]
    >>> bar.update(["1", "2"], [1.25, -0.25])
    >>> bar.joints
    ()
    """
    return SplitBarView(names, shares, tips if tips is not None else [False] * len(shares))
