"""Hypothesis strategies that make valid scenarios of every form."""

from __future__ import annotations

from typing import Any

from hypothesis import strategies as st

from fzconnect.scenario import (
    Column,
    Conduit,
    Cutoff,
    Evidence,
    FaultRock,
    Flow,
    Fluid,
    Layer,
    Scenario,
    SplitDraw,
    Strands,
    StrandShare,
    Throw,
    ThrowDraw,
    Uncertainty,
)


def numbers(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high, allow_subnormal=False)


names = st.text(
    st.characters(exclude_categories=["Cc", "Cs", "Cn", "Zl", "Zp"]), min_size=1, max_size=12
).filter(lambda text: text.strip() != "" and " > " not in text)

lengths = numbers(1e-3, 1e3)
depths = numbers(-1e4, 1e4)
plain = st.recursive(
    st.booleans() | st.integers(-(2**62), 2**62) | numbers(-1e9, 1e9) | names | st.dates(),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(names, inner, max_size=3),
    max_leaves=5,
)


@st.composite
def columns(draw: st.DrawFn) -> Column:
    titles = draw(st.lists(names.map(str.strip), min_size=2, max_size=8, unique=True))
    is_sand = draw(st.lists(st.booleans(), min_size=len(titles), max_size=len(titles)))
    is_sand[:2] = [True, False]
    with_permeability, with_porosity, with_kind = (draw(st.booleans()) for _ in range(3))

    def one(title: str, sand: bool) -> Layer:
        # If any layer has a property, every sand needs it; a shale may go without.
        def some(given: bool, high: float) -> float | None:
            return draw(numbers(0, high)) if given and (sand or draw(st.booleans())) else None

        vsh = numbers(0, 1) if with_kind else numbers(0, 0.4) if sand else numbers(0.5, 1)
        return Layer(
            name=title,
            thickness=draw(lengths),
            vsh=draw(vsh),
            permeability=some(with_permeability, 1e4),
            porosity=some(with_porosity, 1),
            kind=("sand" if sand else "shale") if with_kind else None,
        )

    def layers() -> tuple[Layer, ...]:
        return tuple(map(one, titles, is_sand))

    return Column(
        layers=layers(),
        hanging_wall=layers() if draw(st.booleans()) else None,
        top=draw(depths),
        sand_cutoff=draw(numbers(0.4, 0.499)),
    )


@st.composite
def throws(draw: st.DrawFn, column: Column) -> Throw:
    form = draw(st.sampled_from(["total", "profile", "cutoffs"]))
    reach = 0.99 * min(column.thickness("footwall"), column.thickness("hanging wall"))
    some = numbers(-reach, reach)
    if form == "total":
        return Throw(total=draw(some), length=draw(lengths))
    several = st.lists(depths, min_size=2, max_size=5, unique=True)
    distances = sorted(draw(several.filter(lambda some: max(some) - min(some) >= 1e-3)))
    if form == "profile":
        return Throw(profile=tuple((s, draw(some)) for s in distances))
    assert column.top is not None
    tops = [column.top, *(draw(depths) for _ in distances[1:])]
    return Throw(
        cutoffs=tuple(
            Cutoff(distance=s, footwall=z, hanging_wall=z + draw(some))
            for s, z in zip(distances, tops, strict=True)
        )
    )


@st.composite
def strands(draw: st.DrawFn) -> Strands:
    count = draw(st.integers(1, 5))
    data: dict[str, Any] = {
        "count": count,
        "dip": draw(numbers(1, 90)),
        "lens_width": draw(st.lists(lengths, min_size=count - 1, max_size=count - 1)),
    }
    form = draw(st.sampled_from(["equal", "split", "shares"]))
    weights = st.lists(numbers(0.1, 9), min_size=count, max_size=count)
    if form == "split":
        weight = draw(weights)
        data["split"] = tuple(w / sum(weight) for w in weight)
    if form == "shares":
        distances = sorted(draw(st.lists(depths, min_size=1, max_size=4, unique=True)))
        data["shares"] = tuple(
            StrandShare(
                name=f"Strand {k}", points=tuple((s, draw(numbers(0.1, 9))) for s in distances)
            )
            for k in range(count)
        )
    if draw(st.booleans()):
        top = draw(depths)
        conduit = Conduit(
            strand=draw(st.integers(1, count)),
            from_depth=top,
            to_depth=top + draw(lengths),
            width=draw(lengths),
            permeability=draw(numbers(0, 1e5)),
        )
        data["conduits"] = (conduit,)
    return Strands(**data)


fault_rocks = st.builds(
    FaultRock,
    permeability=st.sampled_from(["sgr-throw", "clay-depth"]) | numbers(0, 1e3),
    thickness=lengths,
    threshold=st.sampled_from(["sgr-depth", "permeability"]) | numbers(0, 10),
) | st.builds(FaultRock, thickness_ratio=lengths)

fluids = st.builds(Fluid, name=names, density=numbers(1, 900), brine_density=numbers(901, 1300)) | (
    st.builds(Fluid, name=names, pressure=numbers(1, 100), temperature=numbers(0, 200))
)

uncertainties = st.builds(
    Uncertainty,
    strand_count=st.none() | st.just(((1, 0.25), (3, 0.5), (12, 0.25))),
    split=st.none()
    | st.builds(SplitDraw, dirichlet=lengths)
    | st.builds(SplitDraw, largest_share=st.tuples(numbers(0.1, 0.5), numbers(0.5, 1))),
    throw=st.none()
    | st.builds(ThrowDraw, normal=st.tuples(numbers(-9, 9), numbers(0.1, 9)))
    | st.builds(ThrowDraw, lognormal=st.tuples(numbers(0.1, 9), numbers(0.1, 1))),
    thickness=st.none() | numbers(0, 1),
    vsh=st.none() | numbers(0, 1),
)

evidence = st.builds(
    lambda kind, extra: Evidence(**{**extra, "kind": kind}),
    st.sampled_from(["pressure", "contact", "resolution", "strand_count"]),
    st.dictionaries(names, plain, max_size=3),
)


@st.composite
def scenarios(draw: st.DrawFn) -> Scenario:
    column = draw(columns())
    return Scenario(
        name=draw(names),
        column=column,
        throw=draw(throws(column)),
        strands=draw(strands()),
        fault_rock=draw(st.none() | fault_rocks),
        fluid=draw(st.none() | fluids),
        flow=draw(st.none() | st.builds(Flow, outer_distance=lengths)),
        uncertainty=draw(st.none() | uncertainties),
        evidence=tuple(draw(st.lists(evidence, max_size=2))),
    )
