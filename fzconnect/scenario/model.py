"""The scenario: everything that the user says about one fault zone."""

from __future__ import annotations

import hashlib
import json
from typing import Self

from pydantic import model_validator

from fzconnect.errors import nearest
from fzconnect.scenario.column import Column
from fzconnect.scenario.options import Evidence, FaultRock, Flow, Fluid, Uncertainty
from fzconnect.scenario.part import Part
from fzconnect.scenario.quantity import Name, fault, show
from fzconnect.scenario.strands import Strands
from fzconnect.scenario.throw import Throw

__all__ = ["Scenario"]

# A factor beyond this is a throw in metres that was meant for `total`.
_LARGEST_FACTOR = 20.0


class Scenario(Part):
    """One fault zone as the user describes it.

    Attributes
    ----------
    name : str
        Title of the scenario.
    column : Column
        Layers on both sides.
    throw : Throw
        Throw of the whole zone along the fault.
    strands : Strands
        How strands share the throw; one strand if left out.
    fault_rock : FaultRock, optional
    fluid : Fluid, optional
    flow : Flow, optional
    uncertainty : Uncertainty, optional
    evidence : tuple of Evidence

    Notes
    -----
    Depths are in m and positive down, distances in m along the fault trace. Scenarios are
    immutable and equal by value.
    """

    name: Name
    column: Column
    throw: Throw
    strands: Strands = Strands()
    fault_rock: FaultRock | None = None
    fluid: Fluid | None = None
    flow: Flow | None = None
    uncertainty: Uncertainty | None = None
    evidence: tuple[Evidence, ...] = ()

    @model_validator(mode="after")
    def _check_together(self) -> Self:
        self._check_top()
        self._check_reach()
        self._check_source()
        self._check_factor()
        return self

    def _check_top(self) -> None:
        top, cutoffs = self.column.top, self.throw.cutoffs
        if cutoffs is None:
            if top is None:
                msg = (
                    'the key "top" is missing, expected the depth of the first layer\'s top in '
                    "the footwall (only a cutoff table makes it unnecessary)"
                )
                raise fault(msg, "column")
            return
        depths = [cutoff.footwall for cutoff in cutoffs]
        if top is not None and not min(depths) <= top <= max(depths):
            msg = (
                f"found {show(top)}, expected a depth within the footwall cutoffs, "
                f"{show(min(depths))} to {show(max(depths))}, or no top at all"
            )
            raise fault(msg, "column", "top")

    def _check_reach(self) -> None:
        # Linear between the distances: if all of them are out of reach, so is every one between.
        throws, column = self.throw.throws, self.column
        down, up = column.thickness("footwall"), column.thickness("hanging wall")
        if all(throw >= down for throw in throws):
            least, thickness = min(throws), down
        elif all(throw <= -up for throw in throws):
            least, thickness = max(throws), up
        else:
            return
        msg = (
            f"a throw of {least:.6g} m pushes every layer past the column, which is "
            f"{thickness:.6g} m thick, at every distance; expected a smaller throw or more layers"
        )
        raise fault(msg, "throw")

    def _check_source(self) -> None:
        source = self.fluid.source if self.fluid else None
        if source is None:
            return
        pairs = zip(self.column.names, self.column.is_sand, strict=True)
        sands = [name for name, is_sand in pairs if is_sand]
        # "S1 to S3" names a sand body by its first and last layer.
        ends = source.sand.split(" to ")
        body = len(ends) == 2 and all(end in sands for end in ends)
        if source.sand not in sands and not body:
            hint = nearest(source.sand, sands) or ","
            few = ", ".join(sands[:6]) + (", ..." if len(sands) > 6 else "")
            msg = f"found {show(source.sand)}{hint} expected one of the sands: {few}"
            raise fault(msg, "fluid", "source", "sand")

    def _check_factor(self) -> None:
        draw = self.uncertainty.throw if self.uncertainty else None
        if draw is None or self.throw.total is not None:
            return
        for number in draw.numbers:
            if abs(number) > _LARGEST_FACTOR:
                msg = (
                    f"found {show(number)}; the throw is given along the fault, so its "
                    f"uncertainty is a factor: expected numbers around 1, up to {_LARGEST_FACTOR:g}"
                )
                raise fault(msg, "uncertainty", "throw")

    def with_throw_factor(self, factor: float) -> Scenario:
        """Return the scenario with its throw times a factor; see `Throw.scaled`.

        Raises
        ------
        ScenarioError
            If the throw then pushes every layer past the column at every distance.
        """
        return self._with(throw=self.throw.scaled(factor))

    def with_strands(self, strands: Strands) -> Scenario:
        """Return the scenario with other strands."""
        return self._with(strands=strands)

    def fingerprint(self) -> str:
        """Return the SHA-256 of the scenario's canonical JSON, 64 hexadecimal digits.

        Equal scenarios have equal fingerprints, whatever files they came from.
        """
        content = self.model_dump(mode="json", by_alias=True)
        text = json.dumps(content, sort_keys=True, separators=(",", ":"), allow_nan=False)
        return hashlib.sha256(text.encode()).hexdigest()
