"""Control of the throw split: a bar with joints to drag, and number boxes for the keyboard."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from contextlib import AbstractContextManager, nullcontext
from dataclasses import dataclass
from typing import Any

from bokeh.events import Pan, PanEnd, PanStart
from ipywidgets import HTML, FloatText, HBox, Layout, VBox

from fzconnect.errors import ScenarioError
from fzconnect.views.splitbar import Joint, split_bar

__all__ = ["SplitBar", "move_joint", "set_share"]

Shares = tuple[float, ...]
Listener = Callable[[Shares, bool], object]

LARGEST = 10.0  # of a share, either sign: beyond it a typed number is taken for a slip


def move_joint(shares: Sequence[float], left: int, right: int, share: float) -> Shares:
    """Return shares where strand `left` has `share` and strand `right` what the two had besides.

    Parameters
    ----------
    shares : sequence of float
        Shares of all strands; those of the two must not be negative.
    left, right : int
        Indices of the strands that the joint parts.
    share : float
        Wanted share of `left`. It is kept between zero and what the two have together, and put
        on whole per cents where that is possible, so that no strand turns antithetic.
    """
    both = shares[left] + shares[right]
    share = min(max(round(share, 2), 0.0), both)
    moved = list(shares)
    moved[left], moved[right] = share, both - share
    # What is left of a difference of equal numbers is no strand.
    return tuple(0.0 if abs(value) < 1e-12 else value for value in moved)


def set_share(shares: Sequence[float], index: int, share: float, tips: Sequence[bool]) -> Shares:
    """Return shares where one strand has `share` and the others were scaled to keep the sum one.

    Parameters
    ----------
    shares : sequence of float
        Shares of all strands, sum 1.
    index : int
        The strand whose share is set.
    share : float
        Its share; negative makes it antithetic.
    tips : sequence of bool
        Strands that have their tip here keep the share zero.

    Returns
    -------
    tuple of float
        The others keep their proportions. If these say nothing, because all others are zero or
        because antithetic ones cancel them (their sum is under a tenth of their sizes), every
        other strand gets or gives the same part.

    Raises
    ------
    ScenarioError
        If `share` is not a number, if a share would leave -10 to 10, or if no other strand is
        there to take the rest.
    """
    others = [i for i in range(len(shares)) if i != index and not tips[i]]
    if not math.isfinite(share) or abs(share) > LARGEST:
        msg = f"A share of {100 * share:.4g} % was typed; allowed are −1000 to 1000 %."
        raise ScenarioError(msg)
    if not others:
        msg = "The only strand here has the whole throw, 100 %."
        raise ScenarioError(msg)
    total, rest = sum(shares[i] for i in others), 1 - share
    size = sum(abs(shares[i]) for i in others)
    changed = list(shares)
    changed[index] = share
    for i in others:
        if size > 0 and abs(total) >= size / 10:
            changed[i] = shares[i] * rest / total
        else:
            changed[i] = shares[i] + (rest - total) / len(others)
    if max(map(abs, changed)) > LARGEST:
        msg = (
            f"With {100 * share:.4g} % here another strand would have "
            f"{100 * max(changed, key=abs):.4g} %; allowed are −1000 to 1000 %."
        )
        raise ScenarioError(msg)
    return tuple(changed)


@dataclass
class _Drag:
    """A hand that holds a joint; which of several at one place shows when it moves."""

    start: float
    at: float
    joint: Joint | None = None
    origin: float = 0.0
    moved: bool = False


class SplitBar:
    """Throw split of up to `most` strands, edited by hand or by keyboard.

    The figure and the boxes are separate, because the figure has to share a bokeh document with
    the other figures of a page, while the boxes are ordinary widgets.

    Parameters
    ----------
    names, shares, tips
        As for `set`.
    most : int, default 8
        Number of boxes made in advance; later none is made, only hidden and shown.

    Attributes
    ----------
    figure : bokeh.models.Plot
        The bar, for a layout in a `FigurePane`. Pieces are joined at handles that can be dragged.
    boxes : ipywidgets.VBox
        Number boxes in per cent, one a strand, and a line that says why a number was refused.
    shares : tuple of float
        Present shares, footwall to hanging wall, sum 1.
    batch : callable
        Gives a context in which a change is drawn and reported. Set it to the `batch` of the
        pane that shows the figure: the bar and what the callbacks redraw then go as one patch.

    Examples
    --------
    >>> bar = SplitBar(["1", "2"], [0.75, 0.25])
    >>> stop = bar.on_change(lambda shares, final: print(shares, final))
    >>> bar.inputs[0].value = 50
    (0.5, 0.5) True
    >>> bar.close()
    """

    def __init__(
        self,
        names: Sequence[str],
        shares: Sequence[float],
        tips: Sequence[bool] | None = None,
        *,
        most: int = 8,
    ) -> None:
        self.names, self.shares, self.tips = self._checked(names, shares, tips, most)
        self._most = most
        self.batch: Callable[[], AbstractContextManager[None]] = nullcontext
        self._listeners: list[Listener] = []
        self._drag: _Drag | None = None
        self._writing = self._closed = False
        self._view = split_bar(self.names, self.shares, self.tips)
        self.figure = self._view.figure
        # Pan events reach Python about ten times a second, also without a pan tool; a tool that
        # edits points would report only at the end of the drag.
        self.figure.on_event(PanStart, self._on_pan_start)
        self.figure.on_event(Pan, self._on_pan)
        self.figure.on_event(PanEnd, self._on_pan_end)
        self.inputs = tuple(
            FloatText(
                step=1,
                style={"description_width": "initial"},  # else long names are cut
                layout=Layout(width="auto", flex="0 1 9em", min_width="7em", display="none"),
            )
            for _ in range(most)
        )
        for box in self.inputs:
            box.observe(self._on_box, names=["value"])
        self._row = HBox(self.inputs, layout=Layout(flex_flow="row wrap", width="100%"))
        self._note = HTML(layout=Layout(display="none"))
        self.boxes = VBox([self._row, self._note], layout=Layout(width="100%"))
        self._write_boxes()

    def set(
        self,
        names: Sequence[str],
        shares: Sequence[float],
        tips: Sequence[bool] | None = None,
    ) -> None:
        """Show other strands or shares, from code: no callback is called, a drag is dropped.

        Parameters
        ----------
        names : sequence of str
            Strands, footwall to hanging wall, one up to `most`.
        shares : sequence of float
            Share of the throw of each strand, finite, sum 1 within 1e-6; negative for an
            antithetic strand.
        tips : sequence of bool, optional
            Whether the strand has its tip here: its share is zero and can not be changed.

        Raises
        ------
        ScenarioError
            If there are too many strands, lengths differ, or the shares do not sum to one.
        """
        self.names, self.shares, self.tips = self._checked(names, shares, tips, self._most)
        self._drag = None
        self._draw()
        self._say("")

    def on_change(self, callback: Listener) -> Callable[[], None]:
        """Call `callback(shares, final)` when the user changes the shares.

        `final` is False while a joint is being dragged, True when it is let go and for a number
        typed. Returns a function that ends the calls.
        """
        self._listeners.append(callback)

        def stop() -> None:
            if callback in self._listeners:
                self._listeners.remove(callback)

        return stop

    def close(self) -> None:
        """Free the boxes and forget the callbacks; safe to call again."""
        if self._closed:
            return
        self._closed = True
        self._drag = None
        self._listeners.clear()
        for box in self.inputs:
            box.unobserve(self._on_box, names=["value"])
        for widget in (*self.inputs, self._note, self._row, self.boxes):
            if "style" in widget.keys:
                widget.style.close()
            widget.layout.close()
            widget.close()

    @staticmethod
    def _checked(
        names: Sequence[str],
        shares: Sequence[float],
        tips: Sequence[bool] | None,
        most: int,
    ) -> tuple[tuple[str, ...], Shares, tuple[bool, ...]]:
        tips = tuple(tips) if tips is not None else (False,) * len(shares)
        if not 1 <= len(shares) <= most:
            msg = f"the throw-split bar shows 1 to {most} strands, got {len(shares)}"
            raise ScenarioError(msg)
        if not len(names) == len(shares) == len(tips):
            msg = (
                "names, shares and tips must be as many as there are strands, "
                f"got {len(names)}, {len(shares)} and {len(tips)}"
            )
            raise ScenarioError(msg)
        total = math.fsum(shares)
        if not abs(total - 1) <= 1e-6:  # NaN too
            msg = f"shares of the throw must sum to 1, got {total:.6g}"
            raise ScenarioError(msg)
        return tuple(names), tuple(float(share) / total for share in shares), tips

    def _change(self, shares: Shares, final: bool, typed_in: FloatText | None = None) -> None:
        self.shares = shares
        with self.batch():
            self._draw(typed_in)
            for listener in tuple(self._listeners):
                listener(shares, final)

    def _draw(self, typed_in: FloatText | None = None) -> None:
        with self.batch():
            self._view.update(self.names, self.shares, self.tips)
        self._write_boxes(typed_in)

    def _write_boxes(self, typed_in: FloatText | None = None) -> None:
        free = len(self.tips) - sum(self.tips)
        self._writing = True
        try:
            for index, box in enumerate(self.inputs):
                if index >= len(self.names):
                    box.layout.display = "none"
                    continue
                # One message a box, and none to the box that the user is typing in: its handle
                # or caret would jump.
                with box.hold_sync():
                    box.description = f"{self.names[index]} (%)"
                    box.disabled = self.tips[index] or free < 2
                    if box is not typed_in:
                        box.value = round(100 * self.shares[index], 1)
                box.layout.display = None
        finally:
            self._writing = False

    def _say(self, text: str) -> None:
        self._note.value = text
        self._note.layout.display = None if text else "none"

    def _on_box(self, change: dict[str, Any]) -> None:
        if self._writing or self._closed:
            return
        box = change["owner"]
        index = self.inputs.index(box)
        try:
            shares = set_share(self.shares, index, box.value / 100, self.tips)
        except ScenarioError as error:
            self._say(str(error))
            self._write_boxes()
            return
        self._say("")
        self._drag = None
        self._change(shares, True, box)

    def _on_pan_start(self, event: Any) -> None:
        joint = None if event.x is None or self._closed else self._view.nearest_joint(event.x)
        self._drag = _Drag(event.x, joint.at) if joint is not None else None

    def _on_pan(self, event: Any) -> None:
        drag = self._drag
        if drag is None or event.x is None or event.x == drag.start:
            return
        step = event.x - drag.start
        if drag.joint is None:
            # Strands of share zero lie between joints at one place. A hand that goes right takes
            # the last of these, one that goes left the first, so that there is room to move.
            here = [joint for joint in self._view.joints if abs(joint.at - drag.at) < 1e-9]
            drag.joint = here[-1] if step > 0 else here[0]
            drag.origin = self.shares[drag.joint.left]
        shares = move_joint(self.shares, drag.joint.left, drag.joint.right, drag.origin + step)
        if shares != self.shares:
            drag.moved = True
            self._change(shares, False)

    def _on_pan_end(self, event: Any) -> None:
        self._on_pan(event)
        drag, self._drag = self._drag, None
        if drag is not None and drag.moved:
            self._change(self.shares, True)
