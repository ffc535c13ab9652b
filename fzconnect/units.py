"""Text such as "390 ft" to a number in the unit that fzconnect computes in.

pint is imported only when the first such text is met.
"""

from __future__ import annotations

import re
from functools import cache
from typing import Any

from fzconnect.errors import UnitError

__all__ = ["EXAMPLES", "convert"]

#: Units that fzconnect computes in, with an example of a text that is converted to each.
EXAMPLES = {
    "m": "390 ft",
    "mD": "0.3 D",
    "MPa": "4200 psi",
    "kg/m3": "0.62 g/cm3",
    "degC": "140 degF",
    "degrees": "1.1 rad",
    "mN/m": "28 dyn/cm",
    "fraction": "35 %",
}

_PINT_UNITS = {
    "m": "meter",
    "mD": "millidarcy",
    "MPa": "megapascal",
    "kg/m3": "kilogram / meter ** 3",
    "degC": "degree_Celsius",
    "degrees": "degree",
    "mN/m": "millinewton / meter",
}

_ANGLES = {"degrees", "degree", "deg", "°", "radians", "radian", "rad", "grad", "gon"}
_TEXT = re.compile(
    r"\s*(?P<number>[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d{1,3})?)\s*(?P<unit>.*?)\s*",
    re.DOTALL,
)
# Unit names with small powers, joined by / * or a space: what pint reads without surprises.
_WORD = r"[A-Za-zµμ°%]{1,24}(?:(?:\^|\*\*)?[23]|[²³])?"
_UNIT = re.compile(rf"{_WORD}(?:\s*[/* ]\s*{_WORD}){{0,5}}")


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry()


def convert(text: str, unit: str) -> float:
    """Return the quantity that a text states, as a number in `unit`.

    Parameters
    ----------
    text : str
        A number and a unit, such as "390 ft".
    unit : {"m", "mD", "MPa", "kg/m3", "degC", "degrees", "mN/m", "fraction"}
        The unit of the result.

    Returns
    -------
    float
        The quantity in `unit`; not checked against any range.

    Raises
    ------
    UnitError
        If the text is not a number with a unit, or its unit measures something else.

    Examples
    --------
    >>> round(convert("390 ft", "m"), 3)
    118.872
    >>> convert("35 %", "fraction")
    0.35
    """
    wanted = f'a number in {unit}, bare or with a unit such as "{EXAMPLES[unit]}"'
    if unit == "fraction":
        wanted = 'a fraction such as 0.35, or "35 %"'
    match = _TEXT.fullmatch(text) if len(text) <= 80 else None
    if match is None or (match["unit"] and not _UNIT.fullmatch(match["unit"])):
        msg = f"found {_quote(text)}, expected {wanted}{_comma_hint(text)}"
        raise UnitError(msg)
    number, name = float(match["number"]), match["unit"]
    if not name:
        msg = f"found {_quote(text)} in quotes and without a unit, expected {wanted}"
        raise UnitError(msg)
    if unit == "fraction":
        if name.lower() not in {"%", "percent"}:
            msg = f"found {_quote(text)}, expected {wanted}"
            raise UnitError(msg)
        # Dividing keeps "35 %" equal to 0.35, multiplying by 0.01 would not.
        return number / 100
    if name == unit:
        return number
    if unit == "degrees" and name.lower() not in _ANGLES:
        msg = f"found {_quote(text)}, expected {wanted}"
        raise UnitError(msg)
    return _converted(number, name, unit, text, wanted)


def _converted(number: float, name: str, unit: str, text: str, wanted: str) -> float:
    import pint

    # pint reads D as the debye, and a bare digit behind a unit not as its power.
    if unit == "mD":
        name = {"mD": "millidarcy", "md": "millidarcy", "D": "darcy", "d": "darcy"}.get(name, name)
    name = re.sub(r"(?<=[A-Za-z])([23])(?![0-9])", r"**\1", name.replace("μ", "µ"))
    registry = _registry()
    try:
        quantity = registry.Quantity(number, registry.parse_units(name))
        number = float(quantity.to(_PINT_UNITS[unit]).magnitude)
    except pint.UndefinedUnitError:
        msg = f"found {_quote(text)}, whose unit is unknown; expected {wanted}"
        raise UnitError(msg) from None
    except pint.DimensionalityError:
        msg = f"found {_quote(text)}, whose unit measures something else; expected {wanted}"
        raise UnitError(msg) from None
    except (pint.PintError, ValueError, TypeError, ArithmeticError, AttributeError, SyntaxError):
        # pint's parser lets many kinds of error through for text that is no unit.
        msg = f"found {_quote(text)}, whose unit cannot be read; expected {wanted}"
        raise UnitError(msg) from None
    # A conversion leaves noise in the last digits: "390 ft" is 118.872 m, as people would say.
    return float(f"{number:.13g}")


def _comma_hint(text: str) -> str:
    """Return how to write a number that holds a comma, which may mean either of two things."""
    comma = re.fullmatch(r"\s*([+-]?\d+),(\d+)\s*", text)
    if comma is None:
        return ""
    whole, rest = comma.groups()
    # "0,150" can only be a decimal, "1,030" may be a thousand
    if len(rest) == 3 and len(whole.lstrip("+-")) <= 3 and whole.lstrip("+-0"):
        return f"; write {whole}{rest} or {whole}.{rest}, whichever is meant"
    return f"; write {whole}.{rest} with a decimal point"


def _quote(text: str) -> str:
    short = text if len(text) <= 60 else text[:57] + "..."
    return '"' + "".join(c if c.isprintable() else repr(c)[1:-1] for c in short) + '"'
