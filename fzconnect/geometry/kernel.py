"""The compiled juxtaposition kernel, batch-shaped: one scenario is a batch of one.

All boundaries are straight lines between stations. Where two sand bodies face each other, the
overlap is min(bases) - max(tops): the least of straight lines less the greatest of straight lines,
so it is concave, and its kinks lie only where the two tops or the two bases cross. Between kinks
the overlap is a straight line, so its area is a sum of trapezoids and triangles: exact, with no
sampling. Concave also means that the overlap can be positive between two stations where it is not
positive at either of them (a sand that sweeps past another), which is why end values alone never
rule a segment out.

Everything here is numba without the GIL, and lives in one module because numba's cache does not
notice a change in a function that is called from another file.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numba import njit
from numpy.typing import NDArray

__all__ = ["COLUMNS", "LEAST_OVERLAP", "facing_area", "trace_windows"]

LEAST_OVERLAP = 1e-6
"""Overlaps below this height, in metres, are none (design of the window)."""

COLUMNS = (
    "draw",
    "strand",
    "footwall_body",
    "hanging_wall_body",
    "unfaulted",
    "distance_from",
    "distance_to",
    "top",
    "base",
    "max_height",
    "area",
    "first_vertex",
    "end_vertex",
)
"""What the columns of the rows from `trace_windows` hold."""

_DRAW, _STRAND, _LOWER_SIDE, _UPPER_SIDE, _UNFAULTED = 0, 1, 2, 3, 4
_FROM, _TO, _TOP, _BASE, _HEIGHT, _AREA, _FIRST, _END = 5, 6, 7, 8, 9, 10, 11, 12
_WIDTH = 13


def _compiled(function: Any) -> Any:
    """Return a function that numba compiles at its first call and keeps for the next session."""
    try:
        return njit(cache=True, nogil=True)(function)
    except RuntimeError:
        # Neither the package's folder nor the user's can be written: compile in every session.
        return njit(nogil=True)(function)


@_compiled
def _crossing(left: float, right: float) -> float:
    """Return where inside 0 to 1 a line from `left` to `right` is zero; -1 if it never is."""
    if (left > 0.0 and right < 0.0) or (left < 0.0 and right > 0.0):
        return left / (left - right)
    return -1.0


@_compiled
def _kinks(ta0, ta1, ba0, ba1, tb0, tb1, bb0, bb1, x):  # type: ignore[no-untyped-def]
    """Fill `x` with 0, the places where the tops or the bases cross, and 1; return how many."""
    first = _crossing(ta0 - tb0, ta1 - tb1)
    second = _crossing(ba0 - bb0, ba1 - bb1)
    if second >= 0.0 and first >= 0.0 and second < first:
        first, second = second, first
    count = 1
    x[0] = 0.0
    if first > 0.0:
        x[count] = first
        count += 1
    if second > x[count - 1]:
        x[count] = second
        count += 1
    x[count] = 1.0
    return count + 1


@_compiled
def _mix(left: float, right: float, x: float) -> float:
    """Return the value between `left` at x = 0 and `right` at x = 1, both of them exactly."""
    return left * (1.0 - x) + right * x


@_compiled
def _overlap_points(ta0, ta1, ba0, ba1, tb0, tb1, bb0, bb1, at, x, upper, lower):  # type: ignore[no-untyped-def]
    """Trace the overlap of bodies a and b over one segment.

    Fill `x` (0 to 1), `upper` and `lower` (depths) with the corners of the part where the overlap
    is not negative, in order; `at` is room to work in. Return how many corners there are (0: they
    never meet) and the integral of the overlap over x, in metres.
    """
    kinks = _kinks(ta0, ta1, ba0, ba1, tb0, tb1, bb0, bb1, at)
    count = 0
    area = 0.0
    last_up = last_low = last_x = 0.0
    for i in range(kinks):
        here = at[i]
        up = max(_mix(ta0, ta1, here), _mix(tb0, tb1, here))
        low = min(_mix(ba0, ba1, here), _mix(bb0, bb1, here))
        if i > 0:
            before = last_low - last_up
            now = low - up
            turn = _crossing(before, now)
            if turn >= 0.0:
                x[count] = _mix(last_x, here, turn)
                upper[count] = _mix(last_up, up, turn)
                lower[count] = upper[count]
                count += 1
                part = turn if before > 0.0 else 1.0 - turn
                area += 0.5 * max(before, now) * part * (here - last_x)
            elif before > 0.0 or now > 0.0:
                area += 0.5 * (before + now) * (here - last_x)
        if low >= up:
            x[count] = here
            upper[count] = up
            lower[count] = low
            count += 1
        last_up, last_low, last_x = up, low, here
    if area <= 0.0:
        return 0, 0.0
    return count, area


@_compiled
def _grown(rows, used):  # type: ignore[no-untyped-def]
    """Return `rows` with room for one row more, copied if it was full."""
    if used < rows.shape[0]:
        return rows
    larger = np.empty((2 * rows.shape[0], rows.shape[1]))
    # element by element, because assigning slices takes numba five seconds to compile
    for i in range(used):
        for j in range(rows.shape[1]):
            larger[i, j] = rows[i, j]
    return larger


@_compiled
def _is_unfaulted(tops, bases, a, b, i):  # type: ignore[no-untyped-def]
    """Tell whether body a meets itself without any offset from station i to i + 1."""
    if a != b:
        return False
    for j in (i, i + 1):
        if abs(tops[0, a, j] - tops[1, b, j]) > LEAST_OVERLAP:
            return False
        if abs(bases[0, a, j] - bases[1, b, j]) > LEAST_OVERLAP:
            return False
    return True


@_compiled
def _fill_ranges(tops, bases, highest, lowest):  # type: ignore[no-untyped-def]
    """Fill each body's shallowest top and deepest base over the whole fault: (2, A) arrays."""
    for side in range(2):
        for body in range(tops.shape[1]):
            high, low = tops[side, body, 0], bases[side, body, 0]
            for i in range(1, tops.shape[2]):
                high = min(high, tops[side, body, i])
                low = max(low, bases[side, body, i])
            highest[side, body] = high
            lowest[side, body] = low


@_compiled
def trace_windows(
    stations: NDArray[np.float64],
    tops: NDArray[np.float64],
    bases: NDArray[np.float64],
    strand_counts: NDArray[np.int64],
) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
    """Return every window of every draw, with its outline.

    Parameters
    ----------
    stations : (S,) array
        Distances along the fault, m, increasing; S >= 2.
    tops, bases : (draws, N, 2, A, S) arrays
        Depths, m, of the A sand bodies' tops and bases on the two faces of each strand.
    strand_counts : (draws,) array
        How many of the N strands each draw has; the rest of its arrays is not read.

    Returns
    -------
    rows : (windows, 13) array
        One row a window, ordered by draw, strand, bodies and distance; see `COLUMNS`. Strand and
        bodies count from 0. The area is that of the vertical projection, m2.
    vertices : (vertices, 3) array
        Distance, upper and lower depth at each corner; a row names its first and its end.

    Notes
    -----
    A window is a run without a break of one pair of bodies on one strand; it also ends where
    faulted rock gives way to an unfaulted contact. Time is linear in draws, strands and stations.
    """
    rows = np.empty((256, _WIDTH))
    vertices = np.empty((1024, 3))
    used = corners = 0
    at, x, upper, lower = np.empty(4), np.empty(8), np.empty(8), np.empty(8)
    bodies, segments = tops.shape[3], stations.shape[0] - 1
    highest, lowest = np.empty((2, bodies)), np.empty((2, bodies))
    for draw in range(tops.shape[0]):
        for k in range(strand_counts[draw]):
            top, base = tops[draw, k], bases[draw, k]
            _fill_ranges(top, base, highest, lowest)
            for a in range(bodies):
                for b in range(bodies):
                    if highest[0, a] >= lowest[1, b] or highest[1, b] >= lowest[0, a]:
                        continue
                    is_open = False
                    for i in range(segments):
                        # the cheap way out stands here and not in the function: a call costs more
                        if min(top[0, a, i], top[0, a, i + 1]) >= max(
                            base[1, b, i], base[1, b, i + 1]
                        ) or min(top[1, b, i], top[1, b, i + 1]) >= max(
                            base[0, a, i], base[0, a, i + 1]
                        ):
                            is_open = False
                            continue
                        count, area = _overlap_points(
                            top[0, a, i], top[0, a, i + 1], base[0, a, i], base[0, a, i + 1],
                            top[1, b, i], top[1, b, i + 1], base[1, b, i], base[1, b, i + 1],
                            at, x, upper, lower,
                        )  # fmt: skip
                        if count == 0:
                            is_open = False
                            continue
                        unfaulted = 1.0 if _is_unfaulted(top, base, a, b, i) else 0.0
                        if is_open and unfaulted != rows[used - 1, _UNFAULTED]:
                            is_open = False
                        if is_open and (x[0] > 0.0 or lower[0] - upper[0] < LEAST_OVERLAP):
                            is_open = False
                        start, end = stations[i], stations[i + 1]
                        skip = 0
                        if is_open:
                            skip = 1  # the corner at the shared station is already there
                        else:
                            # a run too thin to count gives its place to the next one
                            if used > 0 and rows[used - 1, _HEIGHT] < LEAST_OVERLAP:
                                used -= 1
                                corners = int(rows[used, _FIRST])
                            rows = _grown(rows, used)
                            rows[used, _DRAW] = draw
                            rows[used, _STRAND] = k
                            rows[used, _LOWER_SIDE] = a
                            rows[used, _UPPER_SIDE] = b
                            rows[used, _UNFAULTED] = unfaulted
                            rows[used, _FROM] = _mix(start, end, x[0])
                            rows[used, _TOP] = upper[0]
                            rows[used, _BASE] = lower[0]
                            rows[used, _HEIGHT] = 0.0
                            rows[used, _AREA] = 0.0
                            rows[used, _FIRST] = corners
                            used += 1
                        row = rows[used - 1]
                        for c in range(skip, count):
                            vertices = _grown(vertices, corners)
                            vertices[corners, 0] = _mix(start, end, x[c])
                            vertices[corners, 1] = upper[c]
                            vertices[corners, 2] = lower[c]
                            corners += 1
                            row[_TOP] = min(row[_TOP], upper[c])
                            row[_BASE] = max(row[_BASE], lower[c])
                            row[_HEIGHT] = max(row[_HEIGHT], lower[c] - upper[c])
                        row[_TO] = _mix(start, end, x[count - 1])
                        row[_AREA] += area * (end - start)
                        row[_END] = corners
                        is_open = x[count - 1] == 1.0 and (
                            lower[count - 1] - upper[count - 1] >= LEAST_OVERLAP
                        )
    if used > 0 and rows[used - 1, _HEIGHT] < LEAST_OVERLAP:
        used -= 1
        corners = int(rows[used, _FIRST])
    return rows[:used].copy(), vertices[:corners].copy()


@_compiled
def facing_area(
    stations: NDArray[np.float64],
    top: NDArray[np.float64],
    base: NDArray[np.float64],
    other_top: NDArray[np.float64],
    other_base: NDArray[np.float64],
) -> float:
    """Return the area, m2 of vertical projection, over which two intervals of depth overlap.

    Parameters
    ----------
    stations : (S,) array of distances, m
    top, base, other_top, other_base : (S,) arrays of depths, m
    """
    at, x, upper, lower = np.empty(4), np.empty(8), np.empty(8), np.empty(8)
    total = 0.0
    for i in range(stations.shape[0] - 1):
        _, area = _overlap_points(
            top[i], top[i + 1], base[i], base[i + 1],
            other_top[i], other_top[i + 1], other_base[i], other_base[i + 1],
            at, x, upper, lower,
        )  # fmt: skip
        total += area * (stations[i + 1] - stations[i])
    return total
