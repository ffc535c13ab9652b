"""The one exception family of fzconnect.

Every error that a user can cause is a `FzconnectError`. Its text says where the trouble is
(file, line or key), what was found there and what is allowed, in one sentence.
"""

from __future__ import annotations

from collections.abc import Iterable
from difflib import get_close_matches

__all__ = [
    "FzconnectError",
    "NetworkError",
    "OutputError",
    "ScenarioError",
    "UnitError",
    "nearest",
]


class FzconnectError(Exception):
    """Anything that fzconnect refuses to do, said for people."""


class ScenarioError(FzconnectError, ValueError):
    """A scenario, or a file of it, that does not describe a fault zone."""


class UnitError(ScenarioError):
    """A quantity whose unit is unknown or measures something else."""


class NetworkError(FzconnectError, ValueError):
    """A question about sands, blocks or windows that the network does not have."""


class OutputError(FzconnectError):
    """A result that could not be written where it was asked for."""


def nearest(word: str, allowed: Iterable[str]) -> str:
    """Return ", did you mean X?" for the allowed word closest to `word`, or an empty string.

    Examples
    --------
    >>> nearest("thicknes", ["layer", "thickness"])
    ', did you mean "thickness"?'
    """
    close = get_close_matches(word, list(allowed), n=1, cutoff=0.6)
    return f', did you mean "{close[0]}"?' if close else ""
