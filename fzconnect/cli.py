"""The command `fzconnect`: study a scenario, open the notebooks, start a new scenario.

Exit codes: 0 done, 2 something in the input or the output folder is not as it must be (one
sentence says what), 130 stopped from the keyboard, 1 a fault in fzconnect itself.
"""

from __future__ import annotations

import argparse
import importlib.util
import os
import re
import subprocess
import sys
import traceback
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from fzconnect import __version__
from fzconnect.errors import FzconnectError

if TYPE_CHECKING:
    from fzconnect.network import Study

__all__ = ["main"]

_DEMO = Path(__file__).parent / "data" / "quillmere" / "scenario.toml"

_LAB = ("jupyterlab", "ipywidgets", "jupyter_bokeh")

_NAMED_PAIRS = 12
"""How many gained or lost pairs the printed table names before it only counts them."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):  # what a terminal cannot show must not end the work
            stream.reconfigure(errors="replace")
    options = _parser().parse_args(arguments)
    try:
        code: int = options.run(options)
    except FzconnectError as error:
        print(f"fzconnect: {error}", file=sys.stderr)
        return 2
    except KeyboardInterrupt:
        print("fzconnect: stopped; nothing half-written was left behind", file=sys.stderr)
        return 130
    except BrokenPipeError:  # the reader of our output, such as `head`, has gone away
        # else Python, at its end, would stumble over what is still to be printed
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 1
    except OSError as error:
        place = f"{error.filename}: " if error.filename else ""
        print(f"fzconnect: {place}{error.strerror or error}", file=sys.stderr)
        return 2
    except Exception as error:
        if options.debug:
            traceback.print_exc()
        print(
            f"fzconnect: a fault in fzconnect itself, not in your files: {type(error).__name__}: "
            f"{error} (run `fzconnect --debug ...` to see where, and report it)",
            file=sys.stderr,
        )
        return 1
    return code


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="fzconnect",
        description="Which sands connect across a fault zone of several strands, and which across "
        "one plane with the same throw.",
        epilog="A screening aid: no substitute for site data, local codes and licensed practice.",
    )
    parser.add_argument("--version", action="version", version=f"fzconnect {__version__}")
    parser.add_argument("--debug", action="store_true", help="show where a fault in fzconnect lies")
    commands = parser.add_subparsers(title="commands", required=True, metavar="COMMAND")

    study = commands.add_parser("study", help="study a scenario: table, files and report")
    study.add_argument(
        "scenario",
        nargs="?",
        type=Path,
        help="scenario file (TOML); without one, the Quillmere demo is studied",
    )
    study.add_argument(
        "--out", type=Path, help="folder for the results; without one, NAME-study in this folder"
    )
    study.add_argument(
        "--overwrite",
        action="store_true",
        help="replace the folder even if fzconnect did not write it",
    )
    study.add_argument(
        "--pathways",
        type=_positive,
        default=3,
        metavar="N",
        help="pathways to list for each connected pair (3)",
    )
    study.set_defaults(run=_study)

    lab = commands.add_parser(
        "lab", help="copy the notebooks to a folder and open JupyterLab there"
    )
    lab.add_argument("folder", nargs="?", type=Path, default=Path("fzconnect-notebooks"))
    lab.add_argument("--no-open", action="store_true", help="copy the notebooks and stop there")
    lab.set_defaults(run=_lab)

    new = commands.add_parser("new", help="write a commented starter scenario with its tables")
    new.add_argument("folder", type=Path)
    new.set_defaults(run=_new)
    return parser


def _positive(text: str) -> int:
    if not text.isdecimal() or int(text) < 1:
        msg = f"must be a whole number of at least 1, got {text}"
        raise argparse.ArgumentTypeError(msg)
    return int(text)


def _study(options: argparse.Namespace) -> int:
    from fzconnect.output import write_study
    from fzconnect.scenario import input_files, load

    path = options.scenario or _DEMO
    scenario = load(path)
    out = options.out or Path(f"{_slug(scenario.name)}-study")
    write_study(
        scenario,
        out,
        inputs=input_files(path),
        overwrite=options.overwrite,
        per_pair=options.pathways,
        show=lambda study: print(answer_text(study)),
    )
    print(f"\nWritten to {out}: open {out / 'report.html'} for the pictures.")
    return 0


def answer_text(study: Study) -> str:
    """Return the table of answers, zone beside single plane, as lines of text."""
    zone, counts, single = study.zone, study.counts("zone"), study.counts("single plane")
    total = len(study.pairs)
    throw = max(zone.throw, key=abs)
    rows = [
        ("strands", f"{counts['strands']}", f"{single['strands']}"),
        (
            "connected sand pairs",
            f"{counts['connected_pairs']} of {total}",
            f"{single['connected_pairs']} of {total}",
        ),
        ("windows", f"{counts['windows']}", f"{single['windows']}"),
        (
            "unfaulted contacts",
            f"{counts['unfaulted_contacts']}",
            f"{single['unfaulted_contacts']}",
        ),
        ("window area, m2", _area(counts["window_area"]), _area(single["window_area"])),
        (
            "widest bottleneck, m2",
            _area(counts["widest_bottleneck"]),
            _area(single["widest_bottleneck"]),
        ),
        ("critical windows", f"{counts['critical_windows']}", f"{single['critical_windows']}"),
    ]
    lines = [
        zone.name,
        f"{len(zone.layer_names)} layers, {len(zone.bodies)} sand bodies, {zone.length:,.0f} m of "
        f"fault, greatest throw {throw:,.1f} m",
        "",
        f"{'':24}{'zone':>16}{'single plane':>16}",
        *(f"{label:24}{first:>16}{second:>16}" for label, first, second in rows),
        "",
        _changes(study, "gained", "Connected only across the zone"),
        _changes(study, "lost", "Connected only across a single plane"),
        *(f"Warning: {sentence}." for sentence in study.warnings),
        "",
        "A screening aid: no substitute for site data, local codes and licensed practice.",
    ]
    return "\n".join(lines)


def _changes(study: Study, change: str, label: str) -> str:
    """Return one line that names the pairs gained or lost, hanging wall first."""
    names = [
        f"{pair.hanging_wall_sand} - {pair.footwall_sand}"
        for pair in study.pairs
        if pair.change == change
    ]
    if not names:
        return f"{label}: none."
    more = f" and {len(names) - _NAMED_PAIRS} more" if len(names) > _NAMED_PAIRS else ""
    return (
        f"{label} (hanging wall - footwall), {len(names)}: {', '.join(names[:_NAMED_PAIRS])}{more}."
    )


def _area(area: float) -> str:
    return f"{area:,.0f}" if area >= 100 else f"{area:.3g}"


def _lab(options: argparse.Namespace) -> int:
    missing = [name for name in _LAB if importlib.util.find_spec(name) is None]
    if missing:
        msg = f"the notebooks need {' and '.join(missing)}: python -m pip install 'fzconnect[lab]'"
        raise FzconnectError(msg)
    from fzconnect.scenario.store import create_folder, write_file

    folder: Path = options.folder
    books = {path.name: path.read_bytes() for path in notebooks()}
    kept = [name for name in books if (folder / name).exists()]
    if os.path.lexists(folder):
        for name in books.keys() - set(kept):
            write_file(folder / name, books[name])
    else:
        create_folder(folder, books)
    for name in books:
        fate = "kept, which is there already:" if name in kept else "copied"
        print(f"{fate} {folder / name}")
    return 0 if options.no_open else _open_lab(folder)


def _open_lab(folder: Path) -> int:
    """Run JupyterLab on a folder until it ends; return its exit code."""
    lab = subprocess.Popen([sys.executable, "-m", "jupyterlab", str(folder)])
    while True:
        try:
            return lab.wait()
        except KeyboardInterrupt:
            # The key reaches JupyterLab too, which asks whether to stop, and ends or goes on.
            continue


def notebooks() -> list[Path]:
    """Return the notebooks' paths: inside an installed package, or beside it in a checkout."""
    package = Path(__file__).parent
    for folder in (package / "notebooks", package.parent / "notebooks"):
        found = sorted(folder.glob("*.ipynb"))
        if found:
            return found
    msg = f"no notebooks were found in {package / 'notebooks'}: install fzconnect again"
    raise FzconnectError(msg)


def _new(options: argparse.Namespace) -> int:
    from fzconnect.scenario import starter_files
    from fzconnect.scenario.store import create_folder

    folder: Path = options.folder
    files = starter_files()
    create_folder(folder, files)
    for name in files:
        print(f"wrote {folder / name}")
    print(f"\nEdit them, then run: fzconnect study {folder / 'scenario.toml'}")
    return 0


def _slug(name: str) -> str:
    """Return a folder name made of a scenario's name."""
    return re.sub(r"[^a-z0-9]+", "-", name.lower()).strip("-") or "scenario"


if __name__ == "__main__":
    sys.exit(main())
