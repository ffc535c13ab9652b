"""When work for a slider is done: the newest request wins, errors are never lost.

A hand on a slider asks for more than can be computed. Light work (cheap pictures) follows the
hand, but not more often than a stated pause; heavy work waits until the hand rests. Requests in
between are forgotten, because only the newest one says what the user wants to see.
"""

from __future__ import annotations

import asyncio
import logging
import threading
import time
from collections.abc import Callable
from typing import Generic, Protocol, TypeVar

__all__ = ["Scheduler", "Timer"]

T = TypeVar("T")
_NEVER = float("inf")
_log = logging.getLogger(__name__)


class Timer(Protocol):
    """Something that calls a function after a number of seconds, and can be told not to."""

    def __call__(self, seconds: float, call: Callable[[], None], /) -> Callable[[], None]:
        """Arrange for `call()` after `seconds`; return what cancels it."""


class _LoopTimer:
    """Timer on an event loop; it may be set from any thread, and calls in the loop's thread.

    Notebook kernels may hand messages from the browser to other threads than the one that runs
    cells, each with an event loop of its own that ends with it. So the loop is chosen once.
    """

    def __init__(self, loop: asyncio.AbstractEventLoop) -> None:
        self._loop = loop

    def __call__(self, seconds: float, call: Callable[[], None], /) -> Callable[[], None]:
        wanted = [True]

        def fire() -> None:
            if wanted[0]:
                call()

        def cancel() -> None:
            wanted[0] = False

        self._loop.call_soon_threadsafe(self._loop.call_later, max(0.0, seconds), fire)
        return cancel


def _loop_timer() -> Timer | None:
    try:
        return _LoopTimer(asyncio.get_running_loop())
    except RuntimeError:
        return None


class Scheduler(Generic[T]):
    """Light work at most every so often, heavy work at rest, always for the newest request.

    Parameters
    ----------
    light : callable
        `light(request)`, for what must follow the hand.
    heavy : callable, optional
        `heavy(request)`, for what can wait until the hand rests.
    on_error : callable
        `on_error(exception)`, called for every exception that the work raises. If it fails
        itself, both are logged.
    light_every : float, default 0.04
        Least time in s between the starts of two pieces of light work.
    heavy_after : float, default 0.25
        Time in s without a request after which heavy work starts.
    clock : callable, default time.monotonic
        Present time in s.
    timer : Timer, optional
        What wakes the scheduler. The event loop that runs where the scheduler is made if left
        out; if none runs (a script, a test), nothing can wake it later, so every request is
        worked off at once.

    Notes
    -----
    Requests may come from any thread and from inside the work. Work is never done by two threads
    at once, and the lock is not held while it is done.

    Examples
    --------
    >>> seen = []
    >>> scheduler = Scheduler(seen.append, on_error=print)
    >>> scheduler.request(3)
    >>> seen
    [3]
    >>> scheduler.close()
    """

    def __init__(
        self,
        light: Callable[[T], object],
        heavy: Callable[[T], object] | None = None,
        *,
        on_error: Callable[[Exception], object],
        light_every: float = 0.04,
        heavy_after: float = 0.25,
        clock: Callable[[], float] = time.monotonic,
        timer: Timer | None = None,
    ) -> None:
        self._light, self._heavy, self._on_error = light, heavy, on_error
        self._light_every, self._heavy_after = light_every, heavy_after
        self._clock = clock
        self._timer = timer or _loop_timer()
        self._lock = threading.RLock()
        self._newest: list[T] = []  # empty, or the one request that counts
        self._light_due = self._heavy_due = _NEVER
        self._light_free = -_NEVER  # when light work may start again
        self._at_once = False  # whether the newest request lets nothing wait
        self._working = False
        self._closed = False
        self._alarm: Callable[[], None] | None = None

    @property
    def pending(self) -> bool:
        """Whether work is waiting to be done."""
        with self._lock:
            return min(self._light_due, self._heavy_due) < _NEVER

    def request(self, request: T, *, final: bool = False) -> None:
        """Ask for work on `request`, instead of on any earlier request still waiting.

        Parameters
        ----------
        request : object
            Handed to the work as it is.
        final : bool, default False
            Whether the hand has let go: heavy work then need not wait, and both are done now.
        """
        with self._lock:
            if self._closed:
                return
            now = self._clock()
            self._at_once = at_once = final or self._timer is None
            self._newest = [request]
            self._light_due = now if at_once else max(now, self._light_free)
            if self._heavy is not None:
                self._heavy_due = now if at_once else now + self._heavy_after
        self.poll()

    def poll(self) -> None:
        """Do the work that is due by now. Timers call this; a test may."""
        self._work(lambda: self._clock())

    def flush(self) -> None:
        """Do all waiting work now."""
        self._work(lambda: _NEVER)

    def close(self) -> None:
        """Forget what is waiting and refuse further requests; safe to call again."""
        with self._lock:
            self._closed = True
            self._light_due = self._heavy_due = _NEVER
            self._newest = []
            self._set_alarm()

    def _work(self, until: Callable[[], float]) -> None:
        with self._lock:
            if self._working:  # whoever is at work sees the new request when done
                return
            self._working = True
        try:
            while True:
                with self._lock:
                    job = self._take(until())
                    if job is None:
                        # Said under the lock: a request made after this sets its own alarm.
                        self._working = False
                        self._set_alarm()
                        return
                self._run(*job)
        except BaseException:  # an interrupt must not leave the scheduler looking busy for good
            with self._lock:
                self._working = False
                self._set_alarm()
            raise

    def _take(self, now: float) -> tuple[Callable[[T], object], T] | None:
        """Take the next due piece of work; light before heavy, for the same request."""
        if self._light_due < _NEVER and self._light_due <= now:
            self._light_due = _NEVER
            return self._light, self._newest[0]
        if self._heavy is not None and self._heavy_due < _NEVER and self._heavy_due <= now:
            self._heavy_due = _NEVER
            return self._heavy, self._newest[0]
        return None

    def _run(self, work: Callable[[T], object], request: T) -> None:
        start = self._clock()
        try:
            work(request)
        except Exception as error:
            self._report(error)
        if work is self._light:
            with self._lock:
                # A quarter pause after the end, too: requests that piled up meanwhile must be
                # read first, or each of them would be worked off although it is out of date.
                # The hand rests only if none of them is there, so heavy work waits for that too.
                end = self._clock()
                self._light_free = max(start + self._light_every, end + self._light_every / 4)
                if not self._at_once:
                    self._heavy_due = max(self._heavy_due, self._light_free)

    def _report(self, error: Exception) -> None:
        try:
            self._on_error(error)
        except Exception:
            _log.exception("could not report the error that follows")
            _log.error("work for a control failed", exc_info=error)

    def _set_alarm(self) -> None:
        if self._alarm is not None:
            self._alarm()
            self._alarm = None
        due = min(self._light_due, self._heavy_due)
        if due < _NEVER and self._timer is not None:
            self._alarm = self._timer(due - self._clock(), self.poll)
