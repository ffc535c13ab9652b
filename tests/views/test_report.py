from __future__ import annotations

import re
from html.parser import HTMLParser

import pytest

from fzconnect.network import Study, study
from fzconnect.network.export import CAUTION
from fzconnect.scenario import Column, Layer, Scenario, Strands, Throw
from fzconnect.views import report_html
from fzconnect.views.page import listed
from fzconnect.views.strip import strip_figures

FETCHES = ("src", "href", "data", "action", "poster", "srcset")


class _Reader(HTMLParser):
    """Collect what a page would fetch, its scripts' count and its visible words."""

    def __init__(self) -> None:
        super().__init__()
        self.fetched: list[str] = []
        self.words: list[str] = []
        self.tags: list[str] = []
        self._hidden = 0

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append(tag)
        self._hidden += tag in ("script", "style")
        self.fetched += [f"{name}={value}" for name, value in attrs if name in FETCHES]

    def handle_endtag(self, tag: str) -> None:
        self._hidden -= tag in ("script", "style")

    def handle_data(self, data: str) -> None:
        if not self._hidden:
            self.words.append(data)


def _read(page: str) -> _Reader:
    reader = _Reader()
    reader.feed(page)
    return reader


@pytest.fixture(scope="module")
def page(quillmere: Study) -> str:
    ranked = quillmere.ranked_pathways()
    return report_html(quillmere, ranked, inputs={"scenario.toml": "0f" * 32})


def test_the_report_fetches_nothing(page: str) -> None:
    assert _read(page).fetched == []
    assert not re.search(r"@import|url\(\s*['\"]?https?:", page)
    assert "cdn.bokeh.org" not in page.split("</style>")[0]


def test_the_report_says_what_it_must(page: str, quillmere: Study) -> None:
    text = " ".join(" ".join(_read(page).words).split())
    assert text.count(CAUTION) == 2
    assert text.index(CAUTION) < text.index("The question and the answer")
    zone, plane = quillmere.counts("zone"), quillmere.counts("single plane")
    assert f"{zone['connected_pairs']} of {len(quillmere.pairs)} pairs" in text
    assert f"{plane['connected_pairs']} connect across a single plane" in text
    assert "S8 with S8" in text  # gained
    for one in strip_figures(quillmere):
        figures = (one.label, one.value, f"single plane: {one.single_plane}", one.note)
        assert " ".join(" ".join(figures).split()) in text
    for sentence in quillmere.warnings:
        assert sentence[1:] in text
    assert "0f" * 32 in text
    assert quillmere.scenario.fingerprint() in text
    assert "bottleneck" in text
    assert "The rock at 1 550 m, 465 m and 2 635 m along the fault" in text


def test_long_tables_are_cut_and_say_so(page: str, quillmere: Study) -> None:
    ranked = quillmere.ranked_pathways()
    assert len(ranked) > 60
    assert f"Shown are the first 60 of {len(ranked)}; pathways.csv holds them all." in page
    pathways = page.split("<h2>Pathways</h2>")[1].split("</table>")[0]
    assert pathways.count("<tr>") == 61
    windows = page.split("<h2>Windows</h2>")[1].split("</table>")[0]
    assert windows.count("<tr>") == len(quillmere.windows) + 1


def test_names_cannot_break_the_page() -> None:
    nasty = "</script><script>alert(1)</script>"
    layers = (
        Layer(name="M1", thickness=100, vsh=0.8),
        Layer(name=nasty, thickness=40, vsh=0.1),
        Layer(name="<b>&amp;", thickness=100, vsh=0.8),
    )
    scenario = Scenario(
        name=f"{nasty} & co",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=30),
        strands=Strands(count=2, lens_width=(10,)),
    )
    found = study(scenario)
    page = report_html(found, found.ranked_pathways())
    plain = _read(report_html(*_harmless()))
    reader = _read(page)
    assert "alert(1)" in " ".join(reader.words)
    assert reader.tags.count("script") == plain.tags.count("script")
    assert "<script>alert" not in page
    assert "<b>&amp;" not in page.replace("&lt;b&gt;&amp;amp;", "")


def _harmless() -> tuple[Study, list[object]]:
    layers = (
        Layer(name="M1", thickness=100, vsh=0.8),
        Layer(name="S1", thickness=40, vsh=0.1),
        Layer(name="M2", thickness=100, vsh=0.8),
    )
    scenario = Scenario(
        name="plain",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=30),
        strands=Strands(count=2, lens_width=(10,)),
    )
    found = study(scenario)
    return found, list(found.ranked_pathways())


def test_a_study_without_any_window_has_a_report() -> None:
    layers = (
        Layer(name="M1", thickness=100, vsh=0.8),
        Layer(name="S1", thickness=10, vsh=0.1),
        Layer(name="M2", thickness=100, vsh=0.8),
    )
    scenario = Scenario(
        name="closed",
        column=Column(layers=layers, top=1000),
        throw=Throw(total=60),
        strands=Strands(count=1, lens_width=()),
    )
    found = study(scenario)
    text = " ".join(_read(report_html(found, [], title="Another heading")).words)
    assert "Another heading" in text
    assert "No pair connects in either answer." in text
    assert "No pathway crosses the zone." in text
    assert "No sand meets a sand on any strand." in text


def test_lists_are_cut_with_a_count() -> None:
    assert listed([], 3) == ""
    assert listed(["a"], 3) == "a"
    assert listed(["a", "b"], 3) == "a and b"
    assert listed(list("abcde"), 3) == "a, b, c and 2 more"
