"""A network small enough to work everything out by hand.

Shale 100, S1 20, shale 10, S2 20, shale 100 m from 1000 m down; two strands of 12 and 18 m. The
strands are vertical and 1 m long, so that areas are heights. Depths below 1000 m:

              footwall    lens 1      hanging wall
    S1        100-120     112-132     130-150
    S2        130-150     142-162     160-180

    strand 1: footwall S1 - lens S1      112-120   8
              footwall S2 - lens S1      130-132   2
              footwall S2 - lens S2      142-150   8
    strand 2: lens S1 - hanging wall S1  130-132   2
              lens S2 - hanging wall S1  142-150   8
              lens S2 - hanging wall S2  160-162   2

One plane of 30 m: hanging wall S1 (130-150) faces footwall S2 (130-150), 20; nothing else meets.
"""

from __future__ import annotations

from fzconnect.scenario import Column, Layer, Scenario, Strands, Throw

F1, F2 = "footwall: S1", "footwall: S2"
L1, L2 = "lens 1: S1", "lens 1: S2"
H1, H2 = "hanging wall: S1", "hanging wall: S2"

AREAS = {(F1, L1): 8.0, (F2, L1): 2.0, (F2, L2): 8.0, (L1, H1): 2.0, (L2, H1): 8.0, (L2, H2): 2.0}


def scenario(split: tuple[float, ...] = (0.4, 0.6), *, below: float = 100.0) -> Scenario:
    layers = (
        Layer(name="M1", thickness=100, vsh=0.8),
        Layer(name="S1", thickness=20, vsh=0.1),
        Layer(name="M2", thickness=10, vsh=0.8),
        Layer(name="S2", thickness=20, vsh=0.2),
        Layer(name="M3", thickness=below, vsh=0.8),
    )
    return Scenario(
        name="By hand",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=30),
        strands=Strands(count=len(split), split=split, lens_width=(10,) * (len(split) - 1), dip=90),
    )
