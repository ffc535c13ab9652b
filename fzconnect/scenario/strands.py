"""The strands that share the throw, the lenses between them, and conduits."""

from __future__ import annotations

import math
from bisect import bisect_right
from collections.abc import Mapping, Sequence
from typing import Annotated, Any, Self

from pydantic import Field, model_validator

from fzconnect.errors import ScenarioError
from fzconnect.scenario.part import Part
from fzconnect.scenario.quantity import (
    MOST_STRANDS,
    Angle,
    Depth,
    Length,
    Name,
    Permeability,
    Split,
    StrandNumber,
    Weights,
    fault,
    show,
)

__all__ = ["LENS_WIDTH", "Conduit", "StrandShare", "Strands"]

#: Width of a lens where none is given, m.
LENS_WIDTH = 20.0


class StrandShare(Part):
    """How much of the throw one strand takes along the fault, against the other strands.

    Attributes
    ----------
    name : str
        Name of the strand.
    points : tuple of (float, float)
        Distance along the fault, m, and weight; linear between the points, constant beyond.
        The weights of all strands are normalised at every distance. A weight of zero is a tip; a
        negative one an antithetic strand.
    """

    name: Name
    points: Weights

    def weight_at(self, distance: float) -> float:
        """Return the weight at a distance, m, along the fault."""
        points = self.points
        i = bisect_right(points, distance, key=lambda point: point[0])
        if i == 0:
            return points[0][1]
        if i == len(points) or points[i - 1][0] == distance:
            return points[i - 1][1]
        (s0, w0), (s1, w1) = points[i - 1], points[i]
        part = (distance - s0) / (s1 - s0)
        return w0 * (1 - part) + w1 * part


class Conduit(Part):
    """A depth range over which a strand carries fluid along itself.

    Attributes
    ----------
    strand : int
        Counted from 1, footwall to hanging wall.
    from_depth, to_depth : float
        Depth range, m, positive down; the keys are `from` and `to` in a file.
    width : float
        m, across the strand.
    permeability : float
        mD, along the strand.
    """

    strand: StrandNumber
    from_depth: Annotated[Depth, Field(alias="from")]
    to_depth: Annotated[Depth, Field(alias="to")]
    width: Length
    permeability: Permeability

    @model_validator(mode="after")
    def _check_range(self) -> Self:
        if self.from_depth >= self.to_depth:
            msg = (
                f"found from {show(self.from_depth)} and to {show(self.to_depth)}, "
                "expected from above to (depths are positive down)"
            )
            raise fault(msg)
        return self


def _expand(data: Any) -> Any:
    """Fill in the strand count and write lens widths out, one a lens."""
    if not isinstance(data, Mapping):
        return data
    data = dict(data)
    lists = (data.get("split"), data.get("shares"))
    if data.get("count") is None:
        data["count"] = next((len(x) for x in lists if isinstance(x, (list, tuple)) and x), 1)
    count, width = data["count"], data.get("lens_width")
    if not isinstance(width, (list, tuple)):
        # With a wrong count the error is about the count; one width is checked all the same.
        sane = isinstance(count, int) and 1 <= count <= MOST_STRANDS
        lenses = int(count) - 1 if sane else 1
        data["lens_width"] = (LENS_WIDTH if width is None else width,) * lenses
    return data


class Strands(Part):
    """The strands of the fault zone, numbered from the footwall to the hanging wall.

    Attributes
    ----------
    count : int
        Number of strands.
    split : tuple of float, optional
        Share of the throw that each strand takes, the same along the whole fault; sums to one.
        None, without `shares` either, is an equal split.
    shares : tuple of StrandShare, optional
        Shares that vary along the fault, one a strand.
    lens_width : tuple of float
        Widths of the lenses between neighbouring strands, m; one less than strands.
    dip : float
        Dip of the strands, degrees.
    conduits : tuple of Conduit
        Depth ranges over which strands carry fluid along themselves.
    """

    count: StrandNumber = 1
    split: Split | None = None
    shares: tuple[StrandShare, ...] | None = None
    lens_width: tuple[Length, ...] = ()
    dip: Angle = 65.0
    conduits: tuple[Conduit, ...] = ()

    @model_validator(mode="before")
    @classmethod
    def _fill_in(cls, data: Any) -> Any:
        return _expand(data)

    @model_validator(mode="after")
    def _check_lengths(self) -> Self:
        if self.split is not None and self.shares is not None:
            msg = "found split and shares, expected one of them"
            raise fault(msg)
        for name, part in (("split", self.split), ("shares", self.shares)):
            if part is not None and len(part) != self.count:
                msg = f"found {len(part)} shares for {self.count} strands, expected one a strand"
                raise fault(msg, name)
        if len(self.lens_width) != self.count - 1:
            msg = (
                f"found {len(self.lens_width)} widths for {self.count} strands, "
                f"expected {self.count - 1}, one between neighbours, or one number for all"
            )
            raise fault(msg, "lens_width")
        for i, conduit in enumerate(self.conduits):
            if conduit.strand > self.count:
                msg = f"found strand {conduit.strand}, expected 1 to {self.count}"
                raise fault(msg, "conduits", i, "strand")
        self._check_shares()
        return self

    def _check_shares(self) -> None:
        names: set[str] = set()
        for i, share in enumerate(self.shares or ()):
            if share.name in names:
                msg = f"found {show(share.name)} twice, expected another name for each strand"
                raise fault(msg, "shares", i, "name")
            names.add(share.name)
        # Linear between the knots, so a sum that is positive there is positive everywhere.
        for distance in self.knots:
            weights = self._weights_at(distance)
            total, largest = math.fsum(weights), max(map(abs, weights))
            if total <= 0.01 * largest:
                msg = (
                    f"the weights at distance {show(distance)} sum to {total:.6g}, "
                    "expected a sum above zero, and above 1 % of the largest weight"
                )
                raise fault(msg, "shares")

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the strands, footwall to hanging wall; their numbers where none are given."""
        if self.shares is not None:
            return tuple(share.name for share in self.shares)
        return tuple(str(k + 1) for k in range(self.count))

    @property
    def knots(self) -> tuple[float, ...]:
        """Distances, m, at which a share changes its slope; empty for a constant split."""
        return tuple(sorted({s for share in self.shares or () for s, _ in share.points}))

    def _weights_at(self, distance: float) -> tuple[float, ...]:
        if not math.isfinite(distance):
            msg = f"distance along the fault: found {show(distance)}, expected a finite number"
            raise ScenarioError(msg)
        return tuple(share.weight_at(distance) for share in self.shares or ())

    def split_at(self, distance: float) -> tuple[float, ...]:
        """Return the share of each strand at a distance, m, along the fault; they sum to one."""
        if self.shares is not None:
            weights = self._weights_at(distance)
            total = math.fsum(weights)
            return tuple(weight / total for weight in weights)
        return self.split or (1 / self.count,) * self.count

    def with_count(self, count: int) -> Strands:
        """Return as many strands with an equal split.

        Lens widths are kept, the last one repeated where more are needed. Conduits stay on the
        strands that are left.

        Raises
        ------
        ScenarioError
            If the count is not a whole number from 1 to 50.
        """
        return self._replaced(count, None)

    def with_split(self, split: Sequence[float]) -> Strands:
        """Return strands with this split along the whole fault, one share a strand.

        Raises
        ------
        ScenarioError
            If the shares do not sum to one.
        """
        return self._replaced(len(split), tuple(split))

    def _replaced(self, count: int, split: tuple[float, ...] | None) -> Strands:
        # A bad count is refused by the model that is made below.
        number = count if isinstance(count, int) and 1 <= count <= MOST_STRANDS else 1
        last = self.lens_width[-1] if self.lens_width else LENS_WIDTH
        widths = (*self.lens_width, *(last,) * number)[: number - 1]
        conduits = tuple(c for c in self.conduits if c.strand <= number)
        return self._with(
            count=count, split=split, shares=None, lens_width=widths, conduits=conduits
        )

    def with_split_at(self, distance: float, split: Sequence[float]) -> Strands:
        """Return strands that split the throw in this way at one distance along the fault.

        A constant split is replaced. Of shares that vary, each strand's weights are scaled, so a
        strand that has its tip at this distance keeps it, and the others share what was asked in
        the same proportions.

        Parameters
        ----------
        distance : float
            m along the fault.
        split : sequence of float
            One share a strand; they sum to one. Zero closes the strand along the whole fault.

        Raises
        ------
        ScenarioError
            If the shares do not sum to one, or no strand is there to take them.
        """
        constant = self.with_split(split)
        if self.shares is None or constant.count != self.count:
            return constant
        weights = self._weights_at(distance)
        shares = constant.split_at(distance)
        reach = math.fsum(share for share, weight in zip(shares, weights, strict=True) if weight)
        if reach <= 0:
            msg = (
                f"strands.shares: every strand that would take throw has its tip at distance "
                f"{show(distance)}, expected a share for a strand that exists there"
            )
            raise ScenarioError(msg)
        total = math.fsum(weights)
        scaled = []
        for strand, share, weight in zip(self.shares, shares, weights, strict=True):
            factor = share / reach * total / weight if weight else 1.0
            points = tuple((s, w * factor) for s, w in strand.points)
            scaled.append(StrandShare(name=strand.name, points=points))
        return self._with(shares=tuple(scaled))
