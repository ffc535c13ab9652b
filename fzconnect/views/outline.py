"""Outlines for drawing: corners that nobody can see are left out, many bands become one glyph."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from fzconnect.geometry import Windows

__all__ = ["closed_bands", "visible_corners", "window_outlines"]

Array = NDArray[np.float64]
Index = NDArray[np.intp]

_PASSES = 4


def visible_corners(x: Array, lines: Array, part: Index, tolerance: float) -> Index:
    """Return the corners that lines need to look the same within a tolerance.

    Parameters
    ----------
    x : (S,) array
        Increasing within each part.
    lines : (n, S) array
        Heights of n lines over the same corners.
    part : (S,) int array
        Which part a corner belongs to, increasing; lines are broken between parts.
    tolerance : float
        In the unit of the lines.

    Notes
    -----
    Every second corner of a part is dropped where no line bends there by more, four times over.
    Ends of parts stay.

    Examples
    --------
    >>> visible_corners(np.arange(5.0), np.array([[0, 1, 2, 2, 2.0]]), np.zeros(5, int), 0.1)
    array([0, 2, 4])
    """
    kept = np.arange(len(x))
    for _ in range(_PASSES):
        if len(kept) < 3:
            break
        at, line, of = x[kept], lines[:, kept], part[kept]
        first = np.flatnonzero(np.r_[True, np.diff(of) != 0])
        rank = np.arange(len(of)) - np.repeat(first, np.diff(np.r_[first, len(of)]))
        inner = (of[:-2] == of[2:]) & (rank[1:-1] % 2 == 1)
        middle = np.flatnonzero(inner) + 1
        left, right = middle - 1, middle + 1
        share = (at[middle] - at[left]) / (at[right] - at[left])
        straight = line[:, left] + share * (line[:, right] - line[:, left])
        bend = np.abs(straight - line[:, middle]).max(axis=0)
        drop = middle[bend < tolerance]
        if not len(drop):
            break
        kept = np.delete(kept, drop)
    return kept


def closed_bands(x: Array, top: Array, base: Array) -> dict[str, Any]:
    """Return the outlines of bands as one chain of corners x, y with NaN between bands.

    Parameters
    ----------
    x : (facets, S) array
    top, base : (facets, bodies, S) arrays
    """
    across = np.broadcast_to(x[:, np.newaxis, :], top.shape)
    gap = np.full((*top.shape[:2], 1), np.nan)
    xs = np.concatenate([across, across[..., ::-1], gap], axis=-1)
    ys = np.concatenate([top, base[..., ::-1], gap], axis=-1)
    return {"x": xs.ravel().astype(np.float32), "y": ys.ravel().astype(np.float32)}


def window_outlines(
    windows: Windows, shift: Array, tolerance: float
) -> tuple[list[list[float]], list[list[float]]]:
    """Return xs and ys around every window, for a `patches` glyph.

    Parameters
    ----------
    windows : Windows
    shift : (W,) array
        What is added to the distances of each window, m.
    tolerance : float
        How far an outline may be off, m.
    """
    count = len(windows)
    if not count:
        return [], []
    corners = [windows.corners(window) for window in range(count)]
    along, upper, lower = (np.concatenate(each) for each in zip(*corners, strict=True))
    part = np.repeat(np.arange(count), [len(each[0]) for each in corners])
    kept = visible_corners(along, np.stack([upper, lower]), part, tolerance)
    part = part[kept]
    ends = np.searchsorted(part, np.arange(count + 1)).tolist()
    x = (along[kept] + shift[part]).round(2).tolist()
    top, base = upper[kept].round(2).tolist(), lower[kept].round(2).tolist()
    xs, ys = [], []
    for first, end in pairwise(ends):
        piece = x[first:end]
        xs.append(piece + piece[::-1])
        ys.append(top[first:end] + base[first:end][::-1])
    return xs, ys
