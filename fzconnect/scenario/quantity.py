"""Checked numbers, names and points: the building blocks of the scenario models."""

from __future__ import annotations

import json
import math
import unicodedata
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from numbers import Integral, Real
from typing import Annotated, Any

from pydantic import BeforeValidator
from pydantic_core import PydanticCustomError

from fzconnect.errors import UnitError, nearest

__all__ = [
    "MOST_POINTS",
    "MOST_STRANDS",
    "Amount",
    "Angle",
    "Choice",
    "Density",
    "Depth",
    "Fraction",
    "Length",
    "Name",
    "Permeability",
    "Points",
    "Pressure",
    "Row",
    "Span",
    "Split",
    "StrandNumber",
    "Temperature",
    "Tension",
    "Weights",
    "check_distances",
    "fault",
    "show",
    "sum_to_one",
]

MOST_STRANDS = 50
MOST_POINTS = 10_000
SUM_TOLERANCE = 1e-6


def fault(message: str, *at: str | int, kind: str = "scenario") -> PydanticCustomError:
    """Return an error for a validator to raise; `at` leads from the model to the culprit.

    Braces of the message are data, never a template.
    """
    return PydanticCustomError(kind, "{message}", {"message": message, "at": at})


def show(value: object) -> str:
    """Return a value as people would type it, at most 60 characters long."""
    if isinstance(value, bool):
        text = "true" if value else "false"
    elif isinstance(value, str):
        text = json.dumps(value, ensure_ascii=False)
        text = "".join(c if c.isprintable() else repr(c)[1:-1] for c in text)
    elif isinstance(value, Integral):
        # A whole number of more than 4300 digits has no decimal text in Python.
        text = str(value) if abs(int(value)) < 10**40 else "a huge whole number"
    elif isinstance(value, Real):
        text = f"{float(value):.12g}"
    elif isinstance(value, dict):
        text = "a table"
    elif isinstance(value, (list, tuple)):
        text = f"a list of {len(value)}" if len(value) > 6 else f"[{', '.join(map(show, value))}]"
    else:
        text = f"a {type(value).__name__}"
    return text if len(text) <= 60 else text[:57] + "..."


@dataclass(frozen=True)
class Amount:
    """A validator: a finite number within limits, or a text with a unit that becomes one.

    Parameters
    ----------
    unit : str
        Unit of the number as `fzconnect.units` knows it; empty for a number without a unit.
    least, most : float
        Limits, both allowed.
    above : float, optional
        A lower limit that is itself refused; replaces `least`.
    below : float, optional
        An upper limit that is itself refused; replaces `most`.
    """

    unit: str
    least: float = -1e6
    most: float = 1e6
    above: float | None = None
    below: float | None = None

    def __call__(self, value: object) -> float:
        """Return the number in `unit`, or raise a validation error that says what is allowed."""
        number = self._number(value)
        low = number > self.above if self.above is not None else number >= self.least
        high = number < self.below if self.below is not None else number <= self.most
        if not (math.isfinite(number) and low and high):
            raise self._refusal(value)
        # Adding zero turns -0.0 into 0.0, so that equal scenarios have equal fingerprints.
        return number + 0.0

    def _number(self, value: object) -> float:
        if isinstance(value, str) and self.unit:
            from fzconnect.units import convert

            try:
                return convert(value, self.unit)
            except UnitError as error:
                raise fault(str(error), kind="unit") from None
        if isinstance(value, bool) or not isinstance(value, Real):
            raise self._refusal(value)
        try:
            return float(value)
        except OverflowError:
            raise self._refusal(value) from None

    def _refusal(self, value: object) -> PydanticCustomError:
        return fault(f"found {show(value)}, expected {self.describe()}")

    def describe(self) -> str:
        """Return what is allowed, as "a number from 0 to 1"."""
        unit = "" if self.unit in ("", "fraction") else f" {self.unit}"
        low = f"above {self.above:g}" if self.above is not None else f"from {self.least:.12g}"
        join = "and up to" if self.above is not None else "to"
        high = f"and below {self.below:g}" if self.below is not None else f"{join} {self.most:.12g}"
        return f"a number {low} {high}{unit}"


@dataclass(frozen=True)
class Choice:
    """A validator: one of a few words, or an amount if one is given."""

    words: tuple[str, ...]
    amount: Amount | None = None

    def __call__(self, value: object) -> object:
        """Return the word or the number, or raise a validation error that lists the words."""
        if isinstance(value, str) and value in self.words:
            return value
        # A text that starts with a digit means to be a quantity; any other a word.
        if self.amount and not (isinstance(value, str) and not value.lstrip()[:1].isdigit()):
            return self.amount(value)
        allowed = [f'"{word}"' for word in self.words]
        allowed += [self.amount.describe()] if self.amount else []
        hint = nearest(value.lower(), self.words) if isinstance(value, str) else ""
        words = f"{', '.join(allowed[:-1])} or {allowed[-1]}"
        msg = f"found {show(value)}{hint or ','} expected {words}"
        raise fault(msg)


def _name(value: object) -> str:
    if not isinstance(value, str):
        msg = f"found {show(value)}, expected a text in quotes"
        raise fault(msg)
    name = value.strip()
    if not name:
        msg = "found an empty text, expected a name"
        raise fault(msg)
    if len(name) > 200:
        msg = f"found a name of {len(name)} characters, expected at most 200"
        raise fault(msg)
    # Names travel into XML and HTML, which cannot hold these characters at all.
    for char in name:
        if unicodedata.category(char) in {"Cc", "Cs", "Zl", "Zp"} or (ord(char) & 0xFFFE) == 0xFFFE:
            msg = f"found {show(name)}, which holds the control character U+{ord(char):04X}"
            raise fault(msg)
    return name


def _whole(value: object) -> int:
    whole = isinstance(value, Real) and not isinstance(value, bool)
    # The order of the tests keeps NaN, infinity and huge whole numbers away from int().
    if whole and 1 <= value <= MOST_STRANDS and value == int(value):  # type: ignore[operator,call-overload]
        return int(value)  # type: ignore[call-overload,no-any-return]
    msg = f"found {show(value)}, expected a whole number from 1 to {MOST_STRANDS}"
    raise fault(msg)


def _list(value: object, what: str) -> Sequence[Any]:
    if not isinstance(value, (list, tuple)):
        msg = f"found {show(value)}, expected a list of {what}"
        raise fault(msg)
    return value


@dataclass(frozen=True)
class Row:
    """A validator: a list with one entry for each word, such as ("low", "high")."""

    words: tuple[str, ...]

    def __call__(self, value: object) -> object:
        """Return the list as it is, or raise a validation error that names its entries."""
        if not isinstance(value, (list, tuple)) or len(value) != len(self.words):
            msg = f"found {show(value)}, expected [{', '.join(self.words)}]"
            raise fault(msg)
        return value


@dataclass(frozen=True)
class _Pairs:
    """A validator: pairs of a distance and a number, the distances strictly increasing."""

    what: str
    amount: Amount
    fewest: int

    def __call__(self, value: object) -> tuple[tuple[float, float], ...]:
        rows = _list(value, f"[distance, {self.what}] pairs")
        if not self.fewest <= len(rows) <= MOST_POINTS:
            msg = f"found {len(rows)} points, expected {self.fewest} to {MOST_POINTS}"
            raise fault(msg)
        pairs = []
        for i, row in enumerate(rows):
            if not isinstance(row, (list, tuple)) or len(row) != 2:
                msg = f"found {show(row)}, expected [distance, {self.what}]"
                raise fault(msg, i)
            pairs.append((_at(_DEPTH, row[0], i, 0), _at(self.amount, row[1], i, 1)))
        check_distances([distance for distance, _ in pairs])
        return tuple(pairs)


def _at(amount: Amount, value: object, *at: int) -> float:
    try:
        return amount(value)
    except PydanticCustomError as error:
        raise fault(error.message(), *at, kind=error.type) from None


def check_distances(distances: Iterable[float], *inside: str) -> None:
    """Raise a validation error unless the distances strictly increase; it names the culprit."""
    last = -math.inf
    for i, distance in enumerate(distances):
        if distance == last:
            msg = f"found the distance {show(distance)} twice, expected each once"
            raise fault(msg, i, *inside)
        if distance < last:
            msg = (
                f"found the distance {show(distance)} after {show(last)}, "
                "expected distances in increasing order"
            )
            raise fault(msg, i, *inside)
        last = distance


def sum_to_one(values: tuple[float, ...]) -> tuple[float, ...]:
    """Return the values divided by their sum; refuse a sum further than 1e-6 from one."""
    total = math.fsum(values)
    if abs(total - 1) > SUM_TOLERANCE:
        msg = f"the sum is {total:.9g}, expected 1 (within {SUM_TOLERANCE:g})"
        raise fault(msg)
    # What rounding leaves of an earlier division stays, or a saved file would drift when reloaded.
    if abs(total - 1) <= 8e-16 * math.fsum(map(abs, values)):
        return values
    return tuple(value / total for value in values)


def _split(value: object) -> tuple[float, ...]:
    shares = _list(value, "numbers, one a strand")
    if not 1 <= len(shares) <= MOST_STRANDS:
        msg = f"found {len(shares)} shares, expected 1 to {MOST_STRANDS}"
        raise fault(msg)
    return sum_to_one(tuple(_at(_SHARE, share, i) for i, share in enumerate(shares)))


_DEPTH = Amount("m")
# Shares beyond this would need opposing strands of a hundred times the throw.
_SHARE = Amount("fraction", least=-100, most=100)
_WEIGHT = Amount("", least=-1e9, most=1e9)

# A flatter strand has no depth range to speak of, and its area leaves all sensible limits.
Angle = Annotated[float, BeforeValidator(Amount("degrees", least=0.1, most=90))]
Density = Annotated[float, BeforeValidator(Amount("kg/m3", above=0, most=25_000))]
Depth = Annotated[float, BeforeValidator(_DEPTH)]
Fraction = Annotated[float, BeforeValidator(Amount("fraction", least=0, most=1))]
Length = Annotated[float, BeforeValidator(Amount("m", above=0))]
Name = Annotated[str, BeforeValidator(_name)]
Permeability = Annotated[float, BeforeValidator(Amount("mD", least=0, most=1e9))]
Points = Annotated[tuple[tuple[float, float], ...], BeforeValidator(_Pairs("throw", _DEPTH, 2))]
Pressure = Annotated[float, BeforeValidator(Amount("MPa", above=0, most=10_000))]
# No layer is thinner and no fault shorter than a millimetre: rounding of depths stays far below.
Span = Annotated[float, BeforeValidator(Amount("m", least=1e-3))]
Split = Annotated[tuple[float, ...], BeforeValidator(_split)]
StrandNumber = Annotated[int, BeforeValidator(_whole)]
Temperature = Annotated[float, BeforeValidator(Amount("degC", above=-273.15, most=2000))]
Tension = Annotated[float, BeforeValidator(Amount("mN/m", above=0, most=10_000))]
Weights = Annotated[tuple[tuple[float, float], ...], BeforeValidator(_Pairs("weight", _WEIGHT, 1))]
