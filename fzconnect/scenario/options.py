"""The optional tables of a scenario: fault rock, fluid, flow, uncertainty, evidence."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping
from datetime import date, datetime, time
from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, ConfigDict, field_validator, model_validator

from fzconnect.scenario.part import Part
from fzconnect.scenario.quantity import (
    MOST_STRANDS,
    Amount,
    Choice,
    Density,
    Depth,
    Fraction,
    Length,
    Name,
    Pressure,
    Row,
    Temperature,
    Tension,
    fault,
    show,
    sum_to_one,
)

__all__ = [
    "Evidence",
    "FaultRock",
    "Flow",
    "Fluid",
    "Source",
    "SplitDraw",
    "ThrowDraw",
    "Uncertainty",
]

_RockPermeability = Annotated[
    Literal["sgr-throw", "clay-depth"] | float,
    BeforeValidator(Choice(("sgr-throw", "clay-depth"), Amount("mD", least=0, most=1e9))),
]
_Threshold = Annotated[
    Literal["sgr-depth", "permeability"] | float,
    BeforeValidator(Choice(("sgr-depth", "permeability"), Amount("MPa", least=0, most=10_000))),
]
_Ratio = Annotated[float, BeforeValidator(Amount("", above=0))]
_ContactAngle = Annotated[float, BeforeValidator(Amount("degrees", least=0, most=180))]
_Side = Annotated[
    Literal["footwall", "hanging_wall"], BeforeValidator(Choice(("footwall", "hanging_wall")))
]
_EvidenceKind = Annotated[
    Literal["pressure", "contact", "resolution", "strand_count"],
    BeforeValidator(Choice(("pressure", "contact", "resolution", "strand_count"))),
]


class FaultRock(Part):
    """How the rock of the strands is derived.

    Attributes
    ----------
    permeability : {"sgr-throw", "clay-depth"} or float
        Method, or one number for all windows, mD.
    thickness_ratio : float, optional
        Throw over fault-rock thickness; 66 if neither it nor `thickness` is given.
    thickness : float, optional
        One fault-rock thickness for all windows, m.
    threshold : {"sgr-depth", "permeability"} or float
        Method for the threshold pressure, or one number, MPa.
    """

    permeability: _RockPermeability = "sgr-throw"
    thickness_ratio: _Ratio | None = None
    thickness: Length | None = None
    threshold: _Threshold = "sgr-depth"

    @model_validator(mode="before")
    @classmethod
    def _fill_in(cls, data: Any) -> Any:
        if isinstance(data, Mapping) and data.get("thickness") is None:
            return {**data, "thickness_ratio": data.get("thickness_ratio", 66.0)}
        return data

    @model_validator(mode="after")
    def _check_thickness(self) -> Self:
        if (self.thickness is None) == (self.thickness_ratio is None):
            found = "neither" if self.thickness is None else "both"
            msg = f"found {found} of thickness_ratio and thickness, expected one of them"
            raise fault(msg)
        return self


class Source(Part):
    """The sand that the fluid fills, and how far down.

    Attributes
    ----------
    side : {"footwall", "hanging_wall"}
        Side of the fault zone.
    sand : str
        Name of a sand layer, or of a sand body: "S1 to S3".
    crest : float
        Depth of the shallowest point of the sand, m, positive down.
    spill : float, optional
        Depth at which the sand spills away from the fault, m.
    """

    side: _Side
    sand: Name
    crest: Depth
    spill: Depth | None = None

    @model_validator(mode="after")
    def _check_depths(self) -> Self:
        if self.spill is not None and self.spill <= self.crest:
            msg = (
                f"found {show(self.spill)} with the crest at {show(self.crest)}, "
                "expected a spill depth below the crest (depths are positive down)"
            )
            raise fault(msg, "spill")
        return self


class Fluid(Part):
    """The buoyant fluid and the brine.

    Attributes
    ----------
    name : str
        Such as "CO2".
    density : float, optional
        kg/m3; or give `pressure`, MPa, and `temperature`, degC, to have it computed.
    pressure, temperature : float, optional
        State at which the density is computed.
    brine_density : float, optional
        kg/m3.
    interfacial_tension : float, optional
        mN/m.
    contact_angle : float, optional
        degrees, through the brine.
    source : Source, optional
        Where the fluid stands.
    """

    name: Name
    density: Density | None = None
    pressure: Pressure | None = None
    temperature: Temperature | None = None
    brine_density: Density | None = None
    interfacial_tension: Tension | None = None
    contact_angle: _ContactAngle | None = None
    source: Source | None = None

    @model_validator(mode="after")
    def _check_density(self) -> Self:
        state = (self.pressure is not None, self.temperature is not None)
        if (self.density is not None) == any(state) or any(state) != all(state):
            names = ("density", "pressure", "temperature")
            given = [name for name in names if getattr(self, name) is not None]
            found = " and ".join(given) or "neither"
            msg = f"found {found}, expected either density or both pressure and temperature"
            raise fault(msg)
        if self.density and self.brine_density and self.density >= self.brine_density:
            msg = (
                f"found {show(self.density)} with a brine density of {show(self.brine_density)}, "
                "expected a buoyant fluid, lighter than the brine"
            )
            raise fault(msg, "density")
        return self


class Flow(Part):
    """How far from the zone the flow is taken.

    Attributes
    ----------
    outer_distance : float
        m, from the outermost strand into the footwall and the hanging wall.
    """

    outer_distance: Length = 50.0


_Shares = Annotated[tuple[Fraction, Fraction], BeforeValidator(Row(("low", "high")))]


class SplitDraw(Part):
    """How the throw split is drawn: one of `dirichlet`, `largest_share`.

    Attributes
    ----------
    dirichlet : float, optional
        Concentration of a symmetric Dirichlet distribution; 1 is a broken stick.
    largest_share : tuple of (float, float), optional
        Range of the largest strand's share, uniform; the rest is a broken stick.
    """

    dirichlet: Annotated[float, BeforeValidator(Amount("", above=0))] | None = None
    largest_share: _Shares | None = None

    @model_validator(mode="after")
    def _check(self) -> Self:
        if (self.dirichlet is None) == (self.largest_share is None):
            found = "neither" if self.dirichlet is None else "both"
            msg = f"found {found} of dirichlet and largest_share, expected one of them"
            raise fault(msg)
        if self.largest_share and not 0 < self.largest_share[0] <= self.largest_share[1]:
            msg = (
                f"found {show(self.largest_share)}, expected [low, high], above 0 and in this order"
            )
            raise fault(msg, "largest_share")
        return self


_Metres = Annotated[float, BeforeValidator(Amount("m"))]
_Spread = Annotated[float, BeforeValidator(Amount("m", above=0))]
_Sigma = Annotated[float, BeforeValidator(Amount("", above=0, most=10))]
_Triangular = Annotated[
    tuple[_Metres, _Metres, _Metres], BeforeValidator(Row(("low", "mode", "high")))
]
_Uniform = Annotated[tuple[_Metres, _Metres], BeforeValidator(Row(("low", "high")))]
_Normal = Annotated[tuple[_Metres, _Spread], BeforeValidator(Row(("mean", "standard deviation")))]
_LogNormal = Annotated[tuple[_Spread, _Sigma], BeforeValidator(Row(("median", "sigma of ln")))]


class ThrowDraw(Part):
    """How the total throw is drawn, m; a factor where the throw is given along the fault.

    Attributes
    ----------
    triangular : tuple of (float, float, float), optional
        Low, mode, high.
    uniform : tuple of (float, float), optional
        Low, high.
    normal : tuple of (float, float), optional
        Mean, standard deviation.
    lognormal : tuple of (float, float), optional
        Median, standard deviation of the natural logarithm.
    """

    triangular: _Triangular | None = None
    uniform: _Uniform | None = None
    normal: _Normal | None = None
    lognormal: _LogNormal | None = None

    @model_validator(mode="after")
    def _check(self) -> Self:
        given = [name for name, value in self if value is not None]
        if len(given) != 1:
            found = " and ".join(given) or "none"
            msg = f"found {found}, expected one of triangular, uniform, normal, lognormal"
            raise fault(msg)
        for name, words in (("triangular", "[low, mode, high]"), ("uniform", "[low, high]")):
            limits = getattr(self, name)
            if limits and not (limits[0] < limits[-1] and list(limits) == sorted(limits)):
                msg = f"found {show(limits)}, expected {words} in increasing order"
                raise fault(msg, name)
        return self

    @property
    def numbers(self) -> tuple[float, ...]:
        """The parameters of the distribution that is given."""
        given: tuple[float, ...] = next(value for _, value in self if value is not None)
        return given


class Uncertainty(Part):
    """What is not known of the zone; what is left out is known.

    Attributes
    ----------
    strand_count : tuple of (int, float), optional
        Strand counts and their weights, which sum to one; a table of count to weight in a file.
    split : SplitDraw, optional
        How the throw split is drawn.
    throw : ThrowDraw, optional
        How the total throw is drawn.
    thickness : float, optional
        Coefficient of variation of layer thickness, lognormal.
    vsh : float, optional
        Standard deviation of vsh, which is kept in 0 to 1.
    """

    strand_count: tuple[tuple[int, float], ...] | None = None
    split: SplitDraw | None = None
    throw: ThrowDraw | None = None
    thickness: Annotated[float, BeforeValidator(Amount("fraction", least=0, most=5))] | None = None
    vsh: Fraction | None = None

    @field_validator("strand_count", mode="before")
    @classmethod
    def _check_counts(cls, value: Any) -> Any:
        if value is None:
            return None
        if isinstance(value, (list, tuple)) and all(
            isinstance(pair, tuple) and len(pair) == 2 for pair in value
        ):
            value = {str(count): weight for count, weight in value}
        if not isinstance(value, Mapping) or not value:
            msg = f"found {show(value)}, expected a table of strand count to weight"
            raise fault(msg)
        weights: dict[int, float] = {}
        amount = Amount("", least=0, most=1 + 1e-6)
        for key, weight in value.items():
            if not re.fullmatch(r"[1-9][0-9]?", str(key)) or int(key) > MOST_STRANDS:
                msg = f"found {show(key)}, expected a whole number from 1 to {MOST_STRANDS}"
                raise fault(msg)
            try:
                weights[int(key)] = amount(weight)
            except ValueError as error:
                raise fault(str(error), str(key)) from None
        counts = sorted(weights)
        return tuple(zip(counts, sum_to_one(tuple(weights[n] for n in counts)), strict=True))


class Evidence(Part):
    """One observation that the odds are weighed by.

    Attributes
    ----------
    kind : {"pressure", "contact", "resolution", "strand_count"}
        What was observed; the other keys are kept as they are.
    """

    model_config = ConfigDict(extra="allow")

    kind: _EvidenceKind

    @model_validator(mode="before")
    @classmethod
    def _check_plain(cls, data: Any) -> Any:
        # Lists become tuples, so that a scenario cannot be changed through them.
        return _plain(data, ()) if isinstance(data, Mapping) else data


def _plain(value: Any, at: tuple[str | int, ...]) -> Any:
    """Return a TOML value with its lists as tuples, or refuse what a file cannot hold."""
    if len(at) > 8:
        msg = "found tables or lists more than 8 deep, expected a few levels"
        raise fault(msg, *at[:8])
    if isinstance(value, Mapping):
        for key in value:
            if not isinstance(key, str):
                msg = f"found the key {show(key)}, expected a text"
                raise fault(msg, *at)
        return {key: _plain(inner, (*at, key)) for key, inner in value.items()}
    if isinstance(value, (list, tuple)):
        return tuple(_plain(inner, (*at, i)) for i, inner in enumerate(value))
    number = isinstance(value, (int, float)) and not isinstance(value, bool)
    if number and not (abs(value) < 2**63 and math.isfinite(value)):
        msg = f"found {show(value)}, expected a finite number"
        raise fault(msg, *at)
    if isinstance(value, str) and not value.isascii() and re.search("[\ud800-\udfff]", value):
        msg = "found half a character (a lone surrogate), expected a text"
        raise fault(msg, *at)
    if not isinstance(value, (str, bool, int, float, datetime, date, time)):
        msg = f"found {show(value)}, expected a text, number, date, list or table"
        raise fault(msg, *at)
    return value
