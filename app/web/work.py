"""Computing off the event loop, with a limit on how much at once.

The event loop only moves bytes.  Whatever computes or writes to the disk runs in a worker thread; a few at a time,
because threads share one interpreter.  Who comes when all places are taken and the queue is full is told to come
again (Busy), and who waits longer than the time limit is told so (OutOfTime).
"""

import threading
from asyncio import AbstractEventLoop, get_running_loop
from collections.abc import Callable
from typing import TypeVar

import anyio
import anyio.to_thread

from app.errors import Busy, OutOfTime

T = TypeVar("T")

RUNNING = 2
WAITING = 30
TIME_LIMIT = 60.0


class Work:
    """Worker threads: ``running`` at a time, ``waiting`` in the queue, ``time_limit`` seconds for waiting and running.

    A computation past its time is abandoned, not stopped; it keeps its place until it ends, so that abandoned
    computations cannot pile up.
    """

    def __init__(self, running: int = RUNNING, waiting: int = WAITING, time_limit: float = TIME_LIMIT) -> None:
        self._running = running
        self._places = running + waiting
        self._time_limit = time_limit
        self._taken = 0
        self._lock = threading.Lock()
        self._limiter: tuple[AbstractEventLoop, anyio.CapacityLimiter] | None = None

    async def run(self, function: Callable[..., T], *arguments: object) -> T:
        """What the function returns, computed in a worker thread.

        Raises Busy, OutOfTime, and what the function raises.
        """
        seat = self._take_seat()

        def in_thread() -> T:
            seat.started()
            try:
                return function(*arguments)
            finally:
                self._give_back(seat)

        with anyio.move_on_after(self._time_limit):
            try:
                return await anyio.to_thread.run_sync(in_thread, abandon_on_cancel=True, limiter=self._here())
            finally:
                if not seat.is_used:
                    self._give_back(seat)
        raise OutOfTime(f"The computation took longer than {self._time_limit:g} seconds.")

    def _take_seat(self) -> "_Seat":
        with self._lock:
            if self._taken >= self._places:
                raise Busy("The program is computing for others at the moment; try again in a few seconds.")
            self._taken += 1
        return _Seat()

    def _give_back(self, seat: "_Seat") -> None:
        with self._lock:
            if not seat.is_given_back:
                seat.is_given_back = True
                self._taken -= 1

    def _here(self) -> anyio.CapacityLimiter:
        """The limiter of the running event loop (it belongs to one)."""
        loop = get_running_loop()
        if self._limiter is None or self._limiter[0] is not loop:
            self._limiter = (loop, anyio.CapacityLimiter(self._running))
        return self._limiter[1]


class _Seat:
    """One place among those that compute or wait; given back once, by the thread or by who gave up waiting."""

    def __init__(self) -> None:
        self.is_used = False
        self.is_given_back = False

    def started(self) -> None:
        self.is_used = True
