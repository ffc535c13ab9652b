from __future__ import annotations

import pytest

from fzconnect.geometry import SandBody, sand_bodies


@pytest.mark.parametrize(
    ("sand", "expected"),
    [
        ("S", [SandBody("L1", 0, 0)]),
        ("M", []),
        ("", []),
        ("SSS", [SandBody("L1 to L3", 0, 2)]),
        ("MSMSS", [SandBody("L2", 1, 1), SandBody("L4 to L5", 3, 4)]),
        ("SMS", [SandBody("L1", 0, 0), SandBody("L3", 2, 2)]),
    ],
)
def test_a_sand_body_is_a_run_of_sands_named_by_its_ends(
    sand: str, expected: list[SandBody]
) -> None:
    names = [f"L{i + 1}" for i in range(len(sand))]
    assert list(sand_bodies(names, [letter == "S" for letter in sand])) == expected
