"""Timing as ratios within one run, and the lines that the benchmarks print."""

from __future__ import annotations

import os
import platform
import statistics
import time
from collections.abc import Callable, Mapping


def medians(works: Mapping[str, Callable[[], object]], rounds: int) -> dict[str, float]:
    """Median seconds of each piece of work."""
    return {name: statistics.median(times) for name, times in _in_turns(works, rounds).items()}


def least(works: Mapping[str, Callable[[], object]], rounds: int) -> dict[str, float]:
    """Seconds of the least disturbed round of each: steadier on a machine that others use."""
    return {name: min(times) for name, times in _in_turns(works, rounds).items()}


def _in_turns(works: Mapping[str, Callable[[], object]], rounds: int) -> dict[str, list[float]]:
    """Seconds of every round of each; all take turns, so that all see the same machine."""
    times: dict[str, list[float]] = {name: [] for name in works}
    for _ in range(rounds):
        for name, work in works.items():
            begun = time.perf_counter()
            work()
            times[name].append(time.perf_counter() - begun)
    return times


def machine() -> str:
    """What the figures were measured on."""
    return (
        f"{platform.system()} {platform.machine()}, {os.cpu_count()} cores, "
        f"Python {platform.python_version()}"
    )


def verdict(what: str, figure: float, bar: float, unit: str = "") -> str:
    """One line: what, the figure, the bar beside it, and whether it holds."""
    word = "holds" if figure <= bar else "MISSED"
    return f"{what:<66} {figure:8.3f}{unit}  bar {bar:g}{unit}  {word}"
