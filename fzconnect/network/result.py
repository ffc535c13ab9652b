"""A study: one scenario's zone, windows, network and answers, beside those of a single plane."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property
from html import escape
from itertools import product
from typing import TYPE_CHECKING, Any, Self

from fzconnect.geometry import FaultZone, Windows, coverage_warning, find_windows
from fzconnect.network.graph import FOOTWALL, HANGING_WALL, FaultNetwork, node_id
from fzconnect.network.pathway import Pathway

if TYPE_CHECKING:
    import pandas as pd

    from fzconnect.scenario import Scenario

__all__ = ["Answer", "Pair", "RankedPathway", "Study", "study"]


_UNITS = {"window_area": ", m2", "widest_bottleneck": ", m2"}


@dataclass(frozen=True, slots=True)
class Pair:
    """What is known about one hanging-wall sand and one footwall sand.

    Attributes
    ----------
    hanging_wall_sand, footwall_sand : str
    connected, connected_single_plane : bool
        Whether the one reaches the other across the zone, and across one plane with all the throw.
    bottleneck_area, bottleneck_area_single_plane : float
        Bottleneck of the widest pathway: the least area that two sand bodies on it share, m2 (all
        their windows on that strand together); 0 where not connected.
    """

    hanging_wall_sand: str
    footwall_sand: str
    connected: bool
    connected_single_plane: bool
    bottleneck_area: float
    bottleneck_area_single_plane: float

    @property
    def change(self) -> str:
        """How the zone differs from the single plane: "gained", "lost" or "same"."""
        if self.connected == self.connected_single_plane:
            return "same"
        return "gained" if self.connected else "lost"


@dataclass(frozen=True, slots=True)
class RankedPathway:
    """A pathway of a pair with its rank, 1 for the least resistance."""

    pair: Pair
    rank: int
    pathway: Pathway


@dataclass(frozen=True, eq=False)
class Answer:
    """Zone, windows and network of one way to draw the fault."""

    zone: FaultZone
    windows: Windows
    network: FaultNetwork

    @classmethod
    def from_zone(cls, zone: FaultZone) -> Self:
        """Return the windows and the network of a zone."""
        windows = find_windows(zone)
        return cls(zone, windows, FaultNetwork.from_windows(zone, windows))


@dataclass(frozen=True, eq=False, repr=False)
class Study:
    """Everything that follows from one scenario.

    Attributes
    ----------
    scenario : Scenario
    zone : FaultZone
    windows : Windows
    network : FaultNetwork
    single_plane : Answer
        The same three for one plane with the whole throw.
    pairs : tuple of Pair
        Every hanging-wall sand with every footwall sand, top to base.
    warnings : tuple of str
    """

    scenario: Scenario
    zone: FaultZone
    windows: Windows
    network: FaultNetwork
    single_plane: Answer
    pairs: tuple[Pair, ...]

    @cached_property
    def warnings(self) -> tuple[str, ...]:
        """What a reader has to know before trusting the answers."""
        found = []
        for label, zone in (("zone", self.zone), ("single plane", self.single_plane.zone)):
            sentence = coverage_warning(zone)
            if sentence:
                found.append(f"{label}: {sentence}")
        unused = _unused_parts(self.scenario)
        if unused:
            found.append(f"read and checked, but no answer here uses it: {', '.join(unused)}")
        return tuple(found)

    @cached_property
    def connected_pairs(self) -> tuple[Pair, ...]:
        """The pairs that connect across the zone."""
        return tuple(pair for pair in self.pairs if pair.connected)

    def ranked_pathways(
        self, *, per_pair: int = 3, progress: Callable[[int, int], None] | None = None
    ) -> list[RankedPathway]:
        """Return the pathways of least resistance of every connected pair.

        Parameters
        ----------
        per_pair : int, at least 1
        progress : callable, optional
            Called with (pairs done, pairs in all) after each pair.
        """
        ranked: list[RankedPathway] = []
        for done, pair in enumerate(self.connected_pairs, start=1):
            found = self.network.pathways(
                pair.hanging_wall_sand, pair.footwall_sand, limit=per_pair
            )
            ranked.extend(RankedPathway(pair, rank, way) for rank, way in enumerate(found, start=1))
            if progress:
                progress(done, len(self.connected_pairs))
        return ranked

    def critical_windows(self, pair: Pair) -> tuple[tuple[str, str], ...]:
        """Return the critical windows of a pair: each of them alone, if closed, separates it."""
        if not pair.connected:
            return ()
        widest = self.network.widest(pair.hanging_wall_sand, pair.footwall_sand)
        if widest is None:
            return ()
        critical = set(self.network.critical_windows)
        # a bridge is on every pathway of the pairs that it holds together, so on this one
        edges = (self.network.ordered(edge) for edge in widest.edges)
        return tuple(edge for edge in edges if edge in critical)

    def counts(self, answer: str = "zone") -> dict[str, Any]:
        """Return the headline numbers of the "zone" or of the "single plane"."""
        zone = answer == "zone"
        windows = self.windows if zone else self.single_plane.windows
        network = self.network if zone else self.single_plane.network
        widths = [p.bottleneck_area if zone else p.bottleneck_area_single_plane for p in self.pairs]
        return {
            "strands": windows.zone.strand_count,
            "windows": int((~windows.is_unfaulted).sum()),
            "unfaulted_contacts": int(windows.is_unfaulted.sum()),
            "window_area": float(windows.area[~windows.is_unfaulted].sum()),
            "connected_pairs": sum(
                p.connected if zone else p.connected_single_plane for p in self.pairs
            ),
            "widest_bottleneck": max(widths, default=0.0),
            "critical_windows": len(network.critical_windows),
        }

    def answers_table(self) -> pd.DataFrame:
        """Return the headline numbers, the zone's beside the single plane's; areas in m2."""
        import pandas as pd

        zone, plane = self.counts("zone"), self.counts("single plane")
        return pd.DataFrame(
            {"zone": list(zone.values()), "single_plane": list(plane.values())},
            index=pd.Index([name.replace("_", " ") + _UNITS.get(name, "") for name in zone]),
            dtype=object,
        )

    def pairs_table(self) -> pd.DataFrame:
        """Return every pair as a table; areas in m2."""
        import pandas as pd

        return pd.DataFrame(
            {
                "hanging_wall_sand": [p.hanging_wall_sand for p in self.pairs],
                "footwall_sand": [p.footwall_sand for p in self.pairs],
                "connected": [p.connected for p in self.pairs],
                "connected_single_plane": [p.connected_single_plane for p in self.pairs],
                "bottleneck_area": [p.bottleneck_area for p in self.pairs],
                "bottleneck_area_single_plane": [
                    p.bottleneck_area_single_plane for p in self.pairs
                ],
                "change": [p.change for p in self.pairs],
            }
        )

    def _repr_html_(self) -> str:
        changes = [pair.change for pair in self.pairs]
        table = self.answers_table().to_html(float_format=lambda value: f"{value:,.0f}")
        words = [
            f"{changes.count('gained')} pairs gained and {changes.count('lost')} lost against the "
            "single plane.",
            *(f"{sentence}." for sentence in self.warnings),
        ]
        told = "".join(f"<p>{escape(sentence)}</p>" for sentence in words)
        return f"<p><b>{escape(self.scenario.name)}</b></p>{table}{told}"

    def __repr__(self) -> str:
        return (
            f"<Study {self.scenario.name!r}: {len(self.connected_pairs)} of {len(self.pairs)} sand "
            f"pairs connect across {self.zone.strand_count} strands>"
        )


def study(scenario: Scenario, *, like: Study | None = None) -> Study:
    """Return a scenario's windows, network and answers, beside those of a single plane.

    Parameters
    ----------
    scenario : Scenario
    like : Study, optional
        An earlier study: its single plane is taken over if it has the same blocks at the same
        stations, as it has while only the throw split changes.
    """
    zone = FaultZone.from_scenario(scenario)
    answer = Answer.from_zone(zone)
    if like is not None and zone.has_same_walls(like.zone):
        single = like.single_plane
    else:
        single = Answer.from_zone(zone.single_plane())
    return Study(
        scenario=scenario,
        zone=zone,
        windows=answer.windows,
        network=answer.network,
        single_plane=single,
        pairs=tuple(_pairs(answer.network, single.network)),
    )


def _unused_parts(scenario: Scenario) -> list[str]:
    """Return the tables and keys of a scenario that juxtaposition alone does not look at."""
    tables = ("fault_rock", "fluid", "flow", "uncertainty", "evidence")
    unused = [f"[{name}]" for name in tables if getattr(scenario, name)]
    return [*unused, "strands.conduits"] if scenario.strands.conduits else unused


def _pairs(network: FaultNetwork, single: FaultNetwork) -> list[Pair]:
    """Return every pair of a hanging-wall and a footwall sand with both answers."""
    widths, widths_single = network.bottlenecks, single.bottlenecks
    pairs = []
    for upper, lower in product(network.sands, repeat=2):
        ends = node_id(HANGING_WALL, upper), node_id(FOOTWALL, lower)
        pairs.append(
            Pair(
                hanging_wall_sand=upper,
                footwall_sand=lower,
                connected=ends in widths,
                connected_single_plane=ends in widths_single,
                bottleneck_area=widths.get(ends, 0.0),
                bottleneck_area_single_plane=widths_single.get(ends, 0.0),
            )
        )
    return pairs
