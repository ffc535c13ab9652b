from __future__ import annotations

import pytest

from fzconnect.errors import ScenarioError
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


def test_two_sand_bodies_never_share_a_name() -> None:
    """Nodes of the network are told apart by it: two under one name would be joined."""
    names, sand = ["S1", "S2", "M", "S1 to S2"], [True, True, False, True]
    with pytest.raises(ScenarioError, match='two sand bodies would be called "S1 to S2"'):
        sand_bodies(names, sand)
