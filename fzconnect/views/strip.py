"""The strip: the figures that matter, each beside its single-plane value, as HTML."""

from __future__ import annotations

from dataclasses import dataclass
from html import escape
from typing import TYPE_CHECKING

from fzconnect.views.look import FONT, number_text
from fzconnect.views.palette import ACCENT, INK, QUIET

if TYPE_CHECKING:
    from fzconnect.network import Study

__all__ = ["STRIP_STYLE", "Figure", "strip_figures", "strip_html"]

STRIP_STYLE = f"""
.fz-strip {{display: grid; grid-template-columns: repeat(auto-fit, minmax(138px, 1fr)); gap: 8px;
  font-family: {FONT};}}
.fz-figure {{padding: 4px 10px 5px 12px; border-left: 4px solid {ACCENT};
  background: #F6F4FA; color: {INK}; font-variant-numeric: tabular-nums;}}
.fz-figure .fz-label, .fz-figure .fz-plane, .fz-figure .fz-note {{font-size: 13px;
  line-height: 17px;}}
.fz-figure .fz-value {{font-size: 23px; font-weight: 700; line-height: 27px; white-space: nowrap;}}
.fz-figure .fz-note {{color: {QUIET};}}
"""
"""CSS of the strip, to be put once on the page that shows it."""


@dataclass(frozen=True)
class Figure:
    """One figure of the strip.

    Attributes
    ----------
    label : str
        What it is, with its unit.
    value, single_plane : str
        The zone's value and the single plane's.
    note : str
        One more short sentence, or nothing.
    """

    label: str
    value: str
    single_plane: str
    note: str = ""


def strip_figures(study: Study, pair: tuple[str, str] | None = None) -> tuple[Figure, ...]:
    """Return the four figures of a study.

    Parameters
    ----------
    study : Study
    pair : (hanging-wall sand, footwall sand), optional
        The pair whose bottleneck is shown; without one, the widest of all.
    """
    zone, plane = study.counts("zone"), study.counts("single plane")
    changes = [one.change for one in study.pairs]
    return (
        Figure(
            "Connected sand pairs",
            f"{zone['connected_pairs']} of {len(study.pairs)}",
            f"{plane['connected_pairs']}",
            f"{changes.count('gained')} gained, {changes.count('lost')} lost",
        ),
        Figure(
            "Window area, m²",
            number_text(zone["window_area"]),
            number_text(plane["window_area"]),
            f"{zone['windows']} windows, single plane {plane['windows']}",
        ),
        _bottleneck(study, pair),
        Figure(
            "Critical windows",
            f"{zone['critical_windows']}",
            f"{plane['critical_windows']}",
            "closing any one parts a sand pair",
        ),
    )


def _bottleneck(study: Study, pair: tuple[str, str] | None) -> Figure:
    """Return the bottleneck of a pair, or the widest of all pairs."""
    if pair is None:
        zone, plane = study.counts("zone"), study.counts("single plane")
        return Figure(
            "Widest bottleneck, m²",
            number_text(zone["widest_bottleneck"]),
            number_text(plane["widest_bottleneck"]),
            "of all sand pairs",
        )
    one = next(p for p in study.pairs if (p.hanging_wall_sand, p.footwall_sand) == pair)
    return Figure(
        "Bottleneck, m²",
        _width(one.connected, one.bottleneck_area),
        _width(one.connected_single_plane, one.bottleneck_area_single_plane),
        f"hanging wall {pair[0]} to footwall {pair[1]}",
    )


def _width(connected: bool, area: float) -> str:
    return number_text(area) if connected else "not connected"


def strip_html(study: Study, pair: tuple[str, str] | None = None) -> str:
    """Return the strip as one HTML element with the class `fz-strip`; names are escaped."""
    cards = "".join(
        f'<div class="fz-figure"><div class="fz-label">{escape(figure.label)}</div>'
        f'<div class="fz-value">{escape(figure.value)}</div>'
        f'<div class="fz-plane">single plane: {escape(figure.single_plane)}</div>'
        f'<div class="fz-note">{escape(figure.note)}</div></div>'
        for figure in strip_figures(study, pair)
    )
    return f'<div class="fz-strip" aria-live="polite">{cards}</div>'
