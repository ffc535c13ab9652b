"""The base of all scenario models: immutable, no unknown keys, errors said for people."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any, Self, get_args

from pydantic import BaseModel, ConfigDict, ValidationError
from pydantic_core import ErrorDetails

from fzconnect.errors import ScenarioError, UnitError, nearest
from fzconnect.scenario.quantity import show

__all__ = ["Part", "Place", "dotted", "refusal"]

#: Leads from the model to the value that an error is about.
Place = tuple[str | int, ...]

_MOST_LINES = 10


class Part(BaseModel):
    """One table of a scenario; equal by value, never changed after it is made."""

    model_config = ConfigDict(
        frozen=True, extra="forbid", validate_by_name=True, validate_by_alias=True
    )

    def __init__(self, **data: Any) -> None:
        try:
            super().__init__(**data)
        except ValidationError as error:
            name = type(self).__name__
            raise refusal(error, type(self), lambda place: dotted((name, *place))) from None

    # Without this mark pydantic would call the method above for every nested table, and the path
    # from the outermost table to the culprit would be lost.
    __init__.__pydantic_base_init__ = True  # type: ignore[attr-defined]

    def _with(self, **changes: Any) -> Self:
        """Return a checked copy with other values; `model_copy` would not check them."""
        return type(self)(**{**dict(self), **changes})


def dotted(place: Place) -> str:
    """Return a place as people write it; list entries are counted from one.

    Examples
    --------
    >>> dotted(("strands", "split", 1))
    'strands.split[2]'
    """
    text = ""
    for step in place:
        if isinstance(step, int):
            text += f"[{step + 1}]"
        else:
            text += f".{step}" if text else step
    return text


def refusal(
    error: ValidationError, model: type[Part], name_place: Callable[[Place], str]
) -> ScenarioError:
    """Return pydantic's findings as one error, one line each.

    Parameters
    ----------
    error : pydantic.ValidationError
        What pydantic found.
    model : type of Part
        The model that was being made.
    name_place : callable
        Turns the place of a finding into words, such as "scenario.toml, strands.split[2]".

    Returns
    -------
    ScenarioError
        `UnitError` if all findings are about units.
    """
    findings = error.errors(include_url=False, include_input=True)
    lines = []
    for finding in findings[:_MOST_LINES]:
        place, message = _said(finding, model)
        where = name_place(place)
        lines.append(f"{where}: {message}" if where else message)
    if len(findings) > _MOST_LINES:
        lines.append(f"and {len(findings) - _MOST_LINES} more")
    kind = UnitError if all(f["type"] == "unit" for f in findings) else ScenarioError
    return kind("\n".join(lines))


def _said(finding: ErrorDetails, model: type[Part]) -> tuple[Place, str]:
    place: Place = tuple(finding["loc"])
    kind, found = finding["type"], finding["input"]
    context = finding.get("ctx", {})
    if "message" in context:
        return (*place, *context.get("at", ())), context["message"]
    if kind == "extra_forbidden":
        allowed = list(_keys(model, place[:-1]))
        hint = nearest(str(place[-1]).lower(), allowed) or f", allowed are {', '.join(allowed)}"
        return place[:-1], f"unknown key {show(place[-1])}{hint}"
    if kind == "missing":
        return place[:-1], f'the key "{place[-1]}" is missing'
    expected = {
        "tuple_type": "a list",
        "model_type": "a table",
        "model_attributes_type": "a table",
        "dict_type": "a table",
    }.get(kind)
    if expected:
        return place, f"found {show(found)}, expected {expected}"
    return place, f"found {show(found)}: {finding['msg']}"


def _keys(model: type[Part], place: Place) -> Iterator[str]:
    for step in place:
        if isinstance(step, int):
            continue
        field = next((f for n, f in model.model_fields.items() if step in (n, f.alias)), None)
        inner = _model_within(field.annotation) if field else None
        if inner is None:
            return
        model = inner
    for name, field in model.model_fields.items():
        yield field.alias or name


def _model_within(annotation: Any) -> type[Part] | None:
    if isinstance(annotation, type) and issubclass(annotation, Part):
        return annotation
    return next(filter(None, map(_model_within, get_args(annotation))), None)
