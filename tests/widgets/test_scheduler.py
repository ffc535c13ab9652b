"""The newest request wins, at the right time, and errors are heard of."""

from __future__ import annotations

import asyncio
import logging
import threading
from collections.abc import Callable
from typing import Any

import pytest

from fzconnect.widgets.scheduler import Scheduler


class Clock:
    """A clock and timer that move only when told to."""

    def __init__(self) -> None:
        self.now = 100.0
        self.alarms: list[tuple[float, list[Callable[[], None]]]] = []

    def __call__(self) -> float:
        return self.now

    def timer(self, seconds: float, call: Callable[[], None], /) -> Callable[[], None]:
        cell = [call]
        self.alarms.append((self.now + seconds, cell))
        return cell.clear

    def advance(self, seconds: float) -> None:
        end = self.now + seconds
        while due := sorted(
            (alarm for alarm in self.alarms if alarm[1] and alarm[0] <= end + 1e-9),
            key=lambda alarm: alarm[0],
        ):
            self.now = max(self.now, due[0][0])
            due[0][1].pop()()
        self.now = end

    @property
    def waiting(self) -> int:
        return sum(bool(cell) for _, cell in self.alarms)


class Bench:
    """A scheduler with a hand-moved clock, and what it did when."""

    def __init__(self) -> None:
        self.clock = Clock()
        self.done: list[tuple[float, str, Any]] = []
        self.errors: list[Exception] = []
        self.cost = 0.0
        self.scheduler: Scheduler[Any] = Scheduler(
            self.work("light"),
            self.work("heavy"),
            clock=self.clock,
            timer=self.clock.timer,
            on_error=self.errors.append,
            light_every=0.04,
            heavy_after=0.25,
        )

    def work(self, name: str) -> Callable[[Any], None]:
        def run(request: Any) -> None:
            self.done.append((round(self.clock.now - 100, 6), name, request))
            self.clock.now += self.cost

        return run


def test_the_first_request_is_worked_on_at_once_and_heavy_work_when_the_hand_rests() -> None:
    bench = Bench()
    bench.scheduler.request("a")
    assert bench.done == [(0, "light", "a")]
    assert bench.scheduler.pending
    bench.clock.advance(0.24)
    assert len(bench.done) == 1
    bench.clock.advance(0.02)
    assert bench.done[1:] == [(0.25, "heavy", "a")]
    assert not bench.scheduler.pending
    assert bench.clock.waiting == 0


def test_light_work_follows_at_its_pace_for_the_newest_request_only() -> None:
    bench = Bench()
    for number in range(25):  # one every 10 ms
        bench.scheduler.request(number)
        bench.clock.advance(0.01)
    bench.clock.advance(1)
    light = [(when, what) for when, name, what in bench.done if name == "light"]
    assert light[:4] == [(0, 0), (0.04, 3), (0.08, 7), (0.12, 11)]
    assert light[-1][1] == 24
    assert [entry for entry in bench.done if entry[1] == "heavy"] == [(0.49, "heavy", 24)]


def test_slow_light_work_leaves_time_to_read_the_requests_that_piled_up() -> None:
    bench = Bench()
    bench.cost = 0.5
    bench.scheduler.request("a")
    bench.scheduler.request("b")  # read straight after the work on a, as a browser's queue is
    bench.scheduler.request("c")
    assert bench.done == [(0, "light", "a")]
    bench.clock.advance(0.02)
    assert bench.done[1:2] == [(0.51, "light", "c")]


def test_a_final_request_does_both_at_once() -> None:
    bench = Bench()
    bench.scheduler.request("a")
    bench.scheduler.request("b", final=True)
    assert bench.done == [(0, "light", "a"), (0, "light", "b"), (0, "heavy", "b")]
    bench.clock.advance(1)
    assert len(bench.done) == 3


def test_flush_does_what_waits_and_nothing_else() -> None:
    bench = Bench()
    bench.scheduler.flush()
    assert bench.done == []
    bench.scheduler.request("a")
    bench.scheduler.request("b")
    bench.scheduler.flush()
    assert bench.done == [(0, "light", "a"), (0, "light", "b"), (0, "heavy", "b")]
    bench.scheduler.flush()
    assert len(bench.done) == 3


def test_a_closed_scheduler_forgets_and_refuses() -> None:
    bench = Bench()
    bench.scheduler.request("a")
    bench.scheduler.close()
    bench.scheduler.close()
    assert not bench.scheduler.pending
    assert bench.clock.waiting == 0
    bench.scheduler.request("b", final=True)
    bench.scheduler.flush()
    bench.clock.advance(1)
    assert bench.done == [(0, "light", "a")]


def test_a_scheduler_closed_by_its_own_work_stops() -> None:
    clock = Clock()
    done: list[str] = []

    def light(request: str) -> None:
        done.append(request)
        scheduler.close()

    scheduler = Scheduler(light, done.append, on_error=pytest.fail, clock=clock, timer=clock.timer)
    scheduler.request("a", final=True)
    assert done == ["a"]
    assert clock.waiting == 0


def test_errors_are_handed_on_and_the_next_request_is_served() -> None:
    errors: list[Exception] = []
    done: list[float] = []
    clock = Clock()
    scheduler = Scheduler(
        lambda request: done.append(1 / request),
        lambda request: done.append(10 / request),
        on_error=errors.append,
        clock=clock,
        timer=clock.timer,
    )
    scheduler.request(0, final=True)
    assert [type(error) for error in errors] == 2 * [ZeroDivisionError]
    scheduler.request(2, final=True)
    assert done == [0.5, 5]


def test_an_error_that_can_not_be_reported_is_logged(caplog: pytest.LogCaptureFixture) -> None:
    def broken(error: Exception) -> None:
        msg = "no status line"
        raise RuntimeError(msg)

    scheduler: Scheduler[int] = Scheduler(lambda request: 1 / request, on_error=broken)
    with caplog.at_level(logging.ERROR):
        scheduler.request(0)
    assert "no status line" in caplog.text
    assert "ZeroDivisionError" in caplog.text


def test_an_interrupt_passes_through_and_leaves_the_scheduler_usable() -> None:
    done: list[str] = []

    def light(request: str) -> None:
        if request == "stop":
            raise KeyboardInterrupt
        done.append(request)

    scheduler = Scheduler(light, on_error=pytest.fail)
    with pytest.raises(KeyboardInterrupt):
        scheduler.request("stop")
    scheduler.request("on")
    assert done == ["on"]


def test_a_request_from_inside_the_work_follows_it() -> None:
    bench = Bench()
    inner: list[str] = []

    def light(request: str) -> None:
        inner.append(f"{request} begins")
        if request == "a":
            scheduler.request("b", final=True)
        inner.append(f"{request} ends")

    scheduler = Scheduler(light, on_error=pytest.fail, clock=bench.clock, timer=bench.clock.timer)
    scheduler.request("a")
    assert inner == ["a begins", "a ends", "b begins", "b ends"]


def test_without_an_event_loop_every_request_is_worked_off_at_once() -> None:
    done: list[str] = []
    scheduler = Scheduler(
        lambda request: done.append(f"light {request}"),
        lambda request: done.append(f"heavy {request}"),
        on_error=pytest.fail,
    )
    scheduler.request("a")
    scheduler.request("b")
    assert done == ["light a", "heavy a", "light b", "heavy b"]
    assert not scheduler.pending


def test_on_an_event_loop_work_is_done_in_its_thread_also_for_requests_from_another() -> None:
    done: list[tuple[str, str, bool]] = []

    async def main() -> None:
        here = threading.current_thread()

        def note(name: str) -> Callable[[str], None]:
            return lambda request: done.append((name, request, threading.current_thread() is here))

        scheduler = Scheduler(
            note("light"), note("heavy"), on_error=pytest.fail, light_every=0.01, heavy_after=0.03
        )
        scheduler.request("a")
        other = threading.Thread(target=lambda: [scheduler.request(word) for word in "bcd"])
        other.start()
        other.join()
        for _ in range(200):
            if not scheduler.pending:
                break
            await asyncio.sleep(0.01)
        scheduler.close()

    asyncio.run(main())
    assert done == [("light", "a", True), ("light", "d", True), ("heavy", "d", True)]


def test_many_threads_never_work_at_once_and_the_last_request_is_served() -> None:
    busy = threading.Lock()
    served: list[int] = []

    def light(request: int) -> None:
        assert busy.acquire(blocking=False), "two threads at work"
        served.append(request)
        busy.release()

    scheduler = Scheduler(light, on_error=pytest.fail)
    threads = [
        threading.Thread(target=lambda: [scheduler.request(n) for n in range(500)])
        for _ in range(4)
    ]
    for thread in threads:
        thread.start()
    for thread in threads:
        thread.join()
    assert served[-1] == 499
    assert not scheduler.pending
