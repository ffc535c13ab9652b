"""Colours of every picture: sands warm and pale, shales cool grey, windows in one violet.

Nothing is told by colour alone: sands are dotted as well, unfaulted contacts dotted or hatched,
critical windows carry a diamond.
"""

from __future__ import annotations

import numpy as np

__all__ = [
    "ACCENT",
    "ACCENT_DEEP",
    "ACCENT_PALE",
    "BAND_FILL",
    "INK",
    "PAPER",
    "QUIET",
    "RULE",
    "SANDS",
    "SAND_EDGE",
    "SAND_SCALE",
    "SHALES",
    "SHALE_EDGE",
    "SHALE_SCALE",
    "contrast",
]

INK = "#2B2733"
"""Text and strands."""
QUIET = "#625D6B"
"""Second-rank text: axis labels, notes."""
RULE = "#D9D5E0"
"""Grid lines and frames."""
PAPER = "#FFFFFF"
ACCENT = "#6D28A8"
"""Windows and pathways."""
ACCENT_DEEP = "#33075A"
"""What is marked."""
ACCENT_PALE = "#D9C6EC"
"""Unfaulted contacts and what connects in both answers."""
BAND_FILL = "#F9EBC3"
"""Sand bands of the footwall side on a strand face."""
SAND_EDGE = "#A07A2C"
SHALE_EDGE = "#8A95A3"


def _blend(first: str, last: str, steps: int) -> tuple[str, ...]:
    """Return colours evenly spaced between two, both included."""
    a, b = (np.array([int(c[i : i + 2], 16) for i in (1, 3, 5)]) for c in (first, last))
    part = np.linspace(0.0, 1.0, steps)[:, np.newaxis]
    return tuple(
        "#" + "".join(f"{part:02X}" for part in rgb)
        for rgb in np.rint(a + part * (b - a)).astype(int)
    )


SANDS = _blend("#FFF6DC", "#E8B45A", 41)
"""Pale straw to amber for a shale fraction of 0 to 0.5."""
SHALES = _blend("#EEF1F4", "#A3AEBA", 41)
"""Cool greys for a shale fraction of 0.3 to 0.9."""
SAND_SCALE = (0.0, 0.5)
SHALE_SCALE = (0.3, 0.9)


def contrast(first: str, second: str) -> float:
    """Return the contrast ratio of two colours, 1 to 21.

    References
    ----------
    Web Content Accessibility Guidelines 2.2, W3C 2023: relative luminance and contrast ratio.

    Examples
    --------
    >>> round(contrast("#000000", "#FFFFFF"))
    21
    """
    light, dark = sorted((_luminance(first), _luminance(second)), reverse=True)
    return (light + 0.05) / (dark + 0.05)


def _luminance(colour: str) -> float:
    parts = np.array([int(colour[i : i + 2], 16) for i in (1, 3, 5)]) / 255.0
    linear = np.where(parts <= 0.04045, parts / 12.92, ((parts + 0.055) / 1.055) ** 2.4)
    return float(linear @ [0.2126, 0.7152, 0.0722])
