"""The files that carry a study to other programs; their columns keep their names and meaning.

Later columns are added at the end. An unknown value is an empty cell, never NaN.
"""

from __future__ import annotations

import json
import platform
from collections.abc import Callable, Mapping
from importlib.metadata import version
from io import BytesIO
from typing import TYPE_CHECKING, Any

import networkx as nx

from fzconnect import __version__
from fzconnect.network.pathway import Pathway

if TYPE_CHECKING:
    import pandas as pd

    from fzconnect.network.study import Pair, Study

__all__ = [
    "CAUTION",
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

Progress = Callable[[str, int, int], None]


def study_files(
    study: Study,
    *,
    inputs: Mapping[str, str] | None = None,
    per_pair: int = 3,
    progress: Progress | None = None,
) -> dict[str, str | bytes]:
    """Return the output files of a study, by name, without the report.

    Parameters
    ----------
    study : Study
    inputs : mapping, optional
        SHA-256 of each input file by name, for the record.
    per_pair : int
        How many pathways to list for each connected pair.
    progress : callable, optional
        Called with (what, done, in all).

    Notes
    -----
    `windows.csv`, `sand_pairs.csv`, `pathways.csv`, `network.graphml`, `network.json` (node-link)
    and `summary.json`.
    """
    say = progress or (lambda what, done, total: None)
    ranked = study.pathways(
        per_pair=per_pair, progress=lambda done, total: say("pathways", done, total)
    )
    pairs = sand_pairs_table(study, progress=lambda done, total: say("sand pairs", done, total))
    return {
        "windows.csv": _csv(study.windows.table()),
        "sand_pairs.csv": _csv(pairs),
        "pathways.csv": _csv(pathways_table(ranked)),
        "network.graphml": graphml_bytes(study.network.graph),
        "network.json": node_link_json(study.network.graph),
        "summary.json": json.dumps(summary(study, inputs=inputs), indent=2, allow_nan=False) + "\n",
    }


def sand_pairs_table(
    study: Study, *, progress: Callable[[int, int], None] | None = None
) -> pd.DataFrame:
    """Return one row for every pair, with minimum cuts and critical windows; areas in m2.

    The columns for transmissibility are empty: flow is not worked out here.
    """
    table = study.pairs_table()
    network, areas = study.network, study.network.cut_areas
    cuts, critical, crossings = [], [], []
    for done, pair in enumerate(study.pairs, start=1):
        ends = pair.hanging_wall_sand, pair.footwall_sand
        cuts.append(areas.get(network.ends(*ends), 0.0))
        critical.append(len(study.critical_windows(pair)))
        best = next(network.pathways(*ends, limit=1), None)
        crossings.append(best.crossings if best else None)
        if progress:
            progress(done, len(study.pairs))
    table.insert(5, "transmissibility_low", "")
    table.insert(6, "transmissibility_high", "")
    table["minimum_cut_area"] = cuts
    table["critical_windows"] = critical
    table["crossings"] = _integers(crossings)
    return table


def _integers(values: list[int | None]) -> pd.Series[Any]:
    """Return whole numbers with gaps as a series that writes gaps as empty cells."""
    import pandas as pd

    return pd.Series(values, dtype="Int64")


def pathways_table(ranked: list[tuple[Pair, int, Pathway]]) -> pd.DataFrame:
    """Return one row a pathway, as ranked by `Study.pathways`; areas in m2, resistance in 1/m2."""
    import pandas as pd

    return pd.DataFrame(
        [
            {
                "hanging_wall_sand": pair.hanging_wall_sand,
                "footwall_sand": pair.footwall_sand,
                "rank": rank,
                "crossings": pathway.crossings,
                "bottleneck_area": pathway.bottleneck_area,
                "bottleneck_strand": pathway.bottleneck_strand,
                "resistance": pathway.resistance,
                "pathway": str(pathway),
            }
            for pair, rank, pathway in ranked
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


def _versions() -> dict[str, str]:
    libraries = {name: version(name) for name in ("networkx", "numba", "numpy")}
    return {"fzconnect": __version__, "python": platform.python_version(), **libraries}


def _csv(table: pd.DataFrame) -> str:
    """Return a table as CSV with true/false for booleans and every digit of a number."""
    plain = table.copy()
    for name in plain.columns:
        if plain[name].dtype == bool:
            plain[name] = plain[name].map({True: "true", False: "false"})
    return str(plain.to_csv(index=False, lineterminator="\n"))
