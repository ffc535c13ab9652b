"""Whatever a file holds, reading it gives a scenario or a `ScenarioError`, nothing else."""

from __future__ import annotations

import tempfile
from collections.abc import Iterable
from pathlib import Path
from typing import Any

from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fzconnect.errors import ScenarioError
from fzconnect.scenario import Scenario, demo, load, save
from tests.scenario.conftest import COLUMN, CUTOFFS, TOML
from tests.scenario.test_options import ALL

_SHARES = """
[[strands.shares]]
name = "A"
points = [[0, 1.0], [800, 0.5]]
[[strands.shares]]
name = "B"
points = [[0, 0], [800, 0.5]]
"""

_BASE: list[dict[str, str]] = [
    {"zone.toml": TOML + ALL, "column.csv": COLUMN},
    {
        "zone.toml": TOML.replace("total = 30", 'file = "cutoffs.csv"')
        .replace("split = [0.5, 0.3, 0.2]", "lens_width = 15")
        .replace("count = 3", "count = 2")
        .replace("top = 1450", 'hanging_wall_file = "hw.csv"')
        + _SHARES,
        "column.csv": COLUMN,
        "hw.csv": COLUMN.replace("20,", "25,"),
        "cutoffs.csv": CUTOFFS,
    },
]

_CELLS = st.sampled_from(
    [
        "",
        " ",
        "0",
        "-1",
        "nan",
        "inf",
        "1e999",
        "1e-320",
        "abc",
        "1,5",
        "3 ft",
        "3 kg",
        "true",
        "\0",
        "\x1b[0m",
        "é",
        "\ufeff",
        '"',
        "'",
        "#",
        "=",
        "[",
        "]]",
        "{",
        "}",
        ";",
        "\t",
        "\r",
        "S1",
        "S2",
        "layer",
        "vsh",
        "kind",
        "sand",
        "1979-05-27",
        "07:32:00",
        "0x1F",
        "9" * 400,
        "[1, 2]",
        "{ a = 1 }",
        "[[0, 1], [2, 3]]",
        '"390 ft"',
        '"%s {found}"',
        "-0.0",
        "1_000",
    ]
)

_quick = settings(max_examples=120, deadline=None, suppress_health_check=[HealthCheck.too_slow])


def _read(files: dict[str, bytes]) -> None:
    with tempfile.TemporaryDirectory() as folder:
        for name, content in files.items():
            (Path(folder) / name).write_bytes(content)
        try:
            scenario = load(Path(folder) / "zone.toml")
        except ScenarioError as error:
            lines = str(error).splitlines()
            assert 1 <= len(lines) <= 11
            assert "Traceback" not in str(error)  # noqa: PT017
            assert lines[0].startswith(folder)
            assert str(error).isprintable() or len(lines) > 1  # noqa: PT017
        else:
            assert isinstance(scenario, Scenario)
            # What is accepted must be sound enough to be kept.
            save(scenario, Path(folder) / "zone.toml", overwrite=True)
            assert load(Path(folder) / "zone.toml") == scenario


@st.composite
def _bytes_changed(draw: st.DrawFn) -> dict[str, bytes]:
    files = {name: text.encode() for name, text in draw(st.sampled_from(_BASE)).items()}
    name = draw(st.sampled_from(sorted(files)))
    content = bytearray(files[name])
    for _ in range(draw(st.integers(1, 3))):
        start = draw(st.integers(0, len(content)))
        end = start + draw(st.integers(0, 4))
        content[start:end] = draw(st.binary(max_size=4))
    return {**files, name: bytes(content)}


@st.composite
def _lines_changed(draw: st.DrawFn) -> dict[str, bytes]:
    files = {name: text.encode() for name, text in draw(st.sampled_from(_BASE)).items()}
    name = draw(st.sampled_from(sorted(files)))
    lines = files[name].splitlines(keepends=True)
    for _ in range(draw(st.integers(1, 3))):
        i, j = (draw(st.integers(0, len(lines) - 1)) for _ in range(2))
        how = draw(st.sampled_from(["drop", "twice", "swap", "cut"]))
        if how == "drop" and len(lines) > 1:
            del lines[i]
        elif how == "twice":
            lines.insert(j, lines[i])
        elif how == "swap":
            lines[i], lines[j] = lines[j], lines[i]
        else:
            lines[i] = lines[i][: draw(st.integers(0, len(lines[i])))]
    return {**files, name: b"".join(lines)}


def _parts(text: str, table: bool) -> Iterable[tuple[int, int]]:
    """Start and end of each cell of a table, or each value of a TOML file."""
    marks = ",\n" if table else "=\n,[]"
    start = 0
    for i, char in enumerate(text):
        if char in marks:
            if text[start:i].strip():
                yield start, i
            start = i + 1


@st.composite
def _values_changed(draw: st.DrawFn) -> dict[str, bytes]:
    files = dict(draw(st.sampled_from(_BASE)))
    for _ in range(draw(st.integers(1, 2))):
        name = draw(st.sampled_from(sorted(files)))
        text = files[name]
        parts = list(_parts(text, name.endswith(".csv")))
        if parts:
            start, end = draw(st.sampled_from(parts))
            files[name] = text[:start] + draw(_CELLS) + text[end:]
    return {name: text.encode() for name, text in files.items()}


@_quick
@given(_bytes_changed())
def test_changed_bytes(files: dict[str, bytes]) -> None:
    _read(files)


@_quick
@given(_lines_changed())
def test_changed_lines(files: dict[str, bytes]) -> None:
    _read(files)


@_quick
@given(_values_changed())
def test_changed_values(files: dict[str, bytes]) -> None:
    _read(files)


_table_like = st.text(st.sampled_from(',;"\n\r\t #.-0123SMvsh'), max_size=60)


@_quick
@given(st.sampled_from(["", COLUMN, "layer,thickness,vsh\n"]), _table_like)
def test_table_like_rubbish(start: str, rest: str) -> None:
    _read({"zone.toml": TOML.encode(), "column.csv": (start + rest).encode()})


@_quick
@given(st.binary(max_size=200), st.binary(max_size=200))
def test_rubbish(toml: bytes, table: bytes) -> None:
    _read({"zone.toml": toml, "column.csv": COLUMN.encode()})
    _read({"zone.toml": TOML.encode(), "column.csv": table})


_values: st.SearchStrategy[Any] = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=5),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=5), inner),
    max_leaves=6,
)


@_quick
@given(st.sampled_from(sorted(Scenario.model_fields)), _values)
def test_any_value_in_python(field: str, value: Any) -> None:
    try:
        Scenario(**{**dict(demo_scenario()), field: value})
    except ScenarioError as error:
        assert str(error).startswith("Scenario")  # noqa: PT017


_demo: list[Scenario] = []


def demo_scenario() -> Scenario:
    if not _demo:
        _demo.append(demo())
    return _demo[0]
