from __future__ import annotations

import pytest

import fzconnect as fz
from fzconnect.network import Study, study
from tests.network import hand


@pytest.fixture(scope="session")
def small() -> Study:
    return study(hand.scenario())


@pytest.fixture(scope="session")
def quillmere() -> Study:
    return study(fz.demo())


@pytest.fixture(scope="session")
def many_strands() -> Study:
    scenario = fz.demo()
    return study(scenario.with_strands(scenario.strands.with_count(9)))
