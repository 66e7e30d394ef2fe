"""Timing of functions and of whole commands, and the table that shows it.

Beside the time on the clock stands the processor time, which says what the program needed when the machine was busy
with other things as well.
"""

import statistics
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class Time:
    """Seconds on the clock and seconds of the processor."""

    clock: float
    processor: float


@dataclass(frozen=True)
class Figure:
    """A measured figure: what, its time (median, or the percentile that the target speaks of), target in seconds."""

    name: str
    time: Time
    target: float | None = None


def timed(function: Callable[[], object]) -> Time:
    """One call."""
    begun, worked = time.perf_counter(), time.process_time()
    function()
    return Time(time.perf_counter() - begun, time.process_time() - worked)


def samples(function: Callable[[], object], count: int) -> list[Time]:
    """Each of ``count`` calls, after one that is not counted."""
    function()
    return [timed(function) for _ in range(count)]


def middle(times: Sequence[Time]) -> Time:
    """The medians."""
    return Time(statistics.median(t.clock for t in times), statistics.median(t.processor for t in times))


def median(function: Callable[[], object], count: int = 15) -> Time:
    return middle(samples(function, count))


def percentile(times: Sequence[Time], part: float) -> Time:
    place = min(len(times) - 1, int(part * len(times)))
    return Time(sorted(t.clock for t in times)[place], sorted(t.processor for t in times)[place])


def show(figures: list[Figure]) -> None:
    """Print the figures as a table: clock, processor, target, and clock over target."""
    print(f"{'figure':62} {'clock':>11} {'processor':>11} {'target':>8} {'ratio':>6}")
    for figure in figures:
        target = f"{figure.target * 1e3:.0f} ms" if figure.target else ""
        ratio = f"{figure.time.clock / figure.target:.2f}" if figure.target else ""
        clock, processor = (f"{seconds * 1e3:8.2f} ms" for seconds in (figure.time.clock, figure.time.processor))
        print(f"{figure.name:62} {clock} {processor} {target:>8} {ratio:>6}")
