"""The formulas of the colleague's sheet, each with the result that a spreadsheet stores with it."""

from __future__ import annotations

import statistics
from collections.abc import Sequence

from tests.samples import log_sheet, wide_field_sheet
from tests.samples.log_sheet import TABLE
from tests.samples.programme import Row

# A formula and what it shows.
Result = tuple[str, float | str]


def log_cells(heading: str, count: int) -> str:
    """The cells of a column of the log, with the sheet."""
    return f"'{log_sheet.NAME}'!{log_sheet.cells_of(heading, count)}"


def _numbers(rows: Sequence[Row], field: str) -> list[float]:
    """What a function over a range sees of a column: its numbers, not texts that look like one."""
    return [value for row in rows if isinstance(value := row[field], float)]


def results_of_class(line: int, rows: Sequence[Row], count: int) -> list[Result]:
    """Formulas of one line of the table of classes.

    Args:
        line: its row, counted from 1.
        rows: those of the class.
        count: of all rows of the log.
    """
    redshifts, seconds = _numbers(rows, "z"), _numbers(rows, "exposure")
    class_cells, lookbacks = log_cells("Class", count), log_cells("Lookback time [Gyr]", count)
    return [
        (f"COUNTIF({TABLE}[Class],A{line})", len(rows)),
        (f"SUMPRODUCT(({TABLE}[Class]=A{line})*ISNUMBER({TABLE}[z]))", len(redshifts)),
        (f"SUMIF({TABLE}[Class],A{line},{TABLE}[z])/C{line}", statistics.fmean(redshifts)),
        (
            f"AVERAGEIF({class_cells},A{line},{lookbacks})",
            statistics.fmean(_numbers(rows, "lookback")),
        ),
        (f"SUMIF({TABLE}[Class],A{line},{TABLE}[Exposure '[s']])/3600", sum(seconds) / 3600),
    ]


def totals(first: int, last: int, rows: Sequence[Row]) -> list[Result]:
    """Formulas of the line below lines `first` to `last`, counted from 1."""
    redshifts, lookbacks = _numbers(rows, "z"), _numbers(rows, "lookback")
    hours = sum(_numbers(rows, "exposure")) / 3600
    return [
        (f"SUM(B{first}:B{last})", len(rows)),
        (f"SUM(C{first}:C{last})", len(redshifts)),
        ("AVERAGE(AllRedshifts)", statistics.fmean(redshifts)),
        ("AVERAGE(Lookbacks)", statistics.fmean(lookbacks)),
        (f"SUM(F{first}:F{last})", hours),
    ]


def figures_of_log(line: int, rows: Sequence[Row]) -> dict[str, Result]:
    """Single figures by label, the first in row `line`, counted from 1."""
    redshifts, lookbacks = _numbers(rows, "z"), _numbers(rows, "lookback")
    furthest = max(redshifts)
    name = next(str(row["object"]) for row in rows if row["z"] == furthest)
    object_of = f"INDEX({TABLE}[Object],MATCH(B{line + 3},AllRedshifts,0))"
    ages = log_cells("Age (Gyr)", len(rows))
    seeing = log_cells("Seeing [arcsec]", len(rows))
    return {
        "Rows with a lookback time": (f"COUNT({TABLE}[Lookback time '[Gyr']])", len(lookbacks)),
        "Rows without": ("COUNTBLANK(Lookbacks)", len(rows) - len(lookbacks)),
        "Rows with an age": (f"COUNT({ages})", 0),
        "Furthest z": ("MAX(AllRedshifts)", furthest),
        "Its object": (object_of, name),
        "Oldest light / Gyr ago": ("MAX(Lookbacks)", max(lookbacks)),
        "Median seeing / arcsec": (
            f"MEDIAN({seeing})",
            statistics.median(_numbers(rows, "seeing")),
        ),
    }


def figures_of_others(rows: Sequence[Row]) -> dict[str, Result]:
    """Single figures about the other team's sheet, by label."""

    def cells(letter: str) -> str:
        first = wide_field_sheet.FIRST_ROW + 1
        return f"'{wide_field_sheet.NAME}'!{letter}{first}:{letter}{first + len(rows) - 1}"

    return {
        "Wide-field: objects": (f"COUNTA({cells('A')})", len(rows)),
        "Wide-field: median z": (
            f"MEDIAN({cells('F')})",
            statistics.median(_numbers(rows, "z")),
        ),
        "Wide-field: rows with an age": (f"COUNT({cells('I')})", 0),
    }
