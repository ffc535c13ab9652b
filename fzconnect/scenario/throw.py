"""The throw of the whole zone along the fault."""

from __future__ import annotations

import math
from typing import Annotated, Self

from pydantic import BeforeValidator, field_validator, model_validator

from fzconnect.errors import ScenarioError
from fzconnect.scenario.part import Part
from fzconnect.scenario.quantity import (
    MOST_POINTS,
    Amount,
    Depth,
    Points,
    Span,
    check_distances,
    fault,
    show,
)

__all__ = ["Cutoff", "Throw"]

_Throw = Annotated[float, BeforeValidator(Amount("m"))]

_LEAST_LENGTH = 1e-3
"""Shortest fault along strike, m."""


class Cutoff(Part):
    """Where the column's top meets the fault, at one distance along it.

    Attributes
    ----------
    distance : float
        m along the fault trace.
    footwall, hanging_wall : float
        Depths of the column's top on either side, m, positive down.
    """

    distance: Depth
    footwall: Depth
    hanging_wall: Depth


class Throw(Part):
    """Throw of the whole zone at the column's top: one of `total`, `profile`, `cutoffs`.

    Attributes
    ----------
    total : float, optional
        One throw for the whole fault, m; positive where the hanging wall is down.
    length : float
        Length of the fault along strike, m; only with `total`.
    profile : tuple of (float, float), optional
        Distance along the fault and throw, m; linear between the points.
    cutoffs : tuple of Cutoff, optional
        Depths of the column's top on both sides; linear between the distances.
    """

    total: _Throw | None = None
    length: Span = 1.0
    profile: Points | None = None
    cutoffs: tuple[Cutoff, ...] | None = None

    @field_validator("cutoffs", mode="after")
    @classmethod
    def _check_cutoffs(cls, cutoffs: tuple[Cutoff, ...] | None) -> tuple[Cutoff, ...] | None:
        if cutoffs is not None:
            if not 2 <= len(cutoffs) <= MOST_POINTS:
                msg = f"found {len(cutoffs)} cutoffs, expected 2 to {MOST_POINTS}"
                raise fault(msg)
            check_distances([cutoff.distance for cutoff in cutoffs], "distance")
        return cutoffs

    @model_validator(mode="after")
    def _check_one(self) -> Self:
        forms = {"total": self.total, "profile": self.profile, "cutoffs (file)": self.cutoffs}
        given = [name for name, value in forms.items() if value is not None]
        if len(given) != 1:
            found = " and ".join(given) or "none of them"
            msg = f"found {found}, expected exactly one of total, profile, cutoffs (file)"
            raise fault(msg)
        if self.total is None and self.length != 1:
            msg = f"found length {self.length:g} with {given[0]}, expected it with total only"
            raise fault(msg)
        self._check_extent()
        return self

    def _check_extent(self) -> None:
        extent = self.distances[-1] - self.distances[0]
        if extent < _LEAST_LENGTH:
            name = "cutoffs" if self.profile is None else "profile"
            msg = f"found a fault of {extent:.3g} m, expected at least {_LEAST_LENGTH:g} m"
            raise fault(msg, name)

    @property
    def distances(self) -> tuple[float, ...]:
        """Distances along the fault, m, at which the throw is given."""
        if self.profile is not None:
            return tuple(distance for distance, _ in self.profile)
        if self.cutoffs is not None:
            return tuple(cutoff.distance for cutoff in self.cutoffs)
        return (0.0, self.length)

    @property
    def throws(self) -> tuple[float, ...]:
        """Throw at each of the `distances`, m."""
        if self.profile is not None:
            return tuple(throw for _, throw in self.profile)
        if self.cutoffs is not None:
            return tuple(cutoff.hanging_wall - cutoff.footwall for cutoff in self.cutoffs)
        total = self.total if self.total is not None else 0.0
        return (total, total)

    def scaled(self, factor: float) -> Throw:
        """Return the throw times a factor; of cutoffs, the footwall stays where it is.

        Parameters
        ----------
        factor : float
            1 leaves the throw exactly as it is; 0 closes the fault; negative reverses it.

        Raises
        ------
        ScenarioError
            If the factor is not a finite number, or the throw leaves all sensible limits.
        """
        if not math.isfinite(factor):
            msg = f"factor of the throw: found {show(factor)}, expected a finite number"
            raise ScenarioError(msg)
        if factor == 1:
            return self
        if self.profile is not None:
            return Throw(profile=tuple((s, throw * factor) for s, throw in self.profile))
        if self.cutoffs is not None:
            return Throw(
                cutoffs=tuple(
                    Cutoff(
                        distance=cutoff.distance,
                        footwall=cutoff.footwall,
                        hanging_wall=cutoff.footwall
                        + factor * (cutoff.hanging_wall - cutoff.footwall),
                    )
                    for cutoff in self.cutoffs
                )
            )
        return Throw(total=(self.total or 0.0) * factor, length=self.length)
