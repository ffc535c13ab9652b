"""The fault zone as arrays: boundaries, shares, blocks and the two faces of every strand."""

from __future__ import annotations

from dataclasses import dataclass, replace
from itertools import pairwise
from typing import TYPE_CHECKING, Self

import numpy as np
from numpy.typing import NDArray

from fzconnect.errors import ScenarioError
from fzconnect.geometry.body import SandBody, sand_bodies
from fzconnect.geometry.section import Section, cut

if TYPE_CHECKING:
    from fzconnect.scenario import Column, Scenario, Strands, Throw

__all__ = ["FaultZone"]

_SPACINGS = 50
"""Where shares vary along the fault, no gap between stations exceeds this part of its length."""

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False, repr=False)
class FaultZone:
    """A fault zone of N strands that share the throw, at S stations along the fault.

    Attributes
    ----------
    name : str
    stations : (S,) array
        Distance along the fault, m, increasing.
    footwall, hanging_wall : (U + 1, S) arrays
        Depths, m, of the tops of the U layers and of the last layer's base.
    shares : (N, S) array
        Part of the throw on each strand, footwall to hanging wall; sums to one at every station.
        Negative: an antithetic strand. Zero: the strand does not exist there.
    faces : (N, 2, U + 1, S) array
        Depths of the boundaries on the footwall face (0) and the hanging-wall face (1) of each
        strand. Kept apart from the blocks so that a lens may be tilted.
    strand_names : tuple of str, one a strand
    dip : float
        Dip of the strands, degrees, above 0 and up to 90.
    lens_width : (N - 1,) array
        Horizontal width of each lens across the fault, m.
    layer_names : tuple of str, U of them, top to base
    bodies : tuple of SandBody
    is_sand : tuple of bool, one a layer
    vsh : (2, U) array
        Shale fraction of each layer in the footwall column (0) and the hanging-wall column (1).
    permeability, porosity : (2, U) array or None
        mD and fraction; NaN where a layer's value is not given, None where no layer's is.

    Notes
    -----
    Everything is linear between stations. Throw is Z_H - Z_F, positive where the hanging wall is
    down; block j has its tops at Z_F + F_j (Z_H - Z_F), where F_j is the sum of the first j shares.
    """

    name: str
    stations: Array
    footwall: Array
    hanging_wall: Array
    shares: Array
    faces: Array
    strand_names: tuple[str, ...]
    dip: float
    lens_width: Array
    layer_names: tuple[str, ...]
    bodies: tuple[SandBody, ...]
    is_sand: tuple[bool, ...]
    vsh: Array
    permeability: Array | None = None
    porosity: Array | None = None

    def __post_init__(self) -> None:
        # own copies that cannot be written: a zone that changed would belie its windows
        for name, value in vars(self).items():
            if isinstance(value, np.ndarray):
                own = np.array(value)
                own.setflags(write=False)
                object.__setattr__(self, name, own)

    @classmethod
    def from_scenario(cls, scenario: Scenario) -> Self:
        """Return the fault zone that a scenario describes.

        Raises
        ------
        ScenarioError
            If growth, carried beyond the walls by an antithetic strand, leaves a layer of a lens
            without thickness.

        Notes
        -----
        Stations are the distances of the throw profile. Where shares vary along the fault, their
        own distances join in, and gaps are divided evenly until none exceeds a fiftieth of the
        length, because a share times a throw is not a straight line between two knots.
        """
        column, strands = scenario.column, scenario.strands
        stations = _stations(scenario.throw, strands)
        footwall, hanging_wall = _boundaries(column, scenario.throw, stations)
        shares = np.array([strands.split_at(float(s)) for s in stations]).T
        layers = column.layers
        across = (layers, column.hanging_wall or layers)
        faces = _faces(footwall, hanging_wall, shares)
        _check_thickness(faces, column.names, strands.names, stations)
        return cls(
            name=scenario.name,
            stations=stations,
            footwall=footwall,
            hanging_wall=hanging_wall,
            shares=shares,
            faces=faces,
            strand_names=tuple(strands.names),
            dip=strands.dip,
            lens_width=np.array(strands.lens_width, dtype=float),
            layer_names=tuple(layer.name for layer in layers),
            bodies=sand_bodies([layer.name for layer in layers], column.is_sand),
            is_sand=tuple(column.is_sand),
            vsh=np.array([[layer.vsh for layer in side] for side in across]),
            permeability=_optional([[layer.permeability for layer in side] for side in across]),
            porosity=_optional([[layer.porosity for layer in side] for side in across]),
        )

    def single_plane(self) -> Self:
        """Return the same throw on one plane: the answer that a fault drawn as one line gives."""
        shares = np.ones((1, len(self.stations)))
        return replace(
            self,
            shares=shares,
            faces=_faces(self.footwall, self.hanging_wall, shares),
            strand_names=("single plane",),
            lens_width=np.zeros(0),
        )

    @property
    def strand_count(self) -> int:
        """Number of strands, N."""
        return int(self.shares.shape[0])

    @property
    def length(self) -> float:
        """Length along the fault, m."""
        return float(self.stations[-1] - self.stations[0])

    @property
    def block_names(self) -> tuple[str, ...]:
        """Names of the N + 1 blocks, footwall to hanging wall."""
        lenses = (f"lens {j}" for j in range(1, self.strand_count))
        return ("footwall", *lenses, "hanging wall")

    @property
    def throw(self) -> Array:
        """Throw of the whole zone at the column's top, m, at each station: (S,) array."""
        return np.asarray(self.hanging_wall[0] - self.footwall[0])

    @property
    def strand_throw(self) -> Array:
        """Throw of each strand at the column's top, m: (N, S) array."""
        return np.asarray(self.shares * self.throw)

    def block_boundaries(self, block: int) -> Array:
        """Return the depths, m, of a block's layer boundaries: (U + 1, S) array.

        A lens has two faces; a tilted one is given by their mean.
        """
        if block == 0:
            return np.asarray(self.faces[0, 0])
        if block == self.strand_count:
            return np.asarray(self.faces[-1, 1])
        return np.asarray(0.5 * (self.faces[block - 1, 1] + self.faces[block, 0]))

    def across(self, values: Array, block: int) -> Array:
        """Return a layer property in a block, between the two columns: (U,) array.

        Parameters
        ----------
        values : (2, U) array
            The property in the footwall column and in the hanging-wall column.
        block : int

        Notes
        -----
        A lens takes the part of the difference that it takes of the throw, F_j averaged along
        the fault and kept within 0 and 1.
        """
        part = float(np.clip(self.shares[:block].sum(axis=0).mean(), 0.0, 1.0))
        return np.asarray(values[0] + part * (values[1] - values[0]))

    def has_same_walls(self, other: FaultZone) -> bool:
        """Tell whether footwall, hanging wall and dip are those of `other`, whatever is between."""
        columns = (
            (self.stations, other.stations),
            (self.footwall, other.footwall),
            (self.hanging_wall, other.hanging_wall),
            (self.vsh, other.vsh),
            (_given(self.permeability), _given(other.permeability)),
        )
        return (
            self.dip == other.dip
            and self.bodies == other.bodies
            and all(np.array_equal(mine, its, equal_nan=True) for mine, its in columns)
        )

    def body_faces(self) -> tuple[Array, Array]:
        """Return tops and bases, m, of the sand bodies on every face: two (N, 2, A, S) arrays."""
        first = [body.first for body in self.bodies]
        past = [body.last + 1 for body in self.bodies]
        return (
            np.ascontiguousarray(self.faces[:, :, first]),
            np.ascontiguousarray(self.faces[:, :, past]),
        )

    def at(self, distance: float) -> Section:
        """Return the section across the zone at a distance along the fault, m.

        Raises
        ------
        NetworkError
            If the distance is not on the fault.
        """
        return cut(self, distance)

    def __repr__(self) -> str:
        return (
            f"<FaultZone {self.name!r}: {self.strand_count} strands, "
            f"{len(self.layer_names)} layers, {len(self.bodies)} sand bodies, "
            f"{len(self.stations)} stations over {self.length:g} m>"
        )


def _stations(throw: Throw, strands: Strands) -> Array:
    """Return the stations, m: knots of the throw, and of the shares where these vary."""
    knots = np.array(throw.distances, dtype=float)
    if not strands.knots:
        return knots
    inside = [s for s in strands.knots if knots[0] < s < knots[-1]]
    knots = np.unique(np.concatenate([knots, inside]))
    gap = (knots[-1] - knots[0]) / _SPACINGS
    pieces = [
        np.linspace(left, right, max(1, int(np.ceil((right - left) / gap - 1e-9))), endpoint=False)
        for left, right in pairwise(knots)
    ]
    return np.concatenate([*pieces, knots[-1:]])


def _boundaries(column: Column, throw: Throw, stations: Array) -> tuple[Array, Array]:
    """Return boundary depths, m, in the footwall and in the hanging wall: (U + 1, S) each."""
    if throw.cutoffs is not None:
        at = [cutoff.distance for cutoff in throw.cutoffs]
        top_footwall = np.interp(stations, at, [cutoff.footwall for cutoff in throw.cutoffs])
        top_hanging = np.interp(stations, at, [cutoff.hanging_wall for cutoff in throw.cutoffs])
    else:
        total = throw.total or 0.0  # given unless there is a profile, as the scenario has checked
        points = np.array(throw.profile or ((0.0, total), (throw.length, total)), dtype=float)
        top_footwall = np.full(len(stations), column.top, dtype=float)
        top_hanging = top_footwall + np.interp(stations, points[:, 0], points[:, 1])
    below = _depth_below_top([layer.thickness for layer in column.layers])
    other = column.hanging_wall or column.layers
    below_hanging = _depth_below_top([layer.thickness for layer in other])
    return (
        top_footwall + below[:, np.newaxis],
        top_hanging + below_hanging[:, np.newaxis],
    )


def _depth_below_top(thickness: list[float]) -> Array:
    return np.concatenate([[0.0], np.cumsum(thickness)])


def _faces(footwall: Array, hanging_wall: Array, shares: Array) -> Array:
    """Return the boundary depths on both faces of each strand: (N, 2, U + 1, S)."""
    cumulative = np.vstack([np.zeros(shares.shape[1]), np.cumsum(shares, axis=0)])
    cumulative[-1] = 1.0  # the last block is the hanging wall itself, free of rounding
    throw = hanging_wall - footwall
    blocks = footwall + cumulative[:, np.newaxis, :] * throw
    blocks[-1] = hanging_wall
    return np.stack([blocks[:-1], blocks[1:]], axis=1)


def _check_thickness(
    faces: Array, layers: tuple[str, ...], strands: tuple[str, ...], stations: Array
) -> None:
    """Refuse layers without thickness; only shares summed below 0 or above 1 lead to them."""
    thickness = np.diff(faces, axis=2)
    k, side, layer, i = np.unravel_index(np.argmin(thickness), thickness.shape)
    least = float(thickness[k, side, layer, i])
    if least <= 0.0:
        where = ("footwall", "hanging-wall")[int(side)]
        msg = (
            f'layer "{layers[int(layer)]}" would be {least:.3g} m thick on the {where} side of '
            f"strand {strands[int(k)]} at distance {stations[i]:g} m, expected more than 0 m: the "
            "shares of the strands carry the growth between the two columns too far there"
        )
        raise ScenarioError(msg)


def _given(values: Array | None) -> Array:
    return np.zeros(0) if values is None else values


def _optional(rows: list[list[float | None]]) -> Array | None:
    """Return the values as an array with NaN for what is not given, None if nothing is."""
    values = np.array([[np.nan if v is None else v for v in row] for row in rows])
    return None if np.isnan(values).all() else values
