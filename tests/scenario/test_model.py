from __future__ import annotations

import copy
import pickle
import re

import numpy as np
import pytest
from hypothesis import given, settings

from fzconnect.errors import ScenarioError
from fzconnect.scenario import Column, Cutoff, Layer, Scenario, Strands, Throw, demo
from tests.scenario.strategies import scenarios

COLUMN = Column(
    layers=(Layer(name="S", thickness=40, vsh=0.1), Layer(name="M", thickness=60, vsh=0.8)),
    top=1000,
)


def _scenario(**changes: object) -> Scenario:
    return Scenario(**{"name": "Z", "column": COLUMN, "throw": Throw(total=30), **changes})


def test_scenarios_do_not_change() -> None:
    scenario = _scenario()
    with pytest.raises(ValueError, match="frozen"):
        scenario.name = "other"  # type: ignore[misc]
    with pytest.raises(ValueError, match="frozen"):
        scenario.column.layers[0].vsh = 0.5  # type: ignore[misc]


def test_equal_by_value_and_fingerprint() -> None:
    assert _scenario() == _scenario()
    assert _scenario().fingerprint() == _scenario(throw=Throw(total=30.0)).fingerprint()
    assert _scenario() != _scenario(name="Y")
    assert _scenario().fingerprint() != _scenario(name="Y").fingerprint()
    minus = Throw(total=-0.0)
    assert _scenario(throw=minus).fingerprint() == _scenario(throw=Throw(total=0)).fingerprint()
    assert re.fullmatch("[0-9a-f]{64}", _scenario().fingerprint())


@settings(max_examples=20, deadline=None)
@given(scenarios())
def test_scenarios_can_be_pickled_and_copied(scenario: Scenario) -> None:
    assert pickle.loads(pickle.dumps(scenario)) == scenario
    assert copy.deepcopy(scenario) == scenario


def test_numbers_of_numpy_are_numbers() -> None:
    strands = Strands(count=np.int64(2), split=tuple(np.array([0.25, 0.75])), dip=np.float32(60))
    assert strands == Strands(count=2, split=(0.25, 0.75), dip=60)
    assert type(strands.count) is int
    with pytest.raises(ScenarioError, match=r"Throw\.total: found a bool, expected a number"):
        Throw(total=np.bool_(True))


def test_errors_of_models_made_in_python_name_the_model() -> None:
    message = "Layer.vsh: found 2, expected a number from 0 to 1"
    with pytest.raises(ScenarioError, match="^" + re.escape(message) + "$"):
        Layer(name="S", thickness=1, vsh=2)
    message = 'Layer: unknown key "vhs", did you mean "vsh"?'
    with pytest.raises(ScenarioError, match=re.escape(message)):
        Layer(name="S", thickness=1, vsh=0, vhs=1)  # type: ignore[call-arg]
    message = "Scenario.column.layers[2].thickness: found 0, expected a number from 0.001"
    bad = {"name": "M", "thickness": 0, "vsh": 1}
    layers = [{"name": "S", "thickness": 1, "vsh": 0}, bad]
    with pytest.raises(ScenarioError, match=re.escape(message)):
        _scenario(column={"layers": layers, "top": 1})


def test_hanging_wall_is_filled_from_the_footwall() -> None:
    layers = (
        Layer(name="S", thickness=40, vsh=0.1, permeability=100, porosity=0.2, kind="sand"),
        Layer(name="M", thickness=60, vsh=0.8),
    )
    other = (Layer(name="S", thickness=50, vsh=0.5), Layer(name="M", thickness=60, vsh=0.7))
    column = Column(layers=layers, hanging_wall=other, top=0)
    assert column.hanging_wall is not None
    assert column.hanging_wall[0] == Layer(
        name="S", thickness=50, vsh=0.5, permeability=100, porosity=0.2, kind="sand"
    )


def test_throw_at_each_distance() -> None:
    assert Throw(total=-5, length=70).distances == (0, 70)
    assert Throw(total=-5, length=70).throws == (-5, -5)
    profile = Throw(profile=((0, 1), (9, 4)))
    assert (profile.distances, profile.throws) == ((0, 9), (1, 4))


def test_scaled_throw() -> None:
    cutoffs = tuple(Cutoff(distance=s, footwall=100 + s, hanging_wall=130 + s) for s in (0.0, 10.0))
    throw = Throw(cutoffs=cutoffs)
    assert throw.scaled(1) is throw
    assert throw.scaled(2).throws == (60, 60)
    assert throw.scaled(2).cutoffs[1].footwall == 110  # type: ignore[index]
    assert Throw(total=30, length=7).scaled(-0.5) == Throw(total=-15, length=7)
    assert Throw(profile=((0, 1), (9, 4))).scaled(3) == Throw(profile=((0, 3), (9, 12)))
    with pytest.raises(ScenarioError, match="factor of the throw: found nan, expected a finite"):
        throw.scaled(float("nan"))


def test_with_throw_factor_is_checked_against_the_column() -> None:
    scenario = _scenario()
    assert scenario.with_throw_factor(3).throw.total == 90
    with pytest.raises(ScenarioError, match="a throw of 120 m pushes every layer past the column"):
        scenario.with_throw_factor(4)


def test_with_strands() -> None:
    strands = Strands(count=4)
    assert _scenario().with_strands(strands).strands is strands
    assert demo().with_strands(strands).throw == demo().throw


def test_growth_decides_how_far_a_reverse_throw_may_go() -> None:
    growth = tuple(x.model_copy(update={"thickness": 2 * x.thickness}) for x in COLUMN.layers)
    column = Column(layers=COLUMN.layers, hanging_wall=growth, top=0)
    assert _scenario(column=column, throw=Throw(total=-150)).throw.total == -150
    with pytest.raises(ScenarioError, match=r"a throw of -200 m .* which is 200 m thick"):
        _scenario(column=column, throw=Throw(total=-200))
    with pytest.raises(ScenarioError, match=r"a throw of 100 m .* which is 100 m thick"):
        _scenario(column=column, throw=Throw(total=100))
