"""Sand bodies: runs of neighbouring sand layers that fluid fills as one."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import groupby

from fzconnect.errors import ScenarioError

__all__ = ["SandBody", "sand_bodies"]


@dataclass(frozen=True)
class SandBody:
    """A run of neighbouring sand layers.

    Attributes
    ----------
    name : str
        The layer's name, or "first to last" for a run of several.
    first, last : int
        Indices of its first and last layer in the column, both inclusive, top to base.
    """

    name: str
    first: int
    last: int


def sand_bodies(names: Sequence[str], is_sand: Sequence[bool]) -> tuple[SandBody, ...]:
    """Return the sand bodies of a column, top to base.

    Parameters
    ----------
    names : sequence of str, one a layer
    is_sand : sequence of bool, one a layer

    Raises
    ------
    ScenarioError
        If two sand bodies would have the same name, as a layer "A to B" below a run from A to B.

    Examples
    --------
    >>> [body.name for body in sand_bodies(["S1", "S2", "M1", "S3"], [True, True, False, True])]
    ['S1 to S2', 'S3']
    """
    bodies: list[SandBody] = []
    for sand, run in groupby(range(len(names)), key=lambda layer: bool(is_sand[layer])):
        layers = list(run)
        if sand:
            first, last = layers[0], layers[-1]
            name = names[first] if first == last else f"{names[first]} to {names[last]}"
            if any(body.name == name for body in bodies):
                msg = (
                    f'column: two sand bodies would be called "{name}", expected another name for '
                    f'the layer "{names[first]}" (a run of sands is called "first to last")'
                )
                raise ScenarioError(msg)
            bodies.append(SandBody(name, first, last))
    return tuple(bodies)
