"""The workbench: controls on the left, linked pictures on the right, the strip above both."""

from __future__ import annotations

import logging
from collections.abc import Callable, Mapping
from html import escape
from typing import TYPE_CHECKING, Any

from bokeh.layouts import column, row
from IPython.display import Javascript, display
from ipywidgets import HTML, HBox, Layout, VBox

from fzconnect.errors import FzconnectError
from fzconnect.network import study
from fzconnect.network.export import CAUTION
from fzconnect.views.faces import faces_figure
from fzconnect.views.look import area_text
from fzconnect.views.pairmatrix import pair_matrix_figure
from fzconnect.views.pathgraph import pathway_graph_figure
from fzconnect.views.section import section_figure
from fzconnect.views.selection import (
    NOTHING,
    Edge,
    Selection,
    of_edge,
    of_pair,
    of_pathway,
    renewed,
    windows_menu,
)
from fzconnect.views.strip import strip_html
from fzconnect.widgets.controls import MOST_STRANDS, Controls, close_widget
from fzconnect.widgets.pane import FigurePane, show
from fzconnect.widgets.params import Params
from fzconnect.widgets.scheduler import Scheduler
from fzconnect.widgets.splitbar import SplitBar
from fzconnect.widgets.stylesheet import SCRIPT, STYLE

if TYPE_CHECKING:
    from fzconnect.network import Pathway, Study
    from fzconnect.scenario import Scenario

__all__ = ["Workbench", "workbench"]

_log = logging.getLogger(__name__)

_NARROWEST = {"section": 340, "graph": 340, "faces": 640, "matrix": 480}
"""Pixels that a picture needs; where two do not fit side by side they stand below each other."""

_SPOKEN = {
    "bar": "Throw split; the number boxes do the same",
    "section": "Section across the fault zone",
    "graph": "Pathway graph; the menus of windows, pairs and pathways choose the same",
    "faces": "Strand faces; the menu of windows chooses the same",
    "matrix": "Sand pairs; the menus of sands choose the same",
}
"""What a screen reader says of a picture."""

_PATHWAYS = 6
"""Pathways offered for a chosen pair."""


class Workbench:
    """A live study of one scenario for a notebook cell.

    Parameters
    ----------
    scenario : Scenario
        Where the controls start; it is not changed.

    Attributes
    ----------
    scenario : Scenario
        The scenario with what the controls ask for.
    study : Study
        Its study: what the pictures show.

    Notes
    -----
    One path only: control, `Params`, scheduler, study, pictures. Strip, section and pathway graph
    follow the hand; strand faces and sand-pair matrix follow when it rests. What cannot be studied
    (a throw that leaves the column, say) is told in the status line, and the pictures keep the last
    study that could.
    """

    def __init__(self, scenario: Scenario) -> None:
        self._base = scenario
        self.study: Study = study(scenario)
        params = Params.from_scenario(scenario)
        self._shown = params
        self._selection = NOTHING
        self._pathways: list[Pathway] = []
        self._edges: list[Edge] = []
        self._settled = self.study
        self._closed = False

        names = scenario.strands.names
        self.bar = SplitBar(names, scenario.strands.split_at(params.distance), most=_most(scenario))
        self.controls = Controls(scenario, self.study.network.sands, self.bar, params)
        self.section = section_figure(self.study, params.distance, height=520, is_upright=True)
        self.faces = faces_figure(self.study, params.distance)
        self.graph = pathway_graph_figure(self.study)
        self.matrix = pair_matrix_figure(self.study)
        self._pictures = (self.section, self.graph, self.faces, self.matrix)
        self.pane = FigurePane(self._arranged())
        self.bar.batch = self.pane.batch

        self.strip, self.marked, self.status, self.notes = (
            HTML(layout=Layout(width="auto")) for _ in range(4)
        )
        self.widget = self._laid_out()

        self._scheduler: Scheduler[Params] = Scheduler(
            self._follow, self._settle, on_error=self._report
        )
        self.controls.on_change(lambda params, final: self._scheduler.request(params, final=final))
        self.controls.pathway.observe(self._guarded(self._on_pathway), names=["value"])
        self.controls.window.observe(self._guarded(self._on_window), names=["value"])
        self.controls.clear.on_click(self._guarded(lambda _: self.choose(NOTHING)))
        self.controls.export.on_click(self._guarded(lambda _: self._export()))
        for picture in self._pictures:
            picture.batch = self.pane.batch
            picture.on_pick(self._guarded(self.choose))
        self._list_windows()
        self._tell()

    @property
    def scenario(self) -> Scenario:
        """The scenario with what the controls ask for."""
        return self._shown.apply(self._base)

    def choose(self, selection: Selection) -> None:
        """Mark a selection in every picture; `NOTHING` takes the marks away."""
        self._selection = selection
        if selection.pair != self._shown.pair:
            self._shown = self._shown.with_pair(selection.pair)
            self.controls.show(self._shown)
            self._list_pathways()
        with self.pane.batch():
            for picture in self._pictures:
                picture.mark(selection)
        self._show_window()
        self._tell()

    def state(self) -> dict[str, Any]:
        """Return what the controls say as plain numbers and lists, for JSON."""
        return self._shown.to_dict()

    def restore(self, state: Mapping[str, Any]) -> None:
        """Set the controls to what `state` returned.

        Raises
        ------
        FzconnectError
            If it does not fit this scenario; the workbench then stays as it is.
        """
        params = Params.from_dict(state)
        self._draw(params)
        self._settle(params)

    def close(self) -> None:
        """Take the workbench off every page and free its widgets; safe to call again."""
        if self._closed:
            return
        self._closed = True
        self._scheduler.close()
        self.bar.close()
        self.controls.close()
        self.pane.close()
        close_widget(self.widget)

    def __enter__(self) -> Workbench:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    def _ipython_display_(self, **_: Any) -> None:
        display(Javascript(SCRIPT))
        show(self.widget, self.pane)

    def __repr__(self) -> str:
        return f"<Workbench on {self._base.name!r}: {self.study!r}>"

    # ------------------------------------------------------------------ control to picture

    def _follow(self, params: Params) -> None:
        """Follow the hand: study what the controls ask for and show it."""
        is_pair_new = params.pair != self._shown.pair
        self._draw(params)
        if is_pair_new:
            self._choose_pair(params.pair)

    def _draw(self, params: Params) -> None:
        """Study `params`, show what follows a hand; on an error the last good study stays."""
        is_new = not params.asks_the_same(self._shown)
        fresh = study(params.apply(self._base), like=self.study) if is_new else self.study
        # whatever can be refused is asked before anything is changed
        fresh.zone.at(params.distance)
        if params.pair is not None:
            fresh.network.ends(*params.pair)
        with self.pane.batch():
            self.controls.show(params)
            self.study, self._shown = fresh, params
            kept = renewed(fresh, self._selection) if is_new else self._selection
            is_marked_new, self._selection = kept != self._selection, kept
            self._tell()  # the figures first: they are seen while pictures are still on their way
            self.section.stand(params.is_upright)
            self.section.update(fresh, params.distance)
            self.graph.update(fresh)
            if fresh is self._settled:  # then only the section line moves there
                self.faces.update(fresh, params.distance)
            if is_marked_new:
                for picture in self._pictures:
                    picture.mark(kept)

    def _settle(self, params: Params) -> None:
        """When the hand rests: show what is left to show, and fill the menus anew."""
        if self._settled is not self.study:
            self._settled = self.study
            with self.pane.batch():
                self.faces.update(self.study, self._shown.distance)
                self.matrix.update(self.study)
            self._list_windows()
        self._show_window()
        if params.pair is not None:
            self._list_pathways()

    def _choose_pair(self, pair: tuple[str, str] | None) -> None:
        self.choose(of_pair(self.study, *pair) if pair else NOTHING)
        self._list_pathways()

    def _list_pathways(self) -> None:
        pair = self._shown.pair
        self._pathways = []
        if pair is not None:
            self._pathways = list(self.study.network.pathways(*pair, limit=_PATHWAYS))
        labels = ["widest", *(_label(i, way) for i, way in enumerate(self._pathways, start=1))]
        self.controls.set_pathways(labels if self._pathways else [])

    def _list_windows(self) -> None:
        """Fill the menu of windows, the largest first, so that a keyboard can choose them all."""
        self._edges, labels = windows_menu(self.study)
        self.controls.set_windows(labels)

    def _show_window(self) -> None:
        """Let the menu of windows say which one is marked, if it is one alone."""
        edges = self._selection.edges
        is_one = len(edges) == 1 and self._selection.pair is None and edges[0] in self._edges
        self.controls.show_window(self._edges.index(edges[0]) + 1 if is_one else 0)

    def _on_window(self, change: dict[str, Any]) -> None:
        if self.controls.is_writing or change["new"] is None:
            return
        edge = self._edges[change["new"] - 1] if change["new"] else None
        # the menu may be older than the study while a slider is on the move
        is_there = edge is not None and self.study.network.graph.has_edge(*edge)
        self.choose(of_edge(self.study, edge) if edge and is_there else NOTHING)

    def _on_pathway(self, change: dict[str, Any]) -> None:
        rank = change["new"]
        if self.controls.is_writing or rank is None or rank < 0:
            return
        if rank == 0:
            self._choose_pair(self._shown.pair)
        else:
            self.choose(of_pathway(self.study, self._pathways[rank - 1]))

    def _export(self) -> None:
        from fzconnect.output import write_study

        folder = self.controls.folder.value.strip()
        if not folder:
            msg = "the folder has no name"
            raise FzconnectError(msg)
        self._say(f"writing to {folder} ...")
        write_study(self.scenario, folder, progress=False)
        self._say(f"written to {folder}: open report.html there")

    # ------------------------------------------------------------------ words

    def _tell(self) -> None:
        """Bring the strip, the line on what is marked and the status up to date."""
        self.strip.value = strip_html(self.study, self._shown.pair)
        label = self._selection.label or "nothing yet; click a window, a link, a sand or a pair"
        self.marked.value = f'<div class="fz-marked"><b>Marked:</b> {escape(label)}</div>'
        notes = "".join(f"<p>{escape(_sentence(one))}</p>" for one in self.study.warnings)
        self.notes.value = f'<div class="fz-note"><b>Note</b>{notes}</div>' if notes else ""
        self._say("")

    def _say(self, text: str, *, trouble: bool = False) -> None:
        kind = "fz-status fz-trouble" if trouble else "fz-status"
        self.status.value = f'<div class="{kind}" role="status">{escape(text)}</div>'
        # an empty line would still take its place
        self.status.layout.display = None if text else "none"

    def _report(self, error: Exception) -> None:
        """Say an error where the user sees it; one that is our own fault is logged as well."""
        if isinstance(error, FzconnectError):
            self._say(f"Not shown: {error}", trouble=True)
            return
        _log.error("the workbench failed", exc_info=error)
        self._say(
            f"A fault in fzconnect itself: {type(error).__name__}: {error}. The log has the rest.",
            trouble=True,
        )

    def _guarded(self, action: Callable[[Any], None]) -> Callable[[Any], None]:
        """Return a callback that tells its errors: JupyterLab would hide them."""

        def run(argument: Any) -> None:
            try:
                action(argument)
            except Exception as error:
                self._report(error)

        return run

    # ------------------------------------------------------------------ layout

    def _arranged(self) -> Any:
        """Return the layout of all figures: one bokeh document."""
        for name, view in zip(_NARROWEST, self._pictures, strict=True):
            view.figure.html_attributes = {"role": "group", "aria-label": _SPOKEN[name]}
        self.bar.figure.html_attributes = {"role": "group", "aria-label": _SPOKEN["bar"]}
        # Side by side where there is room, below each other where there is not. Each in a box of
        # its own, or bokeh would give neighbours margins that are as large as each other's.
        wrap: Any = {"flex-wrap": "wrap", "gap": "16px 14px"}
        boxes: dict[str, Any] = {}
        for (name, narrow), view in zip(_NARROWEST.items(), self._pictures, strict=True):
            grow: Any = {"flex": f"1 1 {narrow}px"}
            boxes[name] = column(view.figure, sizing_mode="stretch_width", styles=grow)
        rows = [
            row([boxes[name] for name in names], sizing_mode="stretch_width", styles=wrap)
            for names in (("section", "graph"), ("faces", "matrix"))
        ]
        return column([self.bar.figure, *rows], sizing_mode="stretch_width")

    def _laid_out(self) -> VBox:
        title = HTML(f'{STYLE}<div class="fz-title">{escape(self._base.name)}</div>')
        caution = HTML(f'<div class="fz-caution">{escape(CAUTION)}</div>')
        head = VBox([self.strip, self.marked, self.status]).add_class("fz-head")
        side = VBox([self.controls.widget, self.notes]).add_class("fz-side")
        body = HBox([side, self.pane.widget], layout=Layout(width="100%", align_items="flex-start"))
        box = VBox([title, head, body.add_class("fz-body"), caution], layout=Layout(width="100%"))
        return box.add_class("fz-workbench")


def _most(scenario: Scenario) -> int:
    return max(MOST_STRANDS, scenario.strands.count)


def _label(rank: int, pathway: Pathway) -> str:
    """Return a pathway for a menu: short, since menus are narrow."""
    times = "once" if pathway.crossings == 1 else f"{pathway.crossings} times"
    return f"{rank}: {area_text(pathway.bottleneck_area)}, crosses {times}"


def _sentence(words: str) -> str:
    return f"{words[:1].upper()}{words[1:]}."


def workbench(scenario: Scenario) -> Workbench:
    """Return the workbench on a scenario; the last line of a notebook cell shows it."""
    return Workbench(scenario)
