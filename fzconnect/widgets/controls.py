"""The workbench's controls: folding groups of ipywidgets that speak `Params`."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from ipywidgets import (
    Button,
    Dropdown,
    FloatSlider,
    IntSlider,
    Text,
    VBox,
    Widget,
)

from fzconnect.views.look import nice_step
from fzconnect.widgets.params import Params

if TYPE_CHECKING:
    from fzconnect.scenario import Scenario
    from fzconnect.widgets.splitbar import SplitBar

__all__ = ["MOST_STRANDS", "Controls", "close_widget"]

MOST_STRANDS = 8
"""Strands that the throw-split bar has room for."""

_NO_PAIR = "none"
_NO_PATHWAY = ("none", -1)
_ROUNDING = 1e-9
# plain words and not a `Layout`: that is a widget, and closing one bench would close it for all
_FULL = {"width": "auto"}
_STYLE = {"description_width": "88px"}


class Controls:
    """Sliders, boxes and menus; every change by hand is one call with new `Params`.

    Parameters
    ----------
    scenario : Scenario
        Sets the ranges: distances along the fault, names of the strands.
    sands : sequence of str
        Names of the sand bodies, for choosing a pair.
    bar : SplitBar
        The throw-split bar, whose number boxes are placed here.
    params : Params
        What to show first.

    Attributes
    ----------
    widget : ipywidgets.VBox
    params : Params
        What the controls say now.
    pathway : ipywidgets.Dropdown
        Steps through the pathways of the chosen pair; filled by the workbench.
    window : ipywidgets.Dropdown
        Chooses a window; filled by the workbench.
    folder, export : ipywidgets.Text, ipywidgets.Button
        Where to write the study, and the button that does.
    """

    def __init__(
        self, scenario: Scenario, sands: Sequence[str], bar: SplitBar, params: Params
    ) -> None:
        self.params = params
        self._scenario, self._bar = scenario, bar
        self._listeners: list[Callable[[Params, bool], None]] = []
        self._writing = False
        first, last = scenario.throw.distances[0], scenario.throw.distances[-1]
        most = max(MOST_STRANDS, scenario.strands.count)
        self.count = IntSlider(
            value=params.count, min=1, max=most, description="Strand count", **_slider()
        )
        self.factor = FloatSlider(
            value=params.throw_factor,
            min=0.0,
            max=2.0,
            step=0.05,
            description="Throw factor",
            readout_format=".2f",
            **_slider(),
        )
        self.distance = FloatSlider(
            value=params.distance,
            min=first,
            max=last,
            step=nice_step(last - first, 400),
            description="Distance, m",
            readout_format=".0f",
            **_slider(),
        )
        self.drawn = Dropdown(
            options=[("upright", True), ("to scale", False)],
            description="Drawn",
            style=_STYLE,
            layout=_FULL,
        )
        self.own_split = Button(
            description="Back to the scenario's split",
            tooltip="Forget the shares set by hand",
            layout=_FULL,
        )
        menu = {"style": _STYLE, "layout": _FULL}
        self.upper = Dropdown(options=[_NO_PAIR, *sands], description="Hanging wall", **menu)
        self.lower = Dropdown(options=[_NO_PAIR, *sands], description="Footwall", **menu)
        self.pathway = Dropdown(options=[_NO_PATHWAY], disabled=True, description="Pathway", **menu)
        self.window = Dropdown(options=[(_NO_PAIR, 0)], description="Window", **menu)
        self.clear = Button(description="Mark nothing", layout=_FULL)
        self.folder = Text(value="study", description="Folder", continuous_update=False, **menu)
        self.folder.add_class("fz-folder")
        self.export = Button(
            description="Write tables, graph, report",
            tooltip="Studies the scenario as it stands and writes everything to the folder",
            layout=_FULL,
        )
        marks = (self.upper, self.lower, self.pathway, self.window, self.clear)
        self.widget = VBox(
            [
                _group("Fault zone", self.count, self.factor),
                _group("Throw split", bar.boxes, self.own_split),
                _group("Section", self.distance, self.drawn),
                _group("Pair, pathway, window", *marks),
                _group("Write results", self.folder, self.export, is_open=False),
            ],
        ).add_class("fz-controls")
        self._handles: list[tuple[Widget, Callable[..., None]]] = []
        for control in (
            self.count,
            self.factor,
            self.distance,
            self.drawn,
            self.upper,
            self.lower,
        ):
            control.observe(self._on_control, names=["value"])
            self._handles.append((control, self._on_control))
        self.own_split.on_click(self._on_own_split)
        self._stop_bar = bar.on_change(self._on_split)
        self.show(params)

    def on_change(self, callback: Callable[[Params, bool], None]) -> None:
        """Call `callback(params, final)` for every change by hand.

        `final` is False while a joint of the bar is being dragged.
        """
        self._listeners.append(callback)

    def show(self, params: Params) -> None:
        """Set every control to `params` without calling back.

        Raises
        ------
        ScenarioError
            If the shares are impossible at the distance; the controls then stay as they are.
        """
        strands = params.strands(self._scenario)
        shares = strands.split_at(params.distance)
        # a strand with its tip here has no share to edit, unless a hand has just closed it
        tips = [
            share == 0.0 and strands.shares is not None and params.split is None for share in shares
        ]
        wanted = (
            (self.count, params.count),
            (self.factor, params.throw_factor),
            (self.distance, params.distance),
            (self.drawn, params.is_upright),
            (self.upper, params.hanging_wall_sand or _NO_PAIR),
            (self.lower, params.footwall_sand or _NO_PAIR),
        )
        self._writing = True
        try:
            if not _are_same(self._bar, strands.names, shares):
                self._bar.set(strands.names, shares, tips)
            for control, value in wanted:
                if control.value != value:
                    control.value = value
            self.own_split.disabled = params.split is None
            self.params = params
        finally:
            self._writing = False

    def set_pathways(self, labels: Sequence[str]) -> None:
        """Fill the menu of pathways; an empty list disables it."""
        self._writing = True
        try:
            self.pathway.disabled = not labels
            self.pathway.options = [(label, rank) for rank, label in enumerate(labels)] or [
                _NO_PATHWAY
            ]
        finally:
            self._writing = False

    def set_windows(self, labels: Sequence[str]) -> None:
        """Fill the menu of windows, after an entry for none."""
        self._writing = True
        try:
            self.window.options = [
                (_NO_PAIR, 0),
                *((label, i) for i, label in enumerate(labels, 1)),
            ]
        finally:
            self._writing = False

    def show_window(self, index: int) -> None:
        """Let the menu of windows show an entry, counted from 1, or none by 0."""
        self._writing = True
        try:
            if self.window.value != index:
                self.window.value = index
        finally:
            self._writing = False

    @property
    def is_writing(self) -> bool:
        """Whether the controls are being set from code, so that observers should keep still."""
        return self._writing

    def close(self) -> None:
        """Stop listening and free every widget; safe to call again."""
        for control, handler in self._handles:
            control.unobserve(handler, names=["value"])
        self._handles.clear()
        self._stop_bar()
        self._listeners.clear()
        close_widget(self.widget)

    def _on_control(self, change: dict[str, Any]) -> None:
        if self._writing:
            return
        params = replace(
            self.params,
            count=self.count.value,
            throw_factor=self.factor.value,
            distance=self.distance.value,
            is_upright=self.drawn.value,
            hanging_wall_sand=_sand(self.upper),
            footwall_sand=_sand(self.lower),
        )
        if params.count != self.params.count:
            # shares for another number of strands mean nothing
            params = replace(params, split=None)
        # a slider may be on the move: the scheduler finds out when the hand rests
        self._tell(params, final=False)

    def _on_split(self, shares: tuple[float, ...], final: bool) -> None:
        if not self._writing:
            changed = replace(self.params, split=shares, split_distance=self.params.distance)
            self._tell(changed, final)

    def _on_own_split(self, _button: Button) -> None:
        self._tell(replace(self.params, split=None), final=True)

    def _tell(self, params: Params, final: bool) -> None:
        self.params = params
        for listener in tuple(self._listeners):
            listener(params, final)


def _are_same(bar: SplitBar, names: Sequence[str], shares: Sequence[float]) -> bool:
    """Tell whether the bar shows these shares already; to set it anew would end a drag."""
    return tuple(bar.names) == tuple(names) and all(
        abs(mine - its) < _ROUNDING for mine, its in zip(bar.shares, shares, strict=True)
    )


def _sand(menu: Dropdown) -> str | None:
    return None if menu.value == _NO_PAIR else str(menu.value)


def _slider() -> dict[str, Any]:
    return {"style": _STYLE, "layout": _FULL, "continuous_update": True}


def _group(title: str, *children: Widget, is_open: bool = True) -> VBox:
    """Return a group of controls under a button that folds it, which a keyboard reaches as well."""
    head = Button(description=title).add_class("fz-fold")
    body = VBox(children).add_class("fz-folded")

    def fold(shown: bool) -> None:
        body.layout.display = None if shown else "none"
        head.icon = "caret-down" if shown else "caret-right"
        head.tooltip = f"{'Fold' if shown else 'Unfold'} {title}"

    head.on_click(lambda _: fold(body.layout.display == "none"))
    fold(is_open)
    return VBox([head, body]).add_class("fz-group")


def close_widget(widget: Widget) -> None:
    """Close a widget with its children, layouts and styles, which `close` alone leaves behind."""
    for child in getattr(widget, "children", ()):
        close_widget(child)
    for part in ("style", "layout"):
        owned = getattr(widget, part, None)
        if isinstance(owned, Widget):
            owned.close()
    widget.close()
