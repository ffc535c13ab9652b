"""The command, run as a user runs it: answers, files, exit codes and sentences."""

from __future__ import annotations

import csv
import errno
import json
import math
import os
import subprocess
import sys
import time
from itertools import pairwise
from pathlib import Path

import pytest

from fzconnect import cli, output
from fzconnect.scenario import store

FILES = {
    "network.graphml",
    "network.json",
    "pathways.csv",
    "report.html",
    "sand_pairs.csv",
    "summary.json",
    "windows.csv",
}


@pytest.fixture(scope="module")
def quillmere(tmp_path_factory):
    """The folder that `fzconnect study` writes for the demo."""
    out = tmp_path_factory.mktemp("study") / "quillmere"
    assert cli.main(["study", "--out", str(out)]) == 0
    return out


def rows(path: Path) -> list[dict[str, str]]:
    with path.open(newline="", encoding="utf-8") as file:
        return list(csv.DictReader(file))


def test_study_writes_the_files_of_the_contract(quillmere):
    assert {path.name for path in quillmere.iterdir()} == FILES | {store.MARKER}


def test_columns_keep_their_names_and_order(quillmere):
    windows, pairs = rows(quillmere / "windows.csv"), rows(quillmere / "sand_pairs.csv")
    assert list(windows[0])[:9] == [
        "strand",
        "footwall_side_sand",
        "hanging_wall_side_sand",
        "distance_from",
        "distance_to",
        "top",
        "base",
        "max_height",
        "area",
    ]
    assert list(pairs[0])[:7] == [
        "hanging_wall_sand",
        "footwall_sand",
        "connected",
        "connected_single_plane",
        "bottleneck_area",
        "transmissibility_low",
        "transmissibility_high",
    ]


def test_every_pair_has_a_row_and_booleans_are_words(quillmere):
    pairs, summary = rows(quillmere / "sand_pairs.csv"), read_json(quillmere / "summary.json")
    assert len(pairs) == summary["sand_bodies"] ** 2 == summary["sand_pairs"]
    assert {row["connected"] for row in pairs} == {"true", "false"}
    assert sum(row["connected"] == "true" for row in pairs) == summary["zone"]["connected_pairs"]


def test_no_file_holds_nan(quillmere):
    for name in FILES - {"report.html", "network.graphml"}:
        words = (quillmere / name).read_text(encoding="utf-8").replace('"', ",").split(",")
        assert not {"nan", "NaN", "inf"} & {word.strip() for word in words}


def test_demo_changes_with_the_strands_in_both_directions(quillmere):
    summary = read_json(quillmere / "summary.json")
    assert summary["pairs_gained"] >= 1
    assert summary["pairs_lost"] >= 1
    assert summary["layers"] >= 24
    assert summary["zone"]["strands"] == 3


def test_inputs_are_named_with_their_hashes(quillmere):
    inputs = read_json(quillmere / "summary.json")["inputs_sha256"]
    assert set(inputs) == {"scenario.toml", "column.csv", "hanging_wall.csv", "cutoffs.csv"}
    assert all(len(digest) == 64 for digest in inputs.values())


def test_pathways_add_up(quillmere):
    graph = read_json(quillmere / "network.json")
    areas = {frozenset((e["source"], e["target"])): e["area"] for e in graph["edges"]}
    for row in rows(quillmere / "pathways.csv"):
        nodes = row["pathway"].split(" > ")
        steps = [areas[frozenset(step)] for step in pairwise(nodes)]
        assert len(steps) == int(row["crossings"])
        assert min(steps) == pytest.approx(float(row["bottleneck_area"]))
        assert math.fsum(1 / area for area in steps) == pytest.approx(float(row["resistance"]))


def test_study_prints_both_answers_and_the_caution(tmp_path, capsys):
    assert cli.main(["study", "--out", str(tmp_path / "out")]) == 0
    printed = capsys.readouterr().out
    for words in ("single plane", "connected sand pairs", "Warning:", "screening aid", "S8 - S8"):
        assert words in printed


def test_without_out_the_folder_has_the_scenario_name(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    assert cli.main(["study"]) == 0
    assert (tmp_path / "quillmere-storage-prospect-study" / "report.html").is_file()


def test_a_folder_of_somebody_else_is_kept(tmp_path, capsys):
    mine = tmp_path / "notes.txt"
    mine.write_text("mine")
    assert cli.main(["study", "--out", str(tmp_path)]) == 2
    assert "was not written by fzconnect" in capsys.readouterr().err
    assert [path.name for path in tmp_path.iterdir()] == ["notes.txt"]
    assert cli.main(["study", "--out", str(tmp_path), "--overwrite"]) == 0
    assert mine.read_text() == "mine"


def test_a_second_run_replaces_its_own_folder(quillmere, tmp_path):
    out = tmp_path / "out"
    assert cli.main(["study", "--out", str(out)]) == 0
    (out / "summary.json").write_text("old")
    assert cli.main(["study", "--out", str(out)]) == 0
    for name in FILES - {"report.html"}:
        assert (out / name).read_bytes() == (quillmere / name).read_bytes()


def test_a_full_disk_leaves_nothing(tmp_path, monkeypatch, capsys):
    def full(*_: object) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", full)
    assert cli.main(["study", "--out", str(tmp_path / "out")]) == 2
    assert "the disk is full" in capsys.readouterr().err
    assert not list(tmp_path.iterdir())


def test_a_disk_that_fails_elsewhere_is_no_fault_of_ours(tmp_path, monkeypatch, capsys):
    def full(*_: object, **__: object) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC), "cache")

    monkeypatch.setattr("fzconnect.network.study", full)
    assert cli.main(["study", "--out", str(tmp_path / "out")]) == 2
    assert capsys.readouterr().err == "fzconnect: cache: No space left on device\n"


def test_a_step_of_over_a_second_shows_how_far_it_is(capsys):
    with output._Progress("long", is_shown=True) as step:
        step(1, 4)
        time.sleep(1.3)
    with output._Progress("short", is_shown=True):
        pass
    with output._Progress("unseen", is_shown=False):
        pass
    told = capsys.readouterr().err
    assert "long:  25%" in told
    assert "short" not in told


def test_names_that_a_terminal_cannot_show_do_not_end_the_work(tmp_path):
    assert cli.main(["new", str(tmp_path / "mine")]) == 0
    path = tmp_path / "mine" / "scenario.toml"
    path.write_text(path.read_text("utf-8").replace("My fault zone", "砂 zone"), "utf-8")
    done = subprocess.run(
        [sys.executable, "-m", "fzconnect.cli", "study", path, "--out", tmp_path / "out"],
        env={**os.environ, "PYTHONIOENCODING": "ascii"},
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stderr
    assert done.stdout.startswith("? zone\n")


def test_a_reader_that_goes_away_leaves_no_traceback(tmp_path):
    command = [sys.executable, "-m", "fzconnect.cli", "study", "--out", tmp_path / "out"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as study:
        assert study.stdout
        assert study.stderr
        study.stdout.close()
        told = study.stderr.read().decode()
        assert study.wait() in (0, 1)
    assert "Traceback" not in told
    assert "BrokenPipe" not in told


@pytest.mark.parametrize(
    ("content", "said"),
    [
        (None, "no such file"),
        ("", "empty"),
        ("name = ", "not valid TOML"),
        ("[column]\nfil = 'a.csv'", 'did you mean "file"'),
    ],
)
def test_bad_input_is_one_sentence_and_exit_code_2(tmp_path, capsys, content, said):
    path = tmp_path / "bad.toml"
    if content is not None:
        path.write_text(content)
    assert cli.main(["study", str(path), "--out", str(tmp_path / "out")]) == 2
    captured = capsys.readouterr()
    assert said in captured.err
    assert "Traceback" not in captured.err
    assert not (tmp_path / "out").exists()


def test_an_interrupt_leaves_nothing(tmp_path, monkeypatch, capsys):
    def interrupted(*_: object, **__: object) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr("fzconnect.network.study_files", interrupted)
    assert cli.main(["study", "--out", str(tmp_path / "out")]) == 130
    assert "nothing half-written" in capsys.readouterr().err
    assert not list(tmp_path.iterdir())


def test_a_fault_of_our_own_is_owned_up_to(tmp_path, monkeypatch, capsys):
    def broken(*_: object, **__: object) -> None:
        msg = "broken"
        raise ZeroDivisionError(msg)

    monkeypatch.setattr("fzconnect.network.study", broken)
    assert cli.main(["study", "--out", str(tmp_path / "out")]) == 1
    told = capsys.readouterr().err
    assert "a fault in fzconnect itself" in told
    assert "ZeroDivisionError" in told
    assert "Traceback" not in told
    assert cli.main(["--debug", "study", "--out", str(tmp_path / "out")]) == 1
    assert "Traceback" in capsys.readouterr().err


def test_new_writes_a_scenario_that_can_be_studied(tmp_path, capsys):
    folder = tmp_path / "mine"
    assert cli.main(["new", str(folder)]) == 0
    assert cli.main(["study", str(folder / "scenario.toml"), "--out", str(tmp_path / "out")]) == 0
    assert cli.main(["new", str(folder)]) == 2
    assert "expected a new or an empty folder" in capsys.readouterr().err


def test_lab_copies_the_notebooks_and_keeps_what_is_there(tmp_path, capsys):
    folder = tmp_path / "books"
    assert cli.main(["lab", str(folder), "--no-open"]) == 0
    notebook = folder / "01-first-look.ipynb"
    assert json.loads(notebook.read_text(encoding="utf-8"))["nbformat"] == 4
    notebook.write_text("changed by hand")
    assert cli.main(["lab", str(folder), "--no-open"]) == 0
    assert notebook.read_text() == "changed by hand"
    assert "kept" in capsys.readouterr().out


def test_lab_fills_a_folder_that_is_there_and_makes_its_parents(tmp_path):
    (tmp_path / "notes.txt").write_text("mine")
    for folder in (tmp_path, tmp_path / "deep" / "books"):
        assert cli.main(["lab", str(folder), "--no-open"]) == 0
        assert (folder / "01-first-look.ipynb").is_file()
    assert (tmp_path / "notes.txt").read_text() == "mine"


def test_lab_says_what_is_not_installed(tmp_path, monkeypatch, capsys):
    monkeypatch.setattr(cli, "_LAB", ("jupyterlab", "no_such_module"))
    assert cli.main(["lab", str(tmp_path / "books"), "--no-open"]) == 2
    assert "the notebooks need no_such_module: python -m pip" in capsys.readouterr().err
    assert not (tmp_path / "books").exists()


def test_an_interrupt_is_left_to_jupyterlab(tmp_path, monkeypatch):
    class Lab:
        waits = 0

        def __init__(self, command: list[str]) -> None:
            assert command[1:] == ["-m", "jupyterlab", str(tmp_path / "books")]

        def wait(self) -> int:
            Lab.waits += 1
            if Lab.waits == 1:
                raise KeyboardInterrupt
            return 0

    monkeypatch.setattr(subprocess, "Popen", Lab)
    assert cli.main(["lab", str(tmp_path / "books")]) == 0
    assert Lab.waits == 2


@pytest.mark.parametrize("arguments", [["study", "--pathways", "0"], [], ["nothing"]])
def test_wrong_words_exit_with_2(arguments, capsys):
    with pytest.raises(SystemExit, match="2"):
        cli.main(arguments)
    assert "usage" in capsys.readouterr().err


def test_the_module_runs_as_a_program(tmp_path):
    done = subprocess.run(
        [sys.executable, "-m", "fzconnect.cli", "study", str(tmp_path / "none.toml")],
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 2
    assert done.stderr.startswith("fzconnect: ")
    assert "Traceback" not in done.stderr


def read_json(path: Path):
    return json.loads(path.read_text(encoding="utf-8"))
