"""The files that carry a study to other programs; their columns keep their names and meaning.

Later columns are added at the end. An unknown value is an empty cell, never NaN.
"""

from __future__ import annotations

import json
import os
import platform
from collections.abc import Mapping, Sequence
from importlib.metadata import version
from io import BytesIO
from pathlib import Path
from typing import TYPE_CHECKING, Any

import networkx as nx

from fzconnect.errors import OutputError
from fzconnect.scenario.store import write_file

if TYPE_CHECKING:
    import pandas as pd

    from fzconnect.network.graph import FaultNetwork
    from fzconnect.network.result import RankedPathway, Study

__all__ = [
    "CAUTION",
    "export_graph",
    "graphml_bytes",
    "node_link_json",
    "pathways_table",
    "sand_pairs_table",
    "study_files",
    "summary",
]

CAUTION = (
    "A screening aid: no substitute for site data, local codes and the judgement of licensed "
    "practitioners."
)


def study_files(
    study: Study,
    ranked: Sequence[RankedPathway],
    *,
    inputs: Mapping[str, str] | None = None,
) -> dict[str, str | bytes]:
    """Return the output files of a study, by name, without the report.

    Parameters
    ----------
    study : Study
    ranked : sequence of RankedPathway
        As `Study.ranked_pathways` gives them.
    inputs : mapping, optional
        SHA-256 of each input file by name, for the record.

    Notes
    -----
    `windows.csv`, `sand_pairs.csv`, `pathways.csv`, `network.graphml`, `network.json` (node-link)
    and `summary.json`.
    """
    return {
        "windows.csv": _csv(study.windows.table()),
        "sand_pairs.csv": _csv(sand_pairs_table(study, ranked)),
        "pathways.csv": _csv(pathways_table(ranked)),
        "network.graphml": graphml_bytes(study.network.graph),
        "network.json": node_link_json(study.network.graph),
        "summary.json": json.dumps(summary(study, inputs=inputs), indent=2, allow_nan=False) + "\n",
    }


def sand_pairs_table(study: Study, ranked: Sequence[RankedPathway]) -> pd.DataFrame:
    """Return one row for every pair, with minimum cuts and critical windows; areas in m2.

    The columns for transmissibility are empty: flow is not worked out here.
    """
    table = study.pairs_table()
    network, areas = study.network, study.network.cut_areas
    best = {one.pair: one.pathway.crossings for one in ranked if one.rank == 1}
    ends = [network.ends(pair.hanging_wall_sand, pair.footwall_sand) for pair in study.pairs]
    table.insert(5, "transmissibility_low", "")
    table.insert(6, "transmissibility_high", "")
    table["minimum_cut_area"] = [areas.get(pair, 0.0) for pair in ends]
    table["critical_windows"] = [len(study.critical_windows(pair)) for pair in study.pairs]
    table["crossings"] = [best.get(pair, "") for pair in study.pairs]
    return table


def pathways_table(ranked: Sequence[RankedPathway]) -> pd.DataFrame:
    """Return one row a pathway; areas in m2, resistance in 1/m2."""
    import pandas as pd

    return pd.DataFrame(
        [
            {
                "hanging_wall_sand": one.pair.hanging_wall_sand,
                "footwall_sand": one.pair.footwall_sand,
                "rank": one.rank,
                "crossings": one.pathway.crossings,
                "bottleneck_area": one.pathway.bottleneck_area,
                "bottleneck_strand": one.pathway.bottleneck_strand,
                "resistance": one.pathway.resistance,
                "pathway": str(one.pathway),
            }
            for one in ranked
        ],
        columns=[
            "hanging_wall_sand",
            "footwall_sand",
            "rank",
            "crossings",
            "bottleneck_area",
            "bottleneck_strand",
            "resistance",
            "pathway",
        ],
    )


def graphml_bytes(graph: nx.Graph[str]) -> bytes:
    """Return a network as GraphML (http://graphml.graphdrawing.org), UTF-8."""
    buffer = BytesIO()
    nx.write_graphml(graph, buffer)
    return buffer.getvalue()


def node_link_json(graph: nx.Graph[str]) -> str:
    """Return a network as node-link JSON, as networkx reads it with `edges="edges"`."""
    data = nx.node_link_data(graph, edges="edges")
    return json.dumps(data, indent=1, allow_nan=False) + "\n"


def summary(study: Study, *, inputs: Mapping[str, str] | None = None) -> dict[str, Any]:
    """Return what `summary.json` holds: counts, both answers, warnings, versions and inputs."""
    zone = study.zone
    changes = [pair.change for pair in study.pairs]
    return {
        "format": "fzconnect summary",
        "format_version": 1,
        "name": zone.name,
        "caution": CAUTION,
        "layers": len(zone.layer_names),
        "sand_bodies": len(zone.bodies),
        "stations": len(zone.stations),
        "length": zone.length,
        "greatest_throw": float(max(zone.throw, key=abs)),
        "sand_pairs": len(study.pairs),
        "zone": study.counts("zone"),
        "single_plane": study.counts("single plane"),
        "pairs_gained": changes.count("gained"),
        "pairs_lost": changes.count("lost"),
        "warnings": list(study.warnings),
        "versions": _versions(),
        "scenario_sha256": study.scenario.fingerprint(),
        "inputs_sha256": dict(inputs or {}),
    }


def export_graph(network: FaultNetwork, path: str | os.PathLike[str]) -> Path:
    """Write a network as GraphML or node-link JSON, by the path's ending; return the path.

    Raises
    ------
    OutputError
        If the ending is neither .graphml nor .json, or the file cannot be written; an old file is
        then as it was.
    """
    target = Path(path)
    if target.suffix == ".graphml":
        return write_file(target, graphml_bytes(network.graph))
    if target.suffix == ".json":
        return write_file(target, node_link_json(network.graph))
    msg = f"{target}: ends in {target.suffix or 'nothing'!r}, expected .graphml or .json"
    raise OutputError(msg)


def _versions() -> dict[str, str]:
    from fzconnect import __version__  # here: the package names lead back to this room

    libraries = {name: version(name) for name in ("networkx", "numba", "numpy")}
    return {"fzconnect": __version__, "python": platform.python_version(), **libraries}


def _csv(table: pd.DataFrame) -> str:
    """Return a table as CSV with true/false for booleans and every digit of a number."""
    plain = table.copy()
    for name in plain.columns:
        if plain[name].dtype == bool:
            plain[name] = plain[name].map({True: "true", False: "false"})
    return str(plain.to_csv(index=False, lineterminator="\n"))
