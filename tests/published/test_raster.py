"""Connected pairs against a labelled picture of the section (scipy.ndimage.label).

Every block is a strip of pixels, one pixel a metre of depth, true where the rock is sand. Pixels
that share an edge are one piece, so sands join across a strand where they overlap by a metre.
"""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from scipy import ndimage

from fzconnect.geometry import FaultZone
from fzconnect.network.result import Answer
from tests.zones import build

_WIDTH = 2  # pixels a block


def _picture(thickness: np.ndarray, sand: str, shifts: np.ndarray) -> tuple[np.ndarray, int]:
    """Return the section and the row of the footwall column's top; one shift, m, a block."""
    column = np.repeat([letter == "S" for letter in sand], thickness)
    above = int(-shifts.min())
    picture = np.zeros((above + len(column) + int(shifts.max()), _WIDTH * len(shifts)), dtype=bool)
    for block, shift in enumerate(shifts):
        first = above + int(shift)
        strip = slice(_WIDTH * block, _WIDTH * (block + 1))
        picture[first : first + len(column), strip] = column[:, np.newaxis]
    return picture, above


def _connected(zone: FaultZone, thickness: np.ndarray, sand: str, shifts: np.ndarray) -> set:
    picture, above = _picture(thickness, sand, shifts)
    labels, _ = ndimage.label(picture)
    tops = above + np.concatenate([[0], np.cumsum(thickness)])
    rows = [tops[body.first] for body in zone.bodies]
    pairs = product(enumerate(rows), repeat=2)
    return {
        (zone.bodies[a].name, zone.bodies[b].name)
        for (a, hanging), (b, footwall) in pairs
        if labels[hanging + shifts[-1], -1] == labels[footwall, 0]
    }


def _scenario(seed: int, strands: int) -> tuple[np.ndarray, str, np.ndarray]:
    """Return thicknesses, sands and strand throws, all whole metres; the throws never sum to 0."""
    rng = np.random.default_rng([seed, strands])
    layers = int(rng.integers(2, 11))
    thickness = rng.integers(1, 9, layers)
    sand = "".join("S" if rng.random() < 0.5 else "M" for _ in range(layers - 1)) + "S"
    while True:
        throws = rng.integers(-4, 9, strands)
        if throws.sum() != 0:
            return thickness, sand, throws


@pytest.mark.parametrize("strands", range(1, 7))
def test_connected_pairs_are_those_of_the_labelled_picture(strands: int) -> None:
    gained = lost = antithetic = 0
    for seed in range(40):
        thickness, sand, throws = _scenario(seed, strands)
        total = int(throws.sum())
        zone = build(list(thickness), sand, total, throws / total)
        shifts = np.concatenate([[0], np.cumsum(throws)])
        for answer, blocks in (
            (Answer.from_zone(zone), shifts),
            (Answer.from_zone(zone.single_plane()), shifts[[0, -1]]),
        ):
            expected = _connected(zone, thickness, sand, blocks)
            assert set(answer.network.bottlenecks) == {
                answer.network.ends(hanging, footwall) for hanging, footwall in expected
            }, f"seed {seed}"
        single, several = (
            _connected(zone, thickness, sand, shifts[[0, -1]]),
            _connected(zone, thickness, sand, shifts),
        )
        gained += len(several - single)
        lost += len(single - several)
        antithetic += bool((throws < 0).any())
    if strands > 1:
        assert gained > 10
        assert lost > 0
        assert antithetic > 10
