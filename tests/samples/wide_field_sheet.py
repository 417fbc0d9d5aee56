"""The second sheet of the sample: another team's log, without a table and in other words."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from typing import Any

from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.samples.looks import DATE, HEADER, Looks
from tests.samples.programme import Row

NAME = "Wide-field 2025"
HEADER_ROW = 3  # counted from zero
FIRST_ROW = HEADER_ROW + 1
# Heading, field ("" where nobody typed yet), width, number format.
COLUMNS: tuple[tuple[str, str, float, str], ...] = (
    ("Target", "target", 16, "General"),
    ("Type", "type", 13, "General"),
    ("Date (UT)", "night", 11, DATE["num_format"]),
    ("r [mag]", "r", 8, "0.00"),
    ("g−r", "colour", 7, "0.00"),
    ("Redshift", "z", 9, "General"),
    ("q", "quality", 5, "General"),
    ("scale factor", "", 9, "General"),
    ("Age of the universe (Gyr)", "", 13, "General"),
    ("Comoving distance\n(Gly)", "", 12, "General"),
    ("Distance modulus [mag]", "", 11, "0.00"),
    ("t_exp (min)", "minutes", 11, "0"),
    ("By", "by", 6, "General"),
    ("Remarks", "remarks", 28, "General"),
)
FILTERED_OUT = "C"  # the quality whose rows the filter hides
SANS = {"font_name": "Arial", "font_size": 9}
PALE = {"bg_color": "#E4EDE0", "font_color": "#000000", "top": 1}


def write_wide_field_sheet(book: Workbook, looks: Looks, rows: Sequence[Row]) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    header = looks.of(HEADER, SANS, PALE)
    sheet.write("A1", "Wide-field team, 2025", looks.of(SANS, {"bold": True, "font_size": 12}))
    sheet.write("A2", "All spectra reduced by EL; ask UB about r and g−r.", looks.of(SANS))
    sheet.merge_range("D3:E3", "photometry", header)
    sheet.merge_range("H3:K3", "still to be derived", header)
    for index, (heading, _, width, _) in enumerate(COLUMNS):
        sheet.set_column(index, index, width)
        sheet.write_string(HEADER_ROW, index, heading, header)
    sheet.set_row(HEADER_ROW, 38)
    for offset, row in enumerate(rows):
        _write_row(sheet, looks, FIRST_ROW + offset, row)
    last_row = FIRST_ROW + len(rows) - 1
    sheet.write(
        last_row + 2, 0, "q as in the main log. Rows of q = C are filtered.", looks.of(SANS)
    )
    sheet.write_comment(HEADER_ROW, 7, "EL: 1/(1+z), for the talk.", {"author": "EL"})
    sheet.autofilter(HEADER_ROW, 0, last_row, len(COLUMNS) - 1)
    sheet.filter_column(6, f"x != {FILTERED_OUT}")
    faint = book.add_format({"font_color": "#7F7F7F"})
    rule = {"type": "cell", "criteria": ">", "value": 22, "format": faint}
    sheet.conditional_format(FIRST_ROW, 3, last_row, 3, rule)
    sheet.freeze_panes(FIRST_ROW, 1)
    sheet.set_landscape()
    sheet.set_paper(9)  # A4
    sheet.fit_to_pages(1, 0)


def _write_row(sheet: Worksheet, looks: Looks, at: int, row: Row) -> None:
    if row["quality"] == FILTERED_OUT:
        sheet.set_row(at, None, None, {"hidden": True})
    for index, (_, name, _, number_format) in enumerate(COLUMNS):
        value = row[name] if name else None
        centred: dict[str, Any] = {"align": "center"} if name in ("night", "quality", "by") else {}
        look = looks.of(SANS, {"num_format": number_format}, centred)
        if isinstance(value, datetime.date):
            sheet.write_datetime(at, index, value, look)
        elif value is not None:
            sheet.write(at, index, value, look)
