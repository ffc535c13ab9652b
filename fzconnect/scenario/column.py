"""Layers and the two columns of them, on either side of the fault zone."""

from __future__ import annotations

import math
from typing import Annotated, Literal, Self

from pydantic import BeforeValidator, ValidationInfo, field_validator, model_validator

from fzconnect.scenario.part import Part
from fzconnect.scenario.quantity import (
    Choice,
    Depth,
    Fraction,
    Name,
    Permeability,
    Span,
    fault,
    show,
)

__all__ = ["MOST_LAYERS", "Column", "Layer"]

MOST_LAYERS = 2000

_Kind = Annotated[Literal["sand", "shale"], BeforeValidator(Choice(("sand", "shale")))]


class Layer(Part):
    """One layer of a column.

    Attributes
    ----------
    name : str
        Unique within the column.
    thickness : float
        m, at least a millimetre.
    vsh : float
        Volume fraction of shale, 0 to 1.
    permeability : float, optional
        mD, along the layer.
    porosity : float, optional
        Fraction, 0 to 1.
    kind : {"sand", "shale"}, optional
        Wins over `vsh` where the two disagree about what the layer is.
    """

    name: Name
    thickness: Span
    vsh: Fraction
    permeability: Permeability | None = None
    porosity: Fraction | None = None
    kind: _Kind | None = None

    @field_validator("name", mode="after")
    @classmethod
    def _check_name(cls, name: str) -> str:
        if " > " in name:
            msg = f'found {show(name)}, expected a name without the " > " of pathways'
            raise fault(msg)
        return name

    def is_sand(self, cutoff: float) -> bool:
        """Return whether the layer is sand: by its kind, else by vsh at or below the cutoff."""
        return self.vsh <= cutoff if self.kind is None else self.kind == "sand"


class Column(Part):
    """The layers, top to base, of the footwall and, where they differ, of the hanging wall.

    Attributes
    ----------
    layers : tuple of Layer
        Footwall column, top to base.
    hanging_wall : tuple of Layer, optional
        The same layers with other values (growth); what is not given is the footwall's.
    top : float, optional
        Depth of the first layer's top in the footwall, m, positive down.
    sand_cutoff : float
        A layer with `vsh` at or below it is sand.
    """

    layers: tuple[Layer, ...]
    hanging_wall: tuple[Layer, ...] | None = None
    top: Depth | None = None
    sand_cutoff: Fraction = 0.35

    @property
    def is_sand(self) -> tuple[bool, ...]:
        """Whether each layer is sand; the same on both sides of the fault."""
        return tuple(layer.is_sand(self.sand_cutoff) for layer in self.layers)

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the layers, top to base."""
        return tuple(layer.name for layer in self.layers)

    @field_validator("layers", mode="after")
    @classmethod
    def _check_layers(cls, layers: tuple[Layer, ...]) -> tuple[Layer, ...]:
        if not 2 <= len(layers) <= MOST_LAYERS:
            msg = f"found {len(layers)} layers, expected 2 to {MOST_LAYERS}"
            raise fault(msg)
        seen: set[str] = set()
        for i, layer in enumerate(layers):
            if layer.name in seen:
                msg = f"found {show(layer.name)} twice, expected each layer once"
                raise fault(msg, i, "name")
            seen.add(layer.name)
        return layers

    @field_validator("hanging_wall", mode="after")
    @classmethod
    def _check_hanging_wall(
        cls, layers: tuple[Layer, ...] | None, info: ValidationInfo
    ) -> tuple[Layer, ...] | None:
        footwall: tuple[Layer, ...] | None = info.data.get("layers")
        if layers is None or footwall is None:
            return layers
        for i, (ours, theirs) in enumerate(zip(layers, footwall, strict=False)):
            if ours.name != theirs.name:
                msg = (
                    f"found layer {show(ours.name)} where the footwall column has "
                    f"{show(theirs.name)}, expected the same layers in the same order"
                )
                raise fault(msg, i, "name")
        if len(layers) != len(footwall):
            longer = max(layers, footwall, key=len)[min(len(layers), len(footwall))]
            msg = (
                f"found {len(layers)} layers, the footwall column has {len(footwall)}; expected "
                f"the same layers in the same order, {show(longer.name)} is on one side only"
            )
            raise fault(msg)
        return tuple(map(_filled, layers, footwall))

    @model_validator(mode="after")
    def _check_kinds(self) -> Self:
        sands = self.is_sand
        if not any(sands):
            msg = (
                f"no layer is sand: no vsh is at or below the sand cutoff {self.sand_cutoff:g} "
                'and no kind is "sand"; expected at least one sand'
            )
            raise fault(msg)
        if all(sands):
            msg = (
                f"every layer is sand: no vsh is above the sand cutoff {self.sand_cutoff:g} "
                'and no kind is "shale"; expected at least one shale'
            )
            raise fault(msg)
        if self.hanging_wall:
            for i, (layer, sand) in enumerate(zip(self.hanging_wall, sands, strict=True)):
                if layer.is_sand(self.sand_cutoff) != sand:
                    words = ("sand", "shale") if sand else ("shale", "sand")
                    msg = (
                        f"layer {show(layer.name)} is {words[0]} in the footwall and {words[1]} in "
                        "the hanging wall; set its kind to sand or shale in both columns"
                    )
                    raise fault(msg, "hanging_wall", i, "vsh")
        for side in ("layers", "hanging_wall"):
            self._check_given(side, "permeability")
            self._check_given(side, "porosity")
        return self

    def _check_given(self, side: str, attribute: str) -> None:
        """Refuse a property that some sands have and others lack: no answer could be trusted."""
        layers: tuple[Layer, ...] = getattr(self, side) or ()
        given = [getattr(layer, attribute) is not None for layer in layers]
        if any(given):
            for i, (has, sand) in enumerate(zip(given, self.is_sand, strict=True)):
                if sand and not has:
                    msg = (
                        f"layer {show(layers[i].name)} is sand and has no {attribute}, other "
                        "layers have one; expected a value for every sand or for no layer"
                    )
                    raise fault(msg, side, i, attribute)

    def thickness(self, side: Literal["footwall", "hanging wall"] = "footwall") -> float:
        """Return the thickness of the whole column on one side, m."""
        layers = self.layers if side == "footwall" else self.hanging_wall or self.layers
        return math.fsum(layer.thickness for layer in layers)


def _filled(ours: Layer, theirs: Layer) -> Layer:
    """Return our layer with what it leaves open taken from the same layer across the fault."""
    missing = {
        name: getattr(theirs, name)
        for name in ("permeability", "porosity", "kind")
        if getattr(ours, name) is None
    }
    return ours._with(**missing) if missing else ours
