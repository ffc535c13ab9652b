from __future__ import annotations

import numpy as np
import pytest
from bokeh.models import LinearAxis
from hypothesis import given
from hypothesis import strategies as st

from fzconnect.views import palette
from fzconnect.views.look import nice_step, number_text, relabel, spread, thinned
from fzconnect.views.outline import closed_bands, visible_corners, window_outlines


@given(
    st.lists(st.floats(0, 1000), min_size=1, max_size=30).map(sorted),
    st.floats(0.1, 50),
)
def test_spread_labels_keep_their_gap_and_their_centre(wanted: list[float], gap: float) -> None:
    places = spread(wanted, gap)
    assert (np.diff(places) >= gap - 1e-6).all()
    assert places.mean() == pytest.approx(np.mean(wanted), abs=1e-6)


def test_labels_with_room_stay_where_they_are() -> None:
    assert spread([0, 10, 25], 10).tolist() == [0, 10, 25]


def test_thinning_keeps_the_heaviest_label() -> None:
    assert thinned([0, 4, 20], [1, 5, 1], 10) == [1, 2]
    assert thinned([], [], 10) == []


@pytest.mark.parametrize(
    ("length", "most", "step"), [(3100, 4, 1000), (3100, 1, 5000), (1, 4, 0.5), (0.9, 3, 0.5)]
)
def test_ticks_are_round(length: float, most: int, step: float) -> None:
    assert nice_step(length, most) == pytest.approx(step)


def test_numbers_read_well() -> None:
    assert [number_text(v) for v in (0, 7.04, 99.96, 12345.6, -2000)] == [
        *("0", "7.04", "100", "12\u202f346", "-2\u202f000")
    ]


def test_labels_that_do_not_change_send_nothing() -> None:
    axis = LinearAxis()
    relabel(axis, {1.0: "a", 2.0: "b"})
    changes: list[str] = []
    axis.on_change("major_label_overrides", lambda attr, old, new: changes.append(attr))
    axis.ticker.on_change("ticks", lambda attr, old, new: changes.append(attr))
    relabel(axis, {1.0: "a", 2.0: "b"})
    assert changes == []
    relabel(axis, {1.0: "a", 3.0: "c"})
    assert sorted(changes) == ["major_label_overrides", "ticks"]


def test_text_is_readable_and_windows_stand_out_from_every_rock() -> None:
    assert palette.contrast(palette.INK, palette.PAPER) > 7
    assert palette.contrast(palette.QUIET, palette.PAPER) > 4.5
    assert palette.contrast(palette.PAPER, palette.ACCENT) > 4.5
    for shade in palette.SANDS:
        assert palette.contrast(palette.ACCENT, shade) > 3
        assert palette.contrast(palette.INK, shade) > 4.5


def test_sands_are_warm_and_shales_cool_and_darker_with_clay() -> None:
    for shades, warm in ((palette.SANDS, True), (palette.SHALES, False)):
        parts = np.array([[int(c[i : i + 2], 16) for i in (1, 3, 5)] for c in shades])
        assert ((parts[:, 0] > parts[:, 2]) == warm).all()
        assert (np.diff([palette.contrast(c, "#FFFFFF") for c in shades]) >= 0).all()


@given(st.integers(0, 10_000), st.integers(2, 80), st.floats(0.01, 3))
def test_left_out_corners_are_not_seen(seed: int, count: int, tolerance: float) -> None:
    random = np.random.default_rng(seed)
    x = np.cumsum(random.uniform(0.1, 10, count))
    lines = np.cumsum(random.normal(0, 0.3, (3, count)), axis=1)
    kept = visible_corners(x, lines, np.zeros(count, dtype=int), tolerance)
    assert kept[0] == 0
    assert kept[-1] == count - 1
    off = [np.abs(np.interp(x, x[kept], line[kept]) - line).max() for line in lines]
    assert max(off) <= 4 * tolerance  # four passes, each within the tolerance


def test_corners_are_left_out_within_parts_only() -> None:
    x = np.array([0.0, 1, 2, 0, 1, 2])
    kept = visible_corners(x, np.zeros((1, 6)), np.array([0, 0, 0, 1, 1, 1]), 0.1)
    assert kept.tolist() == [0, 2, 3, 5]


def test_bands_are_chained_with_gaps() -> None:
    chain = closed_bands(np.array([[0.0, 1]]), np.array([[[5.0, 6]]]), np.array([[[7.0, 8]]]))
    assert chain["x"][:-1].tolist() == [0, 1, 1, 0]
    assert chain["y"][:-1].tolist() == [5, 6, 8, 7]
    assert np.isnan(chain["x"][-1])
    assert np.isnan(chain["y"][-1])


def test_outlines_enclose_the_windows_area(quillmere) -> None:
    windows = quillmere.windows
    xs, ys = window_outlines(windows, np.full(len(windows), 100.0), 1e-6)
    sine = np.sin(np.radians(windows.zone.dip))
    for x, y, area in zip(xs, ys, windows.area, strict=True):
        shoelace = 0.5 * abs(np.dot(x, np.roll(y, 1)) - np.dot(y, np.roll(x, 1)))
        # corners are rounded to a centimetre
        assert shoelace / sine == pytest.approx(area, rel=0.005, abs=20)
