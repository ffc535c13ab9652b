from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

TOML = """\
name = "Test zone"

[column]
file = "column.csv"
top = 1450

[throw]
total = 30

[strands]
count = 3
split = [0.5, 0.3, 0.2]
"""

COLUMN = """\
layer,thickness,vsh,permeability
S1,20,0.1,200
M1,10,0.7,0.01
S2,30,0.2,150
M2,40,0.8,0.01
"""

CUTOFFS = """\
distance,footwall,hanging_wall
0,1450,1450
400,1440,1470
900,1460,1500
"""


@pytest.fixture
def write(tmp_path: Path) -> Callable[..., Path]:
    """Write the valid files above, each with replacements of one text by another."""

    def write_files(
        toml: dict[str, str] | None = None,
        column: dict[str, str] | None = None,
        cutoffs: dict[str, str] | None = None,
        add: str = "",
        **tables: str,
    ) -> Path:
        def replaced(text: str, changes: dict[str, str] | None) -> str:
            for old, new in (changes or {}).items():
                assert old in text
                text = text.replace(old, new)
            return text

        path = tmp_path / "zone.toml"
        path.write_text(replaced(TOML, toml) + add, encoding="utf-8")
        (tmp_path / "column.csv").write_text(replaced(COLUMN, column), encoding="utf-8")
        (tmp_path / "cutoffs.csv").write_text(replaced(CUTOFFS, cutoffs), encoding="utf-8")
        for name, text in tables.items():
            (tmp_path / f"{name}.csv").write_text(text, encoding="utf-8")
        return path

    return write_files
