"""A colleague's sheet of the sample: formulas, charts, a sparkline and a text box."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.samples import summary_formulas
from tests.samples.looks import HEADER, Looks
from tests.samples.programme import CLASSES, Row
from tests.samples.summary_charts import class_chart, lookback_chart
from tests.samples.summary_formulas import Result, log_cells

NAME = "Summary KJ"
HEADER_ROW = 3  # counted from zero
FIRST_ROW = HEADER_ROW + 1
TOTAL_ROW = FIRST_ROW + len(CLASSES)
FIGURES_ROW = TOTAL_ROW + 2
HEADINGS = ("Class", "Objects", "With z", "Mean z", "Mean lookback / Gyr", "Hours")
SHAPES = ("General", "0", "0", "0.00", "0.00", "0.0")


def write_summary_sheet(
    book: Workbook, looks: Looks, rows: Sequence[Row], others: Sequence[Row]
) -> None:
    """Add the sheet.

    Args:
        rows: of the main log.
        others: of the wide-field team.
    """
    sheet = book.add_worksheet(NAME)
    title = looks.of({"bold": True, "font_size": 14, "font_color": "#3B5573"})
    sheet.write("A1", "Where we stand", title)
    remark = "KJ, for the Monday meeting. All formulas; please do not type here."
    sheet.write("A2", remark, looks.of())
    sheet.set_column("A:A", 29)
    sheet.set_column("B:F", 12)
    _write_classes(sheet, looks, rows)
    below = _write_figures(sheet, looks, rows, others)
    sheet.write(below, 0, "Seeing through the season", looks.of())
    sheet.add_sparkline(below, 1, {"range": log_cells("Seeing [arcsec]", len(rows))})
    words = "These figures follow the log by themselves. Shout if one looks off. – KJ"
    sheet.insert_textbox(below + 2, 0, words, {"width": 420, "height": 46})
    night, lookback = (log_cells(one, len(rows)) for one in ("Night", "Lookback time [Gyr]"))
    sheet.insert_chart("H2", lookback_chart(book, night, lookback))
    classes, counts = (f"'{NAME}'!${one}${FIRST_ROW + 1}:${one}${TOTAL_ROW}" for one in "AB")
    sheet.insert_chart("H18", class_chart(book, classes, counts))
    sheet.set_landscape()
    sheet.set_paper(9)  # A4
    sheet.fit_to_pages(1, 1)


def _write_classes(sheet: Worksheet, looks: Looks, rows: Sequence[Row]) -> None:
    sheet.write_row(HEADER_ROW, 0, HEADINGS, looks.of(HEADER))
    sheet.set_row(HEADER_ROW, 30)
    for at, name in enumerate(CLASSES, start=FIRST_ROW):
        of_class = [row for row in rows if row["class"] == name]
        results = summary_formulas.results_of_class(at + 1, of_class, len(rows))
        _write_line(sheet, looks, at, name, results)
    totals = summary_formulas.totals(FIRST_ROW + 1, TOTAL_ROW, rows)
    _write_line(sheet, looks, TOTAL_ROW, "all", totals, {"bold": True, "top": 1})


def _write_line(
    sheet: Worksheet,
    looks: Looks,
    at: int,
    label: str,
    results: Sequence[Result],
    look: dict[str, Any] | None = None,
) -> None:
    extra: dict[str, Any] = look or {}
    sheet.write(at, 0, label, looks.of(extra))
    for index, (formula, value) in enumerate(results, start=1):
        sheet.write_formula(
            at, index, formula, looks.of(extra, {"num_format": SHAPES[index]}), value
        )


def _write_figures(
    sheet: Worksheet, looks: Looks, rows: Sequence[Row], others: Sequence[Row]
) -> int:
    """Write the single figures and return the first free row."""
    figures = summary_formulas.figures_of_log(FIGURES_ROW + 1, rows)
    figures |= summary_formulas.figures_of_others(others)
    for at, (label, (formula, value)) in enumerate(figures.items(), start=FIGURES_ROW):
        shape = {"num_format": "0.00" if isinstance(value, float) else "0", "align": "right"}
        sheet.write(at, 0, label, looks.of())
        sheet.write_formula(at, 1, formula, looks.of(shape), value)
    return FIGURES_ROW + len(figures)
