"""Time and memory of a large fill, against a load-assign-save with openpyxl and against the floor.

A log of 100,000 rows and 12 columns (6 of text, 6 of numbers) gains six columns. Run it with
`python -m tests.benchmarks.workbook_speed [runs]`; every ratio comes from this one run.
"""

from __future__ import annotations

import json
import random
import sys
import tempfile
import time
import zipfile
import zlib
from pathlib import Path
from xml.parsers import expat

from tests.benchmarks.contestants import Figures, apart, line, measured, ratio

MODULE = "tests.benchmarks.workbook_speed"
ROWS = 100_000
ADDED = (
    *("Age [Gyr]", "Lookback time [Gyr]", "D_C [Mpc]"),
    *("T_CMB [K]", "D_L [Mpc]", "scale factor"),
)
TEXTS = ("Object", "RA", "Dec", "Class", "Observer", "Notes")
NUMBERS = ("z", "mag", "Exposure [s]", "Airmass", "Seeing", "Flux")
SHEET = "xl/worksheets/sheet1.xml"
BLOCK = 1 << 16


def make(log: Path) -> Figures:
    """Write the log to be filled."""
    import xlsxwriter

    source = random.Random(20261201)
    book = xlsxwriter.Workbook(str(log))
    sheet = book.add_worksheet("Log")
    sheet.write_row(0, 0, [*TEXTS, *NUMBERS])
    for row in range(1, ROWS + 1):
        texts = [
            f"HBN {row:06d}",
            f"{row % 24:02d}:{row % 60:02d}:{row % 59:02d}",
            f"{row % 90:+03d}:{row % 60:02d}",
            source.choice(["quasar", "burst", "supernova", "absorber"]),
            source.choice(["KJ", "OZ", "RQ", "TW"]),
            f"remark {row % 500}",
        ]
        numbers = [
            round(10 ** source.uniform(-2, 1), 4),
            round(source.uniform(15, 25), 2),
            source.random() * 1000,
            1 + source.random(),
            2 * source.random(),
            source.random() * 1e-15,
        ]
        sheet.write_row(row, 0, [*texts, *numbers])
    book.close()
    return {}


def ours(log: Path, result: Path) -> Figures:
    """Fill with this project."""
    start = time.perf_counter()
    from workbook_tools import fill

    fill(log, output=result, add=ADDED)
    return measured(start)


def theirs(log: Path, result: Path) -> Figures:
    """Load, assign as many numbers, save with openpyxl."""
    start = time.perf_counter()
    import openpyxl

    book = openpyxl.load_workbook(log)
    sheet = book.active
    for k, heading in enumerate(ADDED):
        sheet.cell(1, 13 + k, heading)
        for row in range(2, sheet.max_row + 1):
            sheet.cell(row, 13 + k, row * 1.23456789012345)
    book.save(result)
    return measured(start)


def floor(log: Path, filled: Path) -> Figures:
    """Do what nobody can avoid: inflate, parse, format the new numbers, deflate the result."""
    xml = sheet_bytes(filled)
    numbers = [[row * (k + 1.23456789012345) for row in range(ROWS)] for k in range(6)]
    start = time.perf_counter()
    expat.ParserCreate().Parse(sheet_bytes(log), True)
    for column in numbers:
        b"".join([b"%.15g" % value for value in column])
    packer = zlib.compressobj(5, zlib.DEFLATED, -15, strategy=zlib.Z_FILTERED)
    for position in range(0, len(xml), BLOCK):
        packer.compress(xml[position : position + BLOCK])
    packer.flush()
    return measured(start)


def sizes(filled: Path) -> Figures:
    """Compare the size of the filled sheet with what zlib level 6 makes of it."""
    packer = zlib.compressobj(6, zlib.DEFLATED, -15)
    six = len(packer.compress(sheet_bytes(filled))) + len(packer.flush())
    with zipfile.ZipFile(filled) as book:
        return {"size": book.getinfo(SHEET).compress_size / six}


def sheet_bytes(path: Path) -> bytes:
    """Return the one sheet of a workbook."""
    with zipfile.ZipFile(path) as book:
        return book.read(SHEET)


def main(runs: int) -> None:
    """Print the figures with their bars."""
    mine, other, least = [], [], []
    with tempfile.TemporaryDirectory() as folder:
        log, filled, saved = (Path(folder) / f"{name}.xlsx" for name in ("log", "ours", "theirs"))
        apart(MODULE, "make", log)
        for _ in range(runs):
            filled.unlink(missing_ok=True)
            mine.append(apart(MODULE, "ours", log, filled))
            other.append(apart(MODULE, "theirs", log, saved))
            least.append(apart(MODULE, "floor", log, filled))
        size = apart(MODULE, "sizes", filled)["size"]

    for label, figures in (("fill", mine), ("openpyxl", other), ("floor", least)):
        print(line(label, figures))
    print(f"time      {ratio('seconds', mine, other):.3f} of openpyxl's      (bar 0.167)")
    print(f"memory    {ratio('megabytes', mine, other):.3f} of openpyxl's      (bar 0.250)")
    print(f"floor     {ratio('seconds', mine, least):.2f} times it            (aim 1.5)")
    print(f"size      {size:.3f} of zlib level 6   (bar 1.100)")


TASKS = {"make": make, "ours": ours, "theirs": theirs, "floor": floor, "sizes": sizes}

if __name__ == "__main__":
    if sys.argv[1:2] and sys.argv[1] in TASKS:
        print(json.dumps(TASKS[sys.argv[1]](*map(Path, sys.argv[2:]))))
    else:
        main(int(sys.argv[1]) if len(sys.argv) > 1 else 3)
