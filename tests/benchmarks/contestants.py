"""Contestants in processes of their own, so that none pays for another's memory or imports.

Each is started from a process that stays small, since a process counts its parent's memory as its
own peak.
"""

from __future__ import annotations

import json
import os
import resource
import statistics
import subprocess
import sys
import time
from collections.abc import Sequence
from pathlib import Path

Figures = dict[str, float]


def measured(start: float) -> Figures:
    """Return the seconds since `start` and the peak memory of this process in MB."""
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    return {
        "seconds": time.perf_counter() - start,
        "megabytes": peak / (2**20 if sys.platform == "darwin" else 1024),
    }


def apart(module: str, task: str, *paths: Path) -> Figures:
    """Run one task of a benchmark's module in a process of its own.

    openpyxl works there without lxml.
    """
    done = subprocess.run(
        [sys.executable, "-m", module, task, *map(str, paths)],
        check=True,
        stdout=subprocess.PIPE,
        text=True,
        env=os.environ | {"OPENPYXL_LXML": "False"},
    )
    figures: Figures = json.loads(done.stdout)
    return figures


def ratio(name: str, ours: Sequence[Figures], theirs: Sequence[Figures]) -> float:
    """Return the median of one figure's ratios, run by run."""
    return statistics.median(a[name] / b[name] for a, b in zip(ours, theirs, strict=True))


def line(label: str, runs: Sequence[Figures]) -> str:
    """Return a line with the median seconds and memory of some runs."""
    seconds = statistics.median(one["seconds"] for one in runs)
    megabytes = statistics.median(one["megabytes"] for one in runs)
    return f"{label:9} {seconds:6.2f} s {megabytes:6.0f} MB   (median of {len(runs)})"
