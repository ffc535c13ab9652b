from __future__ import annotations

import networkx as nx
import pytest

from fzconnect.errors import NetworkError
from fzconnect.network import FaultNetwork
from fzconnect.network.result import Answer
from tests.network.hand import AREAS, F1, F2, H1, H2, L1, L2, scenario
from tests.zones import build


@pytest.fixture
def network() -> FaultNetwork:
    from fzconnect.geometry import FaultZone

    return Answer.from_zone(FaultZone.from_scenario(scenario())).network


def test_edges_are_the_windows_found_by_hand(network: FaultNetwork) -> None:
    found = {network.ordered((u, v)): area for u, v, area in network.graph.edges(data="area")}
    assert found == pytest.approx(AREAS)
    assert set(network.graph) == {F1, F2, L1, L2, H1, H2}


def test_an_edge_carries_what_its_windows_say_together() -> None:
    """Bed 30 m; throw 10, 30, 0, 0 m at 0, 100, 200, 300 m; strands of 30 degrees, so areas x 2.

    Two windows: 20 falling to 0 over 100 m (1000 m2), 0 rising to 30 over 100 m (1500 m2), then an
    unfaulted contact of 30 x 100 (3000 m2). Top 1100 at the far end, base 1130 throughout.
    """
    zone = build(
        [100, 30, 100], "MSM", [10, 30, 0, 0], stations=[0, 100, 200, 300], dip=30, names="ABC"
    )
    graph = Answer.from_zone(zone).network.graph
    assert graph.edges["footwall: B", "hanging wall: B"] == {
        "strand": 1,
        "strand_name": "1",
        "windows": 3,
        "area": pytest.approx(11000.0),
        "faulted_area": pytest.approx(5000.0),
        "unfaulted_area": pytest.approx(6000.0),
        "max_height": pytest.approx(30.0),
        "top": pytest.approx(1100.0),
        "base": pytest.approx(1130.0),
        "distance_from": 0.0,
        "distance_to": 300.0,
        "contact": "both",
        "resistance": pytest.approx(1 / 11000),
    }


@pytest.mark.parametrize(("throw", "contact"), [(0.0, "unfaulted"), (5.0, "faulted")])
def test_the_kind_of_contact_in_words(throw: float, contact: str) -> None:
    graph = Answer.from_zone(build([100, 30, 100], "MSM", throw, names="ABC")).network.graph
    assert graph.edges["footwall: B", "hanging wall: B"]["contact"] == contact


def test_a_node_carries_its_sand_body() -> None:
    """Sands A 10 m and B 30 m; across the fault 10 m and 40 m, throw 0 to 20 m.

    Thickness 40 and 50 m. Mean vsh (10 x 0.1 + 30 x 0.3) / 40 = 0.25; permeability
    (10 x 100 + 30 x 500) / 40 = 400 mD along the bedding; across the fault (10 x 100 + 40 x 500) /
    50 = 420 and (1 + 12) / 50 = 0.26. The lens is half way: 45 m.
    """
    zone = build(
        [10, 30, 60],
        "SSM",
        [0, 20],
        [0.5, 0.5],
        stations=[0, 100],
        hanging_thickness=[10, 40, 60],
        names="ABC",
        vsh=[0.1, 0.3, 0.9],
        permeability=[[100, 500, float("nan")]] * 2,
    )
    nodes = Answer.from_zone(zone).network.graph.nodes
    assert nodes["footwall: A to B"] == {
        "block": 0,
        "block_name": "footwall",
        "sand": "A to B",
        "thickness": pytest.approx(40.0),
        "mean_vsh": pytest.approx(0.25),
        "crest_depth": pytest.approx(1000.0),
        "base_depth": pytest.approx(1040.0),
        "permeability": pytest.approx(400.0),
    }
    hanging = nodes["hanging wall: A to B"]
    assert hanging["block"] == 2
    assert hanging["mean_vsh"] == pytest.approx(0.26)
    assert hanging["permeability"] == pytest.approx(420.0)
    assert (hanging["crest_depth"], hanging["base_depth"]) == pytest.approx((1000.0, 1070.0))
    assert nodes["lens 1: A to B"]["thickness"] == pytest.approx(45.0)


def test_permeability_is_left_out_where_a_layer_of_the_body_has_none() -> None:
    zone = build(
        [10, 30, 60, 5], "SSMS", 1, names="ABCD", permeability=[[100, float("nan"), 1, 7]] * 2
    )
    nodes = Answer.from_zone(zone).network.graph.nodes
    assert "permeability" not in nodes["footwall: A to B"]
    assert nodes["footwall: D"]["permeability"] == 7.0


def test_attributes_are_plain_numbers_and_text(network: FaultNetwork) -> None:
    values = [v for _, data in network.graph.nodes(data=True) for v in data.values()]
    values += [v for *_, data in network.graph.edges(data=True) for v in data.values()]
    assert {type(value) for value in values} == {int, float, str}


def test_bridges_and_critical_windows_by_hand(network: FaultNetwork) -> None:
    """H1, L1, F2 and L2 form a ring; F1 and H2 hang on it by one window each."""
    assert set(network.bridges) == {(F1, L1), (L2, H2)}
    assert set(network.critical_windows) == {(F1, L1), (L2, H2)}


def test_a_bridge_of_two_windows_holds_no_critical_window() -> None:
    zone = build([100, 30, 100], "MSM", [10, 30, 10], stations=[0, 100, 200], names="ABC")
    network = Answer.from_zone(zone).network
    assert network.graph.edges["footwall: B", "hanging wall: B"]["windows"] == 2
    assert network.bridges == (("footwall: B", "hanging wall: B"),)
    assert network.critical_windows == ()


def test_the_only_window_of_a_dead_end_is_not_critical() -> None:
    """Throws 30 and 0.5 m: the lens's A (130-150) faces the footwall's C (145-165) by 5 m.

    The lens's C hangs on the hanging wall's C alone, and leads no further.
    """
    zone = build([100, 20, 25, 20, 100], "MSMSM", 30.5, [30 / 30.5, 0.5 / 30.5], names="MANCO")
    network = Answer.from_zone(zone).network
    assert ("lens 1: C", "hanging wall: C") in network.bridges
    assert set(network.critical_windows) == {
        ("footwall: C", "lens 1: A"),
        ("lens 1: A", "hanging wall: A"),
    }


def test_connection_bottleneck_and_widest_pathway_by_hand(network: FaultNetwork) -> None:
    expected = {(H1, F1): 2.0, (H1, F2): 8.0, (H2, F1): 2.0, (H2, F2): 2.0}
    assert network.bottlenecks == pytest.approx(expected)
    assert network.bottleneck("S1", "S2") == pytest.approx(8.0)
    assert all(network.is_connected(h, f) for h in ("S1", "S2") for f in ("S1", "S2"))
    way = network.widest("S1", "S2")
    assert way is not None
    assert way.nodes == (H1, L2, F2)
    assert way.bottleneck_area == pytest.approx(8.0)


def test_without_windows_nothing_is_connected() -> None:
    network = Answer.from_zone(build([10, 100], "SM", 50)).network
    assert not network.is_connected("S1", "S1")
    assert network.bottlenecks == {}
    assert network.cut_areas == {}
    assert network.bottleneck("S1", "S1") == 0.0
    assert network.widest("S1", "S1") is None
    assert list(network.pathways("S1", "S1")) == []
    assert network.bridges == ()
    cut = network.minimum_cut("S1", "S1")
    assert (cut.area, cut.edges) == (0.0, ())


def test_a_zone_without_sand_is_an_empty_network() -> None:
    network = Answer.from_zone(build([10, 100], "MM", 5)).network
    assert len(network.graph) == 0
    assert network.sands == ()
    assert network.bottlenecks == {}


@pytest.mark.parametrize(
    ("block", "sand", "words"),
    [
        (
            "footwall",
            "S12",
            r'no sand body is called "S12", did you mean "S\d"\? \(there are: S1, S2',
        ),
        ("footwall", "quartz", r'no sand body is called "quartz" \(there are: S1, S2\)'),
        (
            "lens 2",
            "S1",
            r'no block is called "lens 2" \(there are: footwall, lens 1, hanging wall',
        ),
    ],
)
def test_what_is_not_in_the_network_is_named(
    network: FaultNetwork, block: str, sand: str, words: str
) -> None:
    with pytest.raises(NetworkError, match=words):
        network.node(block, sand)


def test_every_question_checks_its_sands_at_once(network: FaultNetwork) -> None:
    for ask in (
        network.is_connected,
        network.bottleneck,
        network.widest,
        network.pathways,
        network.minimum_cut,
    ):
        with pytest.raises(NetworkError, match='no sand body is called "quartz"'):
            ask("quartz", "S1")
        with pytest.raises(NetworkError, match='no sand body is called "quartz"'):
            ask("S1", "quartz")


def test_a_network_says_what_it_holds(network: FaultNetwork) -> None:
    assert repr(network) == "<FaultNetwork: 6 sand bodies, 6 links>"
    assert isinstance(network.graph, nx.Graph)
