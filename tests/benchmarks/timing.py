"""Timing of functions and of whole commands, and the table that shows it."""

import statistics
import time
from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True)
class Figure:
    """A measured figure: what, seconds (median, or the percentile that the target speaks of), target in seconds."""

    name: str
    seconds: float
    target: float | None = None


def samples(function: Callable[[], object], count: int) -> list[float]:
    """Seconds of each of ``count`` calls, after one that is not counted."""
    function()
    found = []
    for _ in range(count):
        begun = time.perf_counter()
        function()
        found.append(time.perf_counter() - begun)
    return found


def median(function: Callable[[], object], count: int = 15) -> float:
    return statistics.median(samples(function, count))


def percentile(values: list[float], part: float) -> float:
    ordered = sorted(values)
    return ordered[min(len(ordered) - 1, int(part * len(ordered)))]


def show(figures: list[Figure]) -> None:
    """Print the figures as a table: measured, target, and their ratio."""
    print(f"{'figure':66} {'measured':>11} {'target':>10} {'ratio':>6}")
    for figure in figures:
        target = f"{figure.target * 1e3:.0f} ms" if figure.target else ""
        ratio = f"{figure.seconds / figure.target:.2f}" if figure.target else ""
        print(f"{figure.name:66} {figure.seconds * 1e3:8.2f} ms {target:>10} {ratio:>6}")
