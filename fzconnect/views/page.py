"""Building blocks of a page that stands alone: style, tables and scripts, nothing fetched."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from html import escape
from typing import Any

from bokeh.document import Document
from bokeh.embed import components
from bokeh.embed.bundle import bundle_for_objs_and_resources
from bokeh.plotting import figure
from bokeh.resources import INLINE

from fzconnect.views.palette import ACCENT, ACCENT_DEEP, INK, QUIET, RULE

__all__ = ["document", "embedded", "facts", "listed", "paragraph", "table"]

_STYLE = f"""
:root {{ color-scheme: light; }}
* {{ box-sizing: border-box; }}
body {{ margin: 0; background: #F6F5F8; color: {INK};
  font: 17px/1.5 "Source Sans Pro", "Segoe UI", "Helvetica Neue", Arial, sans-serif; }}
main {{ max-width: 1120px; margin: 0 auto; padding: 36px 40px 48px; background: #FFF; }}
h1 {{ font-size: 34px; line-height: 1.15; margin: 0 0 6px; letter-spacing: -0.01em;
  overflow-wrap: anywhere; }}
h2 {{ font-size: 22px; line-height: 1.25; margin: 44px 0 8px; padding-top: 14px;
  border-top: 2px solid {INK}; }}
p {{ margin: 0 0 12px; max-width: 76ch; overflow-wrap: anywhere; }}
.kicker {{ color: {ACCENT}; font-weight: 700; font-size: 15px; margin: 0 0 10px; }}
.quiet {{ color: {QUIET}; }}
.caution {{ border-left: 5px solid {INK}; background: #F1EFF4; padding: 10px 16px;
  margin: 18px 0; max-width: none; }}
.warning {{ border: 2px solid {ACCENT_DEEP}; padding: 10px 16px; margin: 12px 0; }}
.warning p {{ margin: 0; max-width: none; }}
.answer {{ font-size: 20px; line-height: 1.45; }}
.figures {{ display: grid; grid-template-columns: repeat(auto-fit, minmax(215px, 1fr));
  gap: 14px; margin: 20px 0; }}
.figures div {{ border: 1px solid {RULE}; border-top: 4px solid {ACCENT};
  padding: 10px 14px 12px; }}
.figures dt {{ font-size: 15px; color: {QUIET}; line-height: 1.3; }}
.figures dd {{ margin: 4px 0 0; font-size: 28px; font-weight: 700; line-height: 1.15; }}
.figures dd.beside {{ font-size: 15px; font-weight: 400; line-height: 1.4; }}
.plots {{ display: grid; grid-template-columns: repeat(auto-fit, minmax(440px, 1fr)); gap: 8px; }}
.plot {{ margin: 12px 0 4px; min-width: 0; }}
.scroll {{ overflow-x: auto; margin: 12px 0; }}
table {{ border-collapse: collapse; width: 100%; font-size: 15px; line-height: 1.35;
  font-variant-numeric: tabular-nums; }}
th {{ text-align: left; vertical-align: bottom; font-weight: 700; padding: 6px 18px 6px 0;
  border-bottom: 2px solid {INK}; }}
td {{ padding: 5px 18px 5px 0; border-bottom: 1px solid {RULE}; vertical-align: top; }}
th.number, td.number {{ text-align: right; white-space: nowrap; }}
td.code {{ font: 13px/1.5 ui-monospace, Consolas, "DejaVu Sans Mono", monospace;
  overflow-wrap: anywhere; }}
footer {{ margin-top: 44px; padding-top: 14px; border-top: 2px solid {INK}; font-size: 15px; }}
@media (max-width: 860px) {{ main {{ padding: 22px 18px 36px; }} h1 {{ font-size: 28px; }} }}
@media print {{
  body {{ background: #FFF; font-size: 15px; }}
  main {{ max-width: none; padding: 0; }}
  h2, h3 {{ break-after: avoid; }}
  .plot, .figures, .caution, .warning, tr {{ break-inside: avoid; }}
  .plots {{ display: block; }}
  thead {{ display: table-header-group; }}
}}
"""


def document(title: str, body: Iterable[str], plots: Sequence[figure], script: str) -> str:
    """Return a whole page with the plotting library inside it.

    Parameters
    ----------
    title : str
        Plain text.
    body : iterable of str
        HTML.
    plots : sequence of bokeh figures
        Those that `script` draws.
    script : str
        As `embedded` gives it.
    """
    library = bundle_for_objs_and_resources(list(plots), INLINE)
    scripts = "\n".join(f"<script>\n{source}\n</script>" for source in library.js_raw)
    styles = "\n".join(library.css_raw)
    content = "\n".join(body)
    return (
        '<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n'
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n'
        f"<title>{escape(title)}</title>\n<style>{styles}{_STYLE}</style>\n"
        f"</head>\n<body>\n<main>\n{content}\n</main>\n{scripts}\n{script}\n"
        "</body>\n</html>\n"
    )


def embedded(plots: Mapping[str, figure]) -> tuple[str, dict[str, str]]:
    """Return the script that draws figures and, by name, the HTML that holds their places."""
    together = Document()
    with together.models.freeze():  # one walk over all models instead of one a figure
        for plot in plots.values():
            together.add_root(plot)
    script, places = components(dict(plots))
    held = {name: f'<div class="plot">{place}</div>' for name, place in places.items()}
    return script, held


def paragraph(text: str, kind: str = "") -> str:
    """Return a paragraph of plain text."""
    return f'<p class="{kind}">{escape(text)}</p>' if kind else f"<p>{escape(text)}</p>"


def facts(rows: Iterable[tuple[str, str, Sequence[str]]]) -> str:
    """Return figures to be read at a glance: what, how much, and lines that stand below it."""
    boxes = "".join(
        f"<div><dt>{escape(what)}</dt><dd>{escape(value)}</dd>"
        + "".join(f'<dd class="beside">{escape(line)}</dd>' for line in lines)
        + "</div>"
        for what, value, lines in rows
    )
    return f'<dl class="figures">{boxes}</dl>'


def table(
    columns: Sequence[tuple[str, str]], rows: Iterable[Sequence[Any]], *, caption: str = ""
) -> str:
    """Return a table.

    Parameters
    ----------
    columns : sequence of (str, str)
        Heading and kind of each: "text", "number" or "code".
    rows : iterable of sequences
        Cells, plain text.
    caption : str
        A sentence above the table.
    """
    head = "".join(f'<th class="{kind}" scope="col">{escape(name)}</th>' for name, kind in columns)
    body = "\n".join(
        "<tr>"
        + "".join(
            f'<td class="{kind}">{escape(str(cell))}</td>'
            for cell, (_, kind) in zip(row, columns, strict=True)
        )
        + "</tr>"
        for row in rows
    )
    above = paragraph(caption, "quiet") if caption else ""
    return (
        f'{above}<div class="scroll"><table><thead><tr>{head}</tr></thead>\n'
        f"<tbody>\n{body}\n</tbody></table></div>"
    )


def listed(words: Sequence[str], most: int) -> str:
    """Return words in a row, "a, b and c", cut after `most` with a count of the rest.

    Examples
    --------
    >>> listed(["a", "b", "c"], 5), listed(["a", "b", "c", "d"], 2)
    ('a, b and c', 'a, b and 2 more')
    """
    shown = list(words[:most])
    if len(words) > most:
        shown.append(f"{len(words) - most} more")
    return " and ".join([", ".join(shown[:-1]), shown[-1]] if len(shown) > 1 else shown)
