"""The command `fzconnect`: study a scenario, open the notebooks, start a new scenario.

Exit codes: 0 done, 2 something in the input or the output folder is not as it must be (one
sentence says what), 130 stopped from the keyboard, 1 a fault in fzconnect itself.
"""

from __future__ import annotations

import argparse
import importlib.util
import re
import subprocess
import sys
import traceback
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from fzconnect import __version__
from fzconnect.errors import FzconnectError

if TYPE_CHECKING:
    from fzconnect.network import Study
    from fzconnect.scenario import Scenario

__all__ = ["main"]

_DEMO = Path(__file__).parent / "data" / "quillmere" / "scenario.toml"

_NAMED_PAIRS = 12
"""How many gained or lost pairs the printed table names before it only counts them."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command and return its exit code."""
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
        sys.stderr.close()
        return 1
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
        show=print,
    )
    print(f"\nWritten to {out}: open {out / 'report.html'} for the pictures.")
    return 0


def write_study(
    scenario: Scenario,
    out: str | Path,
    *,
    inputs: Mapping[str, str] | None = None,
    overwrite: bool = False,
    per_pair: int = 3,
    show: Callable[[str], None] | None = None,
    progress: bool = True,
) -> Study:
    """Study a scenario, write every result file and the report to a folder, return the study.

    Parameters
    ----------
    scenario : Scenario
    out : path
        Folder to write; one written before by fzconnect is replaced.
    inputs : mapping, optional
        SHA-256 of each input file by name, for the record.
    overwrite : bool
        Replace the folder even if fzconnect did not write it.
    per_pair : int
        Pathways to list for each connected pair.
    show : callable, optional
        Called with the table of answers, as text, before the files are made.
    progress : bool
        Whether work that takes over a second shows how far it is, on the error stream.

    Raises
    ------
    OutputError
        If the folder must not or cannot be written; nothing is left half-written.
    """
    from fzconnect.network import study, study_files
    from fzconnect.scenario.store import check_folder, write_folder
    from fzconnect.views import report_html

    check_folder(out, overwrite=overwrite)
    with _Progress("windows and network", is_shown=progress) as step:
        result = study(scenario)
        step(1, 1)
    if show:
        show(answer_text(result))
    with _Progress("pathways", is_shown=progress) as step:
        ranked = result.ranked_pathways(per_pair=per_pair, progress=step)
    with _Progress("files and report", is_shown=progress) as step:
        files = study_files(result, ranked, inputs=inputs)
        step(1, 2)
        files["report.html"] = report_html(result, ranked, inputs=inputs)
        step(2, 2)
    write_folder(out, files, overwrite=overwrite)
    return result


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
        ("window area, m2", f"{counts['window_area']:,.0f}", f"{single['window_area']:,.0f}"),
        (
            "widest bottleneck, m2",
            f"{counts['widest_bottleneck']:,.0f}",
            f"{single['widest_bottleneck']:,.0f}",
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


class _Progress:
    """A progress bar on the error stream that shows itself only after a second."""

    def __init__(self, what: str, *, is_shown: bool) -> None:
        from tqdm import tqdm

        self._bar = tqdm(
            total=1, desc=what, delay=1.0, leave=False, file=sys.stderr, disable=not is_shown
        )

    def __enter__(self) -> _Progress:
        return self

    def __call__(self, done: int, total: int) -> None:
        self._bar.total = total
        self._bar.update(done - self._bar.n)

    def __exit__(self, *_: object) -> None:
        self._bar.close()


def _lab(options: argparse.Namespace) -> int:
    if importlib.util.find_spec("jupyterlab") is None:
        msg = "the notebooks need JupyterLab: python -m pip install 'fzconnect[lab]'"
        raise FzconnectError(msg)
    from fzconnect.scenario.store import write_file

    for notebook in notebooks():
        target = options.folder / notebook.name
        if target.exists():
            print(f"kept {target}, which is there already")
            continue
        write_file(target, notebook.read_bytes())
        print(f"copied {target}")
    if options.no_open:
        return 0
    return subprocess.call([sys.executable, "-m", "jupyterlab", str(options.folder)])


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
