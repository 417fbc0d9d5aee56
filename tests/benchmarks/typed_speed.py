"""Time of filling a large log that many hands typed into, against openpyxl's load, assign, save.

Of 100,000 lookback times half are texts: values with errors in every usual spelling, limits, units.
Six columns with their error columns are filled from them. Run it with
`python -m tests.benchmarks.typed_speed [runs]`; every ratio comes from this one run.
"""

from __future__ import annotations

import json
import random
import sys
import tempfile
import time
import zipfile
from collections.abc import Callable
from pathlib import Path

from tests.benchmarks.contestants import Figures, apart, line, measured, ratio

MODULE = "tests.benchmarks.typed_speed"
ROWS = 100_000
SOURCE = "Lookback time [Gyr]"
TARGETS = ("z", "Age [Gyr]", "D_C [Mpc]", "T_CMB [K]", "D_L [Mpc]", "scale factor")
TEXTS = ("Object", "Class", "Observer", "Notes")
FIRST = len(TEXTS) + 2  # column of the first target, counted from 1
SHEET = "xl/worksheets/sheet1.xml"

# What every other row holds, in turn: a text of a time in Gyr, and whether it is a limit or has an
# error. Numbers stand in the rows between.
_PLAIN, _LIMIT, _ERROR = range(3)
FORMS: tuple[tuple[Callable[[float], str], int], ...] = (
    (lambda t: f"{t:.3f} ± 0.0{1 + int(t) % 9}", _ERROR),
    (lambda t: f"{t:.3f}({1 + int(t)})", _ERROR),
    (lambda t: f"{t:.3f} +0.05/-0.03", _ERROR),
    (lambda t: f"<{t:.2f}", _LIMIT),
    (lambda t: f"{t:.3f} Gyr", _PLAIN),
    (lambda t: f"{1e3 * t:.1f} ± 12.5 Myr", _ERROR),
    (lambda t: f"{t:.3f} (+0.06, −0.04)", _ERROR),
    (lambda t: f">{t:.3f} Gyr", _LIMIT),
    (lambda t: f"{t:.3f}\u00a0+/-\u00a00.02", _ERROR),
    (lambda t: f"~{t:.2f}", _PLAIN),
)


def form_of(row: int) -> int | None:
    """Return which form the source has in a row, None for a number."""
    return (row // 2) % len(FORMS) if row % 2 else None


def make(log: Path) -> Figures:
    """Write the log to be filled."""
    import xlsxwriter

    source = random.Random(20261202)
    book = xlsxwriter.Workbook(str(log))
    sheet = book.add_worksheet("Log")
    sheet.write_row(0, 0, [*TEXTS, SOURCE])
    for row in range(1, ROWS + 1):
        texts = [
            f"HBN {row:06d}",
            source.choice(["quasar", "burst", "supernova", "absorber"]),
            source.choice(["KJ", "OZ", "RQ", "TW"]),
            f"remark {row % 500}",
        ]
        sheet.write_row(row, 0, texts)
        time_gyr, form = source.uniform(0.4, 13.2), form_of(row)
        if form is None:
            sheet.write_number(row, len(TEXTS), round(time_gyr, 3))
        else:
            sheet.write_string(row, len(TEXTS), FORMS[form][0](time_gyr))
    book.close()
    return {}


def ours(log: Path, result: Path) -> Figures:
    """Fill with this project."""
    start = time.perf_counter()
    from workbook_tools import fill

    done = fill(log, output=result, add=TARGETS, with_errors=True)
    figures = measured(start)
    cells = sum(len(one.rows) + len(one.texts) for plan in done.plans for one in plan.cells)
    return figures | {"cells": cells, "left": len(done.left)}


def theirs(log: Path, result: Path) -> Figures:
    """Load, assign as many numbers and texts to the same cells, save with openpyxl."""
    start = time.perf_counter()
    import openpyxl

    book = openpyxl.load_workbook(log)
    sheet = book.active
    cells = 0
    for k, heading in enumerate(TARGETS):
        column = FIRST + 3 * k
        sheet.cell(1, column, heading)
        sheet.cell(1, column + 1, f"upper error of {heading}")
        sheet.cell(1, column + 2, f"lower error of {heading}")
        cells += 3
        for row in range(2, ROWS + 2):
            form = form_of(row - 1)
            kind = _PLAIN if form is None else FORMS[form][1]
            number = row * 1.23456789012345
            if kind == _LIMIT:
                sheet.cell(row, column, f"<{number:.4g}")
            else:
                sheet.cell(row, column, number)
            cells += 1
            if kind == _ERROR:
                sheet.cell(row, column + 1, number)
                sheet.cell(row, column + 2, number)
                cells += 2
    book.save(result)
    return measured(start) | {"cells": cells}


def count(result: Path) -> Figures:
    """Count the cells of a result."""
    with zipfile.ZipFile(result) as book:
        return {"cells": book.read(SHEET).count(b"</c>")}


def main(runs: int) -> None:
    """Print the figures with their bars."""
    mine, other = [], []
    with tempfile.TemporaryDirectory() as folder:
        log, filled, saved = (Path(folder) / f"{name}.xlsx" for name in ("log", "ours", "theirs"))
        apart(MODULE, "make", log)
        for _ in range(runs):
            filled.unlink(missing_ok=True)
            mine.append(apart(MODULE, "ours", log, filled))
            other.append(apart(MODULE, "theirs", log, saved))
        counts = [int(apart(MODULE, "count", one)["cells"]) for one in (filled, saved)]
    print(line("fill", mine))
    print(line("openpyxl", other))
    print(f"cells     {int(mine[0]['cells']):,} new ones here, {int(other[0]['cells']):,} there;")
    print(f"          {counts[0]:,} and {counts[1]:,} in the results; {int(mine[0]['left'])} left")
    print(f"time      {ratio('seconds', mine, other):.3f} of openpyxl's      (bar 0.250)")
    print(f"memory    {ratio('megabytes', mine, other):.3f} of openpyxl's")


TASKS = {"make": make, "ours": ours, "theirs": theirs, "count": count}

if __name__ == "__main__":
    if sys.argv[1:2] and sys.argv[1] in TASKS:
        print(json.dumps(TASKS[sys.argv[1]](*map(Path, sys.argv[2:]))))
    else:
        main(int(sys.argv[1]) if len(sys.argv) > 1 else 3)
