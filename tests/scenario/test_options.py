"""The optional tables: fault rock, fluid, flow, uncertainty, evidence."""

from __future__ import annotations

import re
from collections.abc import Callable
from pathlib import Path

import pytest

from fzconnect.errors import ScenarioError
from fzconnect.scenario import (
    Evidence,
    FaultRock,
    Flow,
    Fluid,
    Source,
    SplitDraw,
    ThrowDraw,
    Uncertainty,
    load,
)

Write = Callable[..., Path]

ALL = """
[fault_rock]
permeability = "clay-depth"
thickness = 0.3
threshold = 0.8
[fluid]
name = "CO2"
density = 620
brine_density = 1030
interfacial_tension = 28
contact_angle = 20
source = { side = "footwall", sand = "S2", crest = 1480, spill = 1620 }
[flow]
outer_distance = 80
[uncertainty]
strand_count = { 10 = 0.5, 2 = 0.3, 3 = 0.2 }
split = { largest_share = [0.5, 0.9] }
throw = { triangular = [20, 30, 45] }
thickness = 0.10
vsh = 0.05
[[evidence]]
kind = "pressure"
sands = ["S1", "S2"]
equal = true
seen = 2021-05-04
[[evidence]]
kind = "resolution"
limit = { throw = 12.5 }
"""


def test_reads_every_optional_table(write: Write) -> None:
    scenario = load(write(add=ALL))
    assert scenario.fault_rock == FaultRock(permeability="clay-depth", thickness=0.3, threshold=0.8)
    assert scenario.fluid == Fluid(
        name="CO2",
        density=620,
        brine_density=1030,
        interfacial_tension=28,
        contact_angle=20,
        source=Source(side="footwall", sand="S2", crest=1480, spill=1620),
    )
    assert scenario.flow == Flow(outer_distance=80)
    assert scenario.uncertainty == Uncertainty(
        strand_count=((2, 0.3), (3, 0.2), (10, 0.5)),
        split=SplitDraw(largest_share=(0.5, 0.9)),
        throw=ThrowDraw(triangular=(20, 30, 45)),
        thickness=0.1,
        vsh=0.05,
    )
    assert [evidence.kind for evidence in scenario.evidence] == ["pressure", "resolution"]
    extra = scenario.evidence[0].model_extra
    assert extra is not None
    assert extra["sands"] == ("S1", "S2")
    assert extra["equal"] is True
    assert scenario.evidence[1].model_extra == {"limit": {"throw": 12.5}}


def test_defaults_of_the_optional_tables(write: Write) -> None:
    scenario = load(write(add="[fault_rock]\n[flow]\n[uncertainty]\n"))
    assert scenario.fault_rock == FaultRock(
        permeability="sgr-throw", thickness_ratio=66, threshold="sgr-depth"
    )
    assert scenario.flow == Flow(outer_distance=50)
    assert scenario.uncertainty == Uncertainty()
    assert scenario.fluid is None
    assert scenario.evidence == ()


@pytest.mark.parametrize(
    ("add", "message"),
    [
        (
            '[fault_rock]\npermeability = "sgr_throw"',
            'fault_rock.permeability: found "sgr_throw", did you mean "sgr-throw"? expected '
            '"sgr-throw", "clay-depth" or a number from 0 to 1000000000 mD',
        ),
        (
            "[fault_rock]\nthreshold = -1",
            "fault_rock.threshold: found -1, expected a number from 0 to 10000 MPa",
        ),
        (
            "[fault_rock]\nthreshold = true",
            "fault_rock.threshold: found true, expected a number from 0 to 10000 MPa",
        ),
        (
            "[fault_rock]\nthickness = 1\nthickness_ratio = 66",
            "fault_rock: found both of thickness_ratio and thickness, expected one of them",
        ),
        (
            "[fault_rock]\nthickness_ratio = 0",
            "fault_rock.thickness_ratio: found 0, expected a number above 0 and up to 1000000",
        ),
        (
            '[fluid]\nname = "CO2"',
            "fluid: found neither, expected either density or both pressure and temperature",
        ),
        (
            '[fluid]\nname = "CO2"\npressure = 20',
            "fluid: found pressure, expected either density or both pressure and temperature",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\npressure = 20\ntemperature = 60',
            "fluid: found density and pressure and temperature, expected either density or both "
            "pressure and temperature",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 1100\nbrine_density = 1030',
            "fluid.density: found 1100 with a brine density of 1030, expected a buoyant fluid, "
            "lighter than the brine",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 0',
            "fluid.density: found 0, expected a number above 0 and up to 25000 kg/m3",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\ninterfacial_tension = 0',
            "fluid.interfacial_tension: found 0, expected a number above 0 and up to 10000 mN/m",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\ncontact_angle = 181',
            "fluid.contact_angle: found 181, expected a number from 0 to 180 degrees",
        ),
        (
            '[fluid]\nname = "CO2"\npressure = 20\ntemperature = -300',
            "fluid.temperature: found -300, expected a number above -273.15 and up to 2000 degC",
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\n'
            'source = { side = "foot wall", sand = "S1", crest = 1 }',
            'fluid.source.side: found "foot wall", did you mean "footwall"? expected "footwall" '
            'or "hanging_wall"',
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\n'
            'source = { side = "footwall", sand = "M1", crest = 1 }',
            'fluid.source.sand: found "M1", expected one of the sands: S1, S2',
        ),
        (
            '[fluid]\nname = "CO2"\ndensity = 600\n'
            'source = { side = "footwall", sand = "S1", crest = 10, spill = 9 }',
            "fluid.source.spill: found 9 with the crest at 10, expected a spill depth below the "
            "crest (depths are positive down)",
        ),
        (
            "[flow]\nouter_distance = 0",
            "flow.outer_distance: found 0, expected a number above 0 and up to 1000000 m",
        ),
        (
            "[uncertainty]\nstrand_count = { 1 = 0.5, 2 = 0.4 }",
            "uncertainty.strand_count: the sum is 0.9, expected 1 (within 1e-06)",
        ),
        (
            "[uncertainty]\nstrand_count = { 0 = 1 }",
            'uncertainty.strand_count: found "0", expected a whole number from 1 to 50',
        ),
        (
            "[uncertainty]\nstrand_count = { two = 1 }",
            'uncertainty.strand_count: found "two", expected a whole number from 1 to 50',
        ),
        (
            "[uncertainty]\nstrand_count = { 1 = 1.5, 2 = -0.5 }",
            "uncertainty.strand_count.1: found 1.5, expected a number from 0 to 1.000001",
        ),
        (
            "[uncertainty]\nstrand_count = {}",
            "uncertainty.strand_count: found a table, expected a table of strand count to weight",
        ),
        (
            "[uncertainty]\nsplit = {}",
            "uncertainty.split: found neither of dirichlet and largest_share, expected one of them",
        ),
        (
            "[uncertainty]\nsplit = { dirichlet = 0 }",
            "uncertainty.split.dirichlet: found 0, expected a number above 0 and up to 1000000",
        ),
        (
            "[uncertainty]\nsplit = { largest_share = [0.9, 0.5] }",
            "uncertainty.split.largest_share: found [0.9, 0.5], expected [low, high], above 0 and "
            "in this order",
        ),
        (
            "[uncertainty]\nsplit = { largest_share = [0.5, 1.5] }",
            "uncertainty.split.largest_share[2]: found 1.5, expected a number from 0 to 1",
        ),
        (
            "[uncertainty]\nthrow = { triangular = [1, 2, 3], uniform = [1, 2] }",
            "uncertainty.throw: found triangular and uniform, expected one of triangular, "
            "uniform, normal, lognormal",
        ),
        (
            "[uncertainty]\nthrow = {}",
            "uncertainty.throw: found none, expected one of triangular, uniform, normal, lognormal",
        ),
        (
            "[uncertainty]\nthrow = { triangular = [1, 4, 3] }",
            "uncertainty.throw.triangular: found [1, 4, 3], expected [low, mode, high] in "
            "increasing order",
        ),
        (
            "[uncertainty]\nthrow = { uniform = [2, 2] }",
            "uncertainty.throw.uniform: found [2, 2], expected [low, high] in increasing order",
        ),
        (
            "[uncertainty]\nthrow = { uniform = [2] }",
            "uncertainty.throw.uniform: found [2], expected [low, high]",
        ),
        (
            "[uncertainty]\nthrow = { uniform = [2, 3, 4] }",
            "uncertainty.throw.uniform: found [2, 3, 4], expected [low, high]",
        ),
        (
            "[uncertainty]\nthrow = { normal = [2, 0] }",
            "uncertainty.throw.normal[2]: found 0, expected a number above 0 and up to 1000000 m",
        ),
        (
            "[uncertainty]\nthrow = { lognormal = [-2, 0.1] }",
            "uncertainty.throw.lognormal[1]: found -2, expected a number above 0 and up to "
            "1000000 m",
        ),
        (
            "[uncertainty]\nthickness = -0.1",
            "uncertainty.thickness: found -0.1, expected a number from 0 to 5",
        ),
        (
            "[[evidence]]\nkind = 'pressures'",
            'evidence[1].kind: found "pressures", did you mean "pressure"? expected "pressure", '
            '"contact", "resolution" or "strand_count"',
        ),
        ("[[evidence]]\nx = 1", 'evidence[1]: the key "kind" is missing'),
        ("[evidence]\nkind = 'pressure'", "evidence: found a table, expected a list"),
        (
            "[[evidence]]\nkind = 'pressure'\nx = [1, nan]",
            "evidence[1].x[2]: found nan, expected a finite number",
        ),
        (
            "[[evidence]]\nkind = 'pressure'\nx = [[[[[[[[[[1]]]]]]]]]]",
            "evidence[1].x[1][1][1][1][1][1][1]: found tables or lists more than 8 deep, expected "
            "a few levels",
        ),
    ],
)
def test_wrong_optional_table(write: Write, add: str, message: str) -> None:
    path = write(add=add)
    with pytest.raises(ScenarioError, match="^" + re.escape(f"{path}, {message}") + "$"):
        load(path)


def test_uncertain_throw_along_the_fault_is_a_factor(write: Write) -> None:
    add = "[uncertainty]\nthrow = { triangular = [20, 30, 45] }"
    path = write({"total = 30": "profile = [[0, 0], [10, 30]]"}, add=add)
    message = "found 30; the throw is given along the fault, so its uncertainty is a factor"
    with pytest.raises(ScenarioError, match=message):
        load(path)


def test_source_may_be_a_sand_body(write: Write) -> None:
    fluid = (
        '[fluid]\nname = "H2"\ndensity = 10\n'
        'source = { side = "hanging_wall", sand = "S1 to S2", crest = 1 }'
    )
    assert load(write(add=fluid)).fluid is not None


def test_evidence_refuses_what_no_file_can_hold() -> None:
    with pytest.raises(ScenarioError, match=r"Evidence\.x: found a set, expected a text, number"):
        Evidence(kind="pressure", x={1})
    with pytest.raises(ScenarioError, match=r"Evidence\.x: found the key 1, expected a text"):
        Evidence(kind="pressure", x={1: 2})
    with pytest.raises(ScenarioError, match=r"Evidence\.x: found half a character"):
        Evidence(kind="pressure", x="\ud800")
