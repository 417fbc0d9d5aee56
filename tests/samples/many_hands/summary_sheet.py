"""A colleague's sheet that reads what is filled: formulas and a chart."""

from __future__ import annotations

from xlsxwriter.workbook import Workbook

from tests.samples.looks import HEADER, Looks
from tests.samples.many_hands import catalogue_sheet, list_sheet

NAME = "Overview KJ"
_TIMES = f"'{list_sheet.NAME}'!{list_sheet.cells_of('lookback')}"
_AGES = f"'{catalogue_sheet.NAME}'!$H${catalogue_sheet.FIRST_ROW + 1}"
_AGES += f":$H${catalogue_sheet.LAST_ROW + 1}"
# What each formula shows before anything is filled.
FIGURES = (
    ("Rows with a lookback time", f"=COUNT({_TIMES})", 5.0),
    ("Oldest light / Gyr ago", f"=MAX({_TIMES})", 11.562),
    ("Ages in the catalogue", f"=COUNT({_AGES})", 0.0),
)


def write_summary_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    sheet.set_column("A:A", 28)
    sheet.write_row("A1", ("Figure", "Value"), looks.of(HEADER))
    for offset, (label, formula, result) in enumerate(FIGURES, start=1):
        sheet.write(offset, 0, label, looks.of())
        sheet.write_formula(offset, 1, formula, looks.of(), result)
    chart = book.add_chart({"type": "line"})
    chart.add_series(
        {
            "name": "lookback time / Gyr",
            "values": f"={_TIMES}",
            "line": {"none": True},
            "marker": {"type": "diamond", "size": 5},
        }
    )
    chart.set_title({"name": "When the light set out"})
    chart.set_legend({"none": True})
    sheet.insert_chart("D2", chart)
