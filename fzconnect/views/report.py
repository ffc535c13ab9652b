"""The report: one page, opened offline: what was asked, what came out and how to read it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from html import escape
from typing import TYPE_CHECKING, Any

import numpy as np

from fzconnect.network.export import CAUTION, summary
from fzconnect.views.faces import faces_figure
from fzconnect.views.look import number_text
from fzconnect.views.page import document, embedded, facts, listed, paragraph, table
from fzconnect.views.pairmatrix import outcome, pair_matrix_figure
from fzconnect.views.pathgraph import pathway_graph_figure
from fzconnect.views.section import section_figure
from fzconnect.views.strip import strip_figures

if TYPE_CHECKING:
    from bokeh.plotting import figure

    from fzconnect.geometry import FaultZone
    from fzconnect.network import Pair, RankedPathway, Study

__all__ = ["report_html"]

_MOST_PATHWAYS = 60
_MOST_WINDOWS = 150
_MOST_PAIRS = 120
_MOST_NAMES = 8
_PLACES = (0.5, 0.15, 0.85)
"""Where the sections stand, as parts of the fault's length; the first one is drawn large."""


def report_html(
    study: Study,
    ranked: Sequence[RankedPathway],
    *,
    title: str | None = None,
    inputs: Mapping[str, str] | None = None,
) -> str:
    """Return the report of a study as one HTML page that needs nothing from anywhere else.

    Parameters
    ----------
    study : Study
    ranked : sequence of RankedPathway
        As `Study.ranked_pathways` gives them.
    title : str, optional
        Heading of the page; default: the scenario's name.
    inputs : mapping, optional
        SHA-256 of each input file by name, for the record.

    Notes
    -----
    Long tables are cut, and a sentence says so; the CSV files beside the report hold every row.
    """
    zone, record = study.zone, summary(study, inputs=inputs)
    heading = title or zone.name
    plots, distances = _plots(study)
    script, place = embedded(plots)
    body = [
        paragraph("Fault-zone connectivity", "kicker"),
        f"<h1>{escape(heading)}</h1>",
        paragraph(_description(zone), "quiet"),
        paragraph(CAUTION, "caution"),
        *_answer(study),
        *_pictures(study, place, distances),
        *_pairs(study),
        *_pathways(ranked),
        *_windows(study),
        *_record(record),
        f"<footer>{paragraph(CAUTION)}</footer>",
    ]
    return document(f"{heading}: fault-zone connectivity", body, list(plots.values()), script)


def _plots(study: Study) -> tuple[dict[str, figure], list[float]]:
    """Return the figures by name, and the distances of the sections, m."""
    zone = study.zone
    first, length = float(zone.stations[0]), zone.length
    same = bool(np.ptp(zone.faces, axis=-1).max() < 1e-6)
    places = _PLACES[:1] if same else _PLACES
    # whole metres where the fault is long enough, so that the distance can be typed again
    distances = [float(round(first + part * length, 0 if length >= 10 else 3)) for part in places]
    count = len(zone.bodies)
    plots = {
        f"section {number}": section_figure(study, at, height=680 if number == 0 else 500).figure
        for number, at in enumerate(distances)
    }
    if zone.strand_count > 1:
        plots["upright"] = section_figure(study, distances[0], height=640, is_upright=True).figure
    plots["faces"] = faces_figure(study, distances[0], height=560).figure
    plots["graph"] = pathway_graph_figure(study, height=600).figure
    plots["pairs"] = pair_matrix_figure(study, height=170 + min(640, 30 * count)).figure
    for name in ("faces", "graph"):  # the page has its own headings
        heading: Any = plots[name].title
        heading.visible = False
    return plots, distances


def _description(zone: FaultZone) -> str:
    throw = float(max(zone.throw, key=abs))
    strands = _counted(zone.strand_count, "strand")
    return (
        f"{strands} dipping {zone.dip:g} degrees; {len(zone.layer_names)} layers with "
        f"{_counted(len(zone.bodies), 'sand body', 'sand bodies')}; {number_text(zone.length)} m "
        f"along the fault; throw of the whole zone up to {number_text(throw)} m."
    )


def _answer(study: Study) -> list[str]:
    """Return the question, the answer in a few sentences, the headline figures, the warnings."""
    zone, plane = study.counts("zone"), study.counts("single plane")
    strands = _counted(study.zone.strand_count, "strand")
    gained = [pair for pair in study.pairs if pair.change == "gained"]
    lost = [pair for pair in study.pairs if pair.change == "lost"]
    sentences = [
        f"{zone['connected_pairs']} of {len(study.pairs)} pairs of a hanging-wall and a footwall "
        f"sand connect across the zone; {plane['connected_pairs']} connect across a single plane "
        "with the same throw."
    ]
    side = " (hanging wall with footwall)"
    if gained:
        sentences.append(f"Only the zone connects {_names(gained)}{side}.")
    if lost:
        sentences.append(f"Only the single plane connects {_names(lost)}{side}.")
    if not gained and not lost:
        sentences.append("Both answers connect the same pairs.")
    boxes = [
        (one.label, one.value, (f"single plane: {one.single_plane}", one.note))
        for one in strip_figures(study)
    ]
    warnings = [
        f'<div class="warning">{paragraph(sentence[:1].upper() + sentence[1:] + ".")}</div>'
        for sentence in study.warnings
    ]
    return [
        "<h2>The question and the answer</h2>",
        paragraph(
            f"Which hanging-wall sands reach which footwall sands across a fault zone of {strands}"
            ", by which pathways and through which windows, and how does that differ from the same "
            "throw on a single plane?"
        ),
        paragraph(" ".join(sentences), "answer"),
        facts(boxes),
        *warnings,
        paragraph(
            "A pair connects if windows lead from the one sand to the other, through lenses and "
            "from sand to sand. A bottleneck is the least area that two sand bodies share on the "
            "widest pathway of a pair. A critical window is one whose closing alone separates a "
            "hanging-wall sand from a footwall sand.",
            "quiet",
        ),
    ]


def _pictures(study: Study, place: dict[str, str], distances: Sequence[float]) -> list[str]:
    """Return the figures, each with how to read it."""
    where = listed([f"{number_text(at)} m" for at in distances], 3)
    more = [place[f"section {number}"] for number in range(1, len(distances))]
    again = f'<div class="plots">{"".join(more)}</div>' if more else ""
    upright = place.get("upright", "")
    if upright:
        words = "The same section, strands upright and lenses widened, to see what touches what."
        upright = paragraph(words) + upright
    along = f"at {where} along the fault" if more else "anywhere along the fault: it is the same"
    return [
        f"<h2>Section across the zone</h2>{place['section 0']}",
        paragraph(
            f"The rock {along}. Sands are dotted and warm, shales grey. A thick violet line on a "
            "strand is a window: sand lies on both sides of it there. A dotted violet line is an "
            "unfaulted contact, where the strand has no throw. What stands above or below the "
            "layers is outside the column and unknown."
        ),
        upright,
        again,
        f"<h2>Strand faces</h2>{place['faces']}",
        paragraph(
            "Each frame looks straight at one strand, the whole length of the fault; the last one "
            "is the single plane with all the throw. Filled bands are sands on its footwall side, "
            "dashed outlines sands on its hanging-wall side. Where the two overlap, there is a "
            f"window. The upright line is the section at {number_text(distances[0])} m."
        ),
        f"<h2>Pathway graph</h2>{place['graph']}",
        paragraph(
            "Every bar is a sand body in one block, every line the windows between two of them "
            "over the whole length of the fault. Follow lines from the hanging wall to the "
            "footwall: that is a pathway. A diamond marks a critical window."
        ),
        f"<h2>Sand pairs</h2>{place['pairs']}",
        paragraph(
            "One cell for every hanging-wall sand (down) and footwall sand (across). A circle: "
            "connected in both answers. A plus: gained, only the zone connects them. A cross: "
            "lost, only the single plane does. A dot: neither."
        ),
    ]


def _pairs(study: Study) -> list[str]:
    told = [pair for pair in study.pairs if pair.connected or pair.connected_single_plane]
    if not told:
        return ["<h2>Table of sand pairs</h2>", paragraph("No pair connects in either answer.")]
    caption = f"The {len(told)} pairs that connect in either answer, of {len(study.pairs)}." + _cut(
        len(told), _MOST_PAIRS, "sand_pairs.csv"
    )
    columns = [
        ("Hanging-wall sand", "text"),
        ("Footwall sand", "text"),
        ("Outcome", "text"),
        ("Bottleneck, m²", "number"),
        ("Bottleneck, single plane, m²", "number"),
        ("Critical windows", "number"),
    ]
    rows = [
        (
            pair.hanging_wall_sand,
            pair.footwall_sand,
            outcome(pair),
            number_text(pair.bottleneck_area) if pair.connected else "none",
            number_text(pair.bottleneck_area_single_plane)
            if pair.connected_single_plane
            else "none",
            len(study.critical_windows(pair)),
        )
        for pair in told[:_MOST_PAIRS]
    ]
    return ["<h2>Table of sand pairs</h2>", table(columns, rows, caption=caption)]


def _pathways(ranked: Sequence[RankedPathway]) -> list[str]:
    if not ranked:
        return ["<h2>Pathways</h2>", paragraph("No pathway crosses the zone.")]
    # the best pathway of every pair comes before anybody's second
    shown = sorted(ranked, key=lambda one: one.rank)[:_MOST_PATHWAYS]
    caption = (
        "Pathways from hanging wall to footwall, the one of least resistance first for each pair. "
        "Resistance is the sum, over the crossings, of one over the area that two bodies share."
        + _cut(len(ranked), _MOST_PATHWAYS, "pathways.csv")
    )
    columns = [
        ("Hanging-wall sand", "text"),
        ("Footwall sand", "text"),
        ("Rank", "number"),
        ("Crossings", "number"),
        ("Bottleneck, m²", "number"),
        ("Pathway", "text"),
    ]
    rows = [
        (
            one.pair.hanging_wall_sand,
            one.pair.footwall_sand,
            one.rank,
            one.pathway.crossings,
            number_text(one.pathway.bottleneck_area),
            " → ".join(one.pathway.nodes),
        )
        for one in shown
    ]
    return ["<h2>Pathways</h2>", table(columns, rows, caption=caption)]


def _windows(study: Study) -> list[str]:
    frame = study.windows.table()
    if frame.empty:
        return ["<h2>Windows</h2>", paragraph("No sand meets a sand on any strand.")]
    largest = frame.sort_values("area", ascending=False, kind="stable").head(_MOST_WINDOWS)
    caption = "Windows and unfaulted contacts, strand by strand." + _cut(
        len(frame), _MOST_WINDOWS, "windows.csv", "the largest "
    )
    listing: Any = largest.sort_index().itertuples()
    columns = [
        ("Strand", "text"),
        ("Footwall side", "text"),
        ("Hanging-wall side", "text"),
        ("Along the fault, m", "number"),
        ("Depth, m", "number"),
        ("Greatest height, m", "number"),
        ("Area, m²", "number"),
        ("Contact", "text"),
    ]
    rows: list[tuple[Any, ...]] = [
        (
            row.strand_name,
            row.footwall_side_sand,
            row.hanging_wall_side_sand,
            f"{number_text(row.distance_from)} to {number_text(row.distance_to)}",
            f"{number_text(row.top)} to {number_text(row.base)}",
            f"{row.max_height:.1f}",
            number_text(row.area),
            row.contact,
        )
        for row in listing
    ]
    return ["<h2>Windows</h2>", table(columns, rows, caption=caption)]


def _record(record: Mapping[str, Any]) -> list[str]:
    """Return what is needed to make the same report again."""
    rows = [(f"file {name}", digest) for name, digest in record["inputs_sha256"].items()]
    rows.append(("scenario", record["scenario_sha256"]))
    versions = ", ".join(f"{name} {number}" for name, number in record["versions"].items())
    return [
        "<h2>Made from</h2>",
        paragraph(f"Made by {versions}."),
        table([("Input", "text"), ("SHA-256", "code")], rows),
    ]


def _names(pairs: Sequence[Pair]) -> str:
    names = [f"{pair.hanging_wall_sand} with {pair.footwall_sand}" for pair in pairs]
    return listed(names, _MOST_NAMES)


def _cut(count: int, most: int, file: str, which: str = "") -> str:
    """Return the sentence that owns up to a cut table, empty if nothing is cut."""
    if count <= most:
        return ""
    return f" Shown are {which or 'the first '}{most} of {count}; {file} holds them all."


def _counted(count: int, one: str, many: str = "") -> str:
    return f"{count} {one if count == 1 else many or one + 's'}"
