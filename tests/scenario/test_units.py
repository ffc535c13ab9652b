from __future__ import annotations

import re
import subprocess
import sys

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fzconnect.errors import UnitError
from fzconnect.units import EXAMPLES, convert

UNITS = sorted(EXAMPLES)


@pytest.mark.parametrize(
    ("text", "unit", "expected"),
    [
        # 1 ft = 0.3048 m and 1 in = 0.0254 m by the international agreement of 1959
        ("390 ft", "m", 118.872),
        ("12 in", "m", 0.3048),
        ("1.2 km", "m", 1200),
        ("-30 m", "m", -30),
        ("1e2m", "m", 100),
        # 1 D = 0.9869233e-12 m2 (1 cP, 1 cm/s, 1 atm/cm)
        ("0.3 D", "mD", 300),
        ("250 mD", "mD", 250),
        ("9.869233e-16 m2", "mD", 1.0),
        ("9.869233e-16 m²", "mD", 1.0),
        # 1 psi = 6894.757 Pa
        ("4200 psi", "MPa", 28.95798),
        ("250 bar", "MPa", 25),
        ("0.62 g/cm3", "kg/m3", 620),
        ("1 lb/ft^3", "kg/m3", 0.45359237 / 0.3048**3),
        ("140 degF", "degC", 60),
        ("60 °C", "degC", 60),
        ("333.15 K", "degC", 60),
        ("65°", "degrees", 65),
        ("1.5707963267949 rad", "degrees", 90),
        ("28 dyn/cm", "mN/m", 28),
        ("0.028 N/m", "mN/m", 28),
        ("35 %", "fraction", 0.35),
        ("35 percent", "fraction", 0.35),
    ],
)
def test_converts(text: str, unit: str, expected: float) -> None:
    assert convert(text, unit) == pytest.approx(expected, rel=1e-6)


def test_a_conversion_leaves_no_noise_in_the_last_digits() -> None:
    assert convert("390 ft", "m") == 118.872
    assert convert("140 degF", "degC") == 60


def test_the_unit_itself_changes_no_digit() -> None:
    assert convert("0.1234567890123456 m", "m") == 0.1234567890123456


@pytest.mark.parametrize(("unit", "example"), sorted(EXAMPLES.items()))
def test_every_example_can_be_converted(unit: str, example: str) -> None:
    assert convert(example, unit) > 0


@pytest.mark.parametrize(
    ("text", "unit", "message"),
    [
        ("3 apples", "m", 'found "3 apples", whose unit is unknown; expected a number in m'),
        ("3 kg", "m", 'found "3 kg", whose unit measures something else; expected a number in m'),
        ("3", "m", 'found "3" in quotes and without a unit, expected a number in m, bare or'),
        ("1,5", "m", 'such as "390 ft"; write 1.5 with a decimal point'),
        ("0,150", "m", "; write 0.150 with a decimal point"),
        ("1,030", "m", "; write 1030 or 1.030, whichever is meant"),
        ("m 3", "m", 'found "m 3", expected a number in m, bare or with a unit such as "390 ft"'),
        ("3 m**", "m", 'found "3 m**", expected a number in m'),
        ("5 %", "degrees", 'found "5 %", expected a number in degrees'),
        ("5 deg", "fraction", 'found "5 deg", expected a fraction such as 0.35, or "35 %"'),
        ("3 ft\x07", "m", r'found "3 ft\x07", expected a number in m'),
        ("9" * 100 + " m", "m", 'found "' + "9" * 57 + '...", expected a number in m'),
    ],
)
def test_refuses(text: str, unit: str, message: str) -> None:
    with pytest.raises(UnitError, match=re.escape(message)):
        convert(text, unit)


@given(
    st.sampled_from(UNITS),
    st.from_regex(r"[0-9.]{1,4} ?[a-zA-Z/*^ 23°%]{0,12}", fullmatch=True) | st.text(max_size=20),
)
def test_any_other_text_is_a_unit_error(unit: str, text: str) -> None:
    try:
        assert isinstance(convert(text, unit), float)
    except UnitError as error:
        assert str(error).startswith("found ")  # noqa: PT017


def test_bare_numbers_load_neither_pint_nor_pandas() -> None:
    code = (
        "import sys; from fzconnect.scenario import Throw; Throw(total=30);"
        "assert not {'pint', 'pandas', 'numpy'} & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True)
