"""How long one scenario takes; run with `--benchmark-enable` to see the times.

Budget: windows and network of 40 layers, 5 strands and 51 stations in under 10 ms after warm-up.
Times depend on the machine and are not asserted; the ratio to the plain loop stands in the table
as extra information.
"""

from __future__ import annotations

from time import perf_counter

import networkx as nx
import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from fzconnect.geometry import FaultZone, find_windows
from fzconnect.network import FaultNetwork, Study, study
from fzconnect.scenario import Column, Layer, Scenario, Strands, StrandShare, Throw
from tests.benchmarks.loop import plain_network


def _scenario() -> Scenario:
    """Return 40 layers, every other one sand; 5 strands; 51 stations along 2500 m."""
    rng = np.random.default_rng(0)
    layers = tuple(
        Layer(name=f"L{i}", thickness=float(rng.uniform(4, 30)), vsh=0.1 if i % 2 else 0.8)
        for i in range(40)
    )
    along = np.linspace(0.0, 2500.0, 51)
    throw = 150.0 * np.sin(np.pi * (along + 250.0) / 3000.0) + 5.0 * rng.standard_normal(51)
    shares = tuple(
        StrandShare(name=name, points=((0, float(start)), (2500, float(end))))
        for name, start, end in zip(
            "ABCDE", rng.uniform(0.5, 2, 5), rng.uniform(0.5, 2, 5), strict=True
        )
    )
    return Scenario(
        name="Benchmark",
        column=Column(layers=layers, top=1500),
        throw=Throw(profile=tuple(zip(along.tolist(), throw.tolist(), strict=True))),
        strands=Strands(count=5, shares=shares, lens_width=(20,) * 4, dip=65),
    )


@pytest.fixture(scope="module")
def scenario() -> Scenario:
    return _scenario()


@pytest.fixture(scope="module")
def zone(scenario: Scenario) -> FaultZone:
    zone = FaultZone.from_scenario(scenario)
    assert (len(zone.layer_names), zone.strand_count, len(zone.stations)) == (40, 5, 51)
    find_windows(zone)  # compiles the kernel
    return zone


def _network(zone: FaultZone) -> FaultNetwork:
    return FaultNetwork.from_windows(zone, find_windows(zone))


def test_windows(benchmark: BenchmarkFixture, zone: FaultZone) -> None:
    windows = benchmark(find_windows, zone)
    assert len(windows) > 200


def test_windows_and_network(benchmark: BenchmarkFixture, zone: FaultZone) -> None:
    benchmark.extra_info["budget_ms"] = 10
    network = benchmark(_network, zone)
    start = perf_counter()
    graph = plain_network(zone)
    loop = perf_counter() - start
    if benchmark.enabled and benchmark.stats:
        benchmark.extra_info["plain_loop_s"] = loop
        benchmark.extra_info["times_faster"] = loop / benchmark.stats.stats.median
    assert network.graph.number_of_edges() == graph.number_of_edges() > 100


def test_plain_loop(benchmark: BenchmarkFixture, zone: FaultZone) -> None:
    """The plain loop comes to the same areas, heights and connected sands."""
    graph = benchmark.pedantic(plain_network, args=(zone,), rounds=1)
    ours = _network(zone)
    for u, v, data in graph.edges(data=True):
        edge = ours.graph.edges[u, v]
        assert edge["area"] == pytest.approx(data["area"], rel=1e-9)
        assert edge["max_height"] == pytest.approx(data["max_height"], rel=1e-9)
    assert {frozenset(piece) for piece in nx.connected_components(graph)} == {
        frozenset(piece) for piece in nx.connected_components(ours.graph)
    }


def test_whole_study(benchmark: BenchmarkFixture, scenario: Scenario) -> None:
    result = benchmark(study, scenario)
    assert isinstance(result, Study)
    assert len(result.pairs) == 400


def test_sands_pairs_with_their_cuts(benchmark: BenchmarkFixture, scenario: Scenario) -> None:
    """Minimum cuts of all 400 pairs, which only the files need."""
    areas = benchmark(lambda: _network(FaultZone.from_scenario(scenario)).cut_areas)
    assert areas
