"""The kernel works on a batch; a scenario is a batch of one."""

from __future__ import annotations

import threading

import numpy as np

import fzconnect as fz
from fzconnect.geometry import FaultZone
from fzconnect.geometry.kernel import COLUMNS, trace_windows

DEMO = fz.demo()
ZONES = [FaultZone.from_scenario(DEMO.with_strands(DEMO.strands.with_count(n))) for n in (1, 4, 2)]


def batch():
    """Return the zones as one batch, padded with NaN where a zone has fewer strands."""
    most = max(zone.strand_count for zone in ZONES)
    tops, bases = [], []
    for zone in ZONES:
        for found, faces in zip((tops, bases), zone.body_faces(), strict=True):
            padding = ((0, most - zone.strand_count), *[(0, 0)] * 3)
            found.append(np.pad(faces, padding, constant_values=np.nan))
    counts = np.array([zone.strand_count for zone in ZONES])
    return ZONES[0].stations, np.stack(tops), np.stack(bases), counts


def test_each_draw_has_the_windows_that_its_zone_has_alone():
    rows, vertices = trace_windows(*batch())
    first, end = COLUMNS.index("first_vertex"), COLUMNS.index("end_vertex")
    for draw, zone in enumerate(ZONES):
        tops, bases = zone.body_faces()
        alone, corners = trace_windows(
            zone.stations, tops[np.newaxis], bases[np.newaxis], np.array([zone.strand_count])
        )
        mine = rows[rows[:, 0] == draw]
        assert np.array_equal(mine[:, 1:first], alone[:, 1:first])
        for row, other in zip(mine, alone, strict=True):
            assert np.array_equal(
                vertices[int(row[first]) : int(row[end])],
                corners[int(other[first]) : int(other[end])],
            )


def test_the_kernel_lets_other_threads_run():
    # with the GIL held, the counter could not move while one long call is under way
    stations, tops, bases, counts = batch()
    many = np.repeat(tops, 400, axis=0), np.repeat(bases, 400, axis=0), np.repeat(counts, 400)
    done, seen = threading.Event(), []

    def work():
        trace_windows(stations, *many)
        done.set()

    trace_windows(stations, tops, bases, counts)  # compiled before the clock runs
    worker = threading.Thread(target=work)
    worker.start()
    while not done.wait(0.001):
        seen.append(None)
    worker.join()
    assert len(seen) >= 3
