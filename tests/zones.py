"""Fault zones for tests, built from plain numbers without the scenario room."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from hypothesis import strategies as st
from numpy.random import Generator
from numpy.typing import ArrayLike

from fzconnect.geometry import FaultZone, sand_bodies


def build(
    thickness: Sequence[float],
    sand: str,
    throw: ArrayLike,
    shares: ArrayLike = (1.0,),
    *,
    stations: Sequence[float] = (0.0, 1.0),
    hanging_thickness: Sequence[float] | None = None,
    top: float = 1000.0,
    dip: float = 90.0,
    lens_width: float = 10.0,
    names: Sequence[str] | None = None,
    vsh: Sequence[float] | None = None,
    hanging_vsh: Sequence[float] | None = None,
    permeability: ArrayLike | None = None,
) -> FaultZone:
    """Return a zone of layers given as `sand`, one letter a layer: S for sand, another for shale.

    `throw` is one number or one a station; `shares` one number a strand, or one row a strand.
    Boundaries are the design's: block j has its tops at Z_F + F_j (Z_H - Z_F).
    """
    at = np.asarray(stations, dtype=float)
    is_sand = [letter == "S" for letter in sand]
    layer_names = list(names or (f"{letter}{i + 1}" for i, letter in enumerate(sand)))
    part = np.asarray(shares, dtype=float)
    if part.ndim == 1:
        part = np.repeat(part[:, np.newaxis], len(at), axis=1)
    throws = np.broadcast_to(np.asarray(throw, dtype=float), at.shape)
    footwall = top + np.repeat(_below_top(thickness)[:, np.newaxis], len(at), axis=1)
    hanging = top + throws + _below_top(hanging_thickness or thickness)[:, np.newaxis]
    blocks = [footwall]
    for j in range(1, len(part)):
        blocks.append(footwall + part[:j].sum(axis=0) * (hanging - footwall))
    blocks.append(hanging)
    clay = [0.1 if is_one else 0.8 for is_one in is_sand] if vsh is None else list(vsh)
    return FaultZone(
        name="test zone",
        stations=at,
        footwall=footwall,
        hanging_wall=hanging,
        shares=part,
        faces=np.array([[blocks[k], blocks[k + 1]] for k in range(len(part))]),
        strand_names=tuple(str(k + 1) for k in range(len(part))),
        dip=dip,
        lens_width=np.full(len(part) - 1, lens_width),
        layer_names=tuple(layer_names),
        bodies=sand_bodies(layer_names, is_sand),
        is_sand=tuple(is_sand),
        vsh=np.array([clay, list(hanging_vsh or clay)]),
        permeability=None if permeability is None else np.asarray(permeability, dtype=float),
    )


def _below_top(thickness: Sequence[float]) -> np.ndarray:
    return np.concatenate([[0.0], np.cumsum(np.asarray(thickness, dtype=float))])


def random_zone(rng: Generator) -> FaultZone:
    """Return a zone with varying throw, growth, tips, antithetic strands and reverse throw."""
    layers, strands = int(rng.integers(3, 10)), int(rng.integers(1, 6))
    stations = np.concatenate([[0.0], np.cumsum(rng.uniform(5.0, 60.0, rng.integers(1, 6)))])
    sand = "".join("S" if rng.random() < 0.5 else "M" for _ in range(layers - 1)) + "S"
    thickness = rng.uniform(1.0, 30.0, layers)
    growth = rng.uniform(0.8, 1.4, layers) if rng.random() < 0.5 else np.ones(layers)
    throw = rng.uniform(-40.0, 80.0, len(stations))
    if rng.random() < 0.2:
        throw[: rng.integers(1, len(stations) + 1)] = 0.0
    shares = rng.dirichlet(np.ones(strands), len(stations)).T
    if strands > 1 and rng.random() < 0.4:
        shares[int(rng.integers(strands))] *= -0.5
        shares /= shares.sum(axis=0)
        shares = np.where(np.abs(shares).max(axis=0) > 3.0, 1.0 / strands, shares)
    if strands > 1 and rng.random() < 0.4:  # a tip: the strand ends at a station
        shares[0, : rng.integers(1, len(stations) + 1)] = 0.0
        total = shares.sum(axis=0)
        shares = np.where(np.abs(total) < 0.2, 1.0 / strands, shares / total)
    return build(
        thickness,
        sand,
        throw,
        shares,
        stations=stations,
        hanging_thickness=list(thickness * growth),
        dip=float(rng.uniform(20.0, 90.0)),
        top=100.0,
    )


@st.composite
def zones(draw: st.DrawFn, *, strands: int | None = None) -> FaultZone:
    """Draw a small zone of round numbers; round numbers meet edge on edge more often."""
    layers = draw(st.integers(2, 6))
    thickness = draw(st.lists(st.integers(1, 12), min_size=layers, max_size=layers))
    sand = draw(st.text("SM", min_size=layers, max_size=layers).filter(lambda text: "S" in text))
    count = draw(st.integers(2, 4))
    stations = np.cumsum(draw(st.lists(st.integers(1, 9), min_size=count, max_size=count)))
    throw = draw(st.lists(st.integers(-20, 30), min_size=count, max_size=count))
    n = strands or draw(st.integers(1, 4))
    weights = draw(
        st.lists(st.integers(-1, 4), min_size=n, max_size=n).filter(lambda w: sum(w) > 0)
    )
    growth = draw(st.sampled_from([1.0, 1.0, 1.25]))
    return build(
        thickness,
        sand,
        throw,
        np.array(weights) / sum(weights),
        stations=[float(s) for s in stations],
        hanging_thickness=[h * growth for h in thickness],
    )
