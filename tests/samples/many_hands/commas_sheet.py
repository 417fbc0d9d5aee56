"""A sheet whose hand types decimal commas: distances, from which redshifts are wanted."""

from __future__ import annotations

import math
from dataclasses import dataclass

from xlsxwriter.workbook import Workbook

from epochconv.typed_outcomes import Reason, Remark
from tests.samples.looks import Looks
from tests.samples.many_hands.entries import Entry, write_entry
from tests.samples.many_hands.readings import (
    NOTHING,
    Reading,
    between,
    left,
    limit,
    no_value,
    reads,
    unread,
    within,
)
from workbook_tools.typed_cells import TEXT

UNIT_DIFFERS = "a unit in the cell that differs from the heading's, converted"
NAME = "Komma PM"
HEADER_ROW = 2  # counted from zero
FIRST_ROW = HEADER_ROW + 1
_SERIF = {"font_name": "Cambria", "font_size": 10}
_HEADER = {**_SERIF, "bold": True, "italic": True, "bottom": 2, "text_wrap": True}
# Metres in a light-year (of Julian years) and in a parsec (IAU 2015 resolution B2).
MPC_PER_GLY = 1e3 * 9_460_730_472_580_800 / (648_000 / math.pi * 149_597_870_700)


@dataclass(frozen=True)
class Row:
    """One row: an object and what was typed as its comoving distance in Mpc."""

    name: str
    distance: Entry
    reading: Reading


A_TIME = "a time (Gyr) where the heading asks for a length"
BEYOND = "comoving distance is beyond the particle horizon"
"""The report adds where the horizon is, which depends on the parameters."""

ROWS = (
    Row("HBN 1846-21", 1234.5, reads(1234.5)),
    Row("HBN 1858+30", "812,5", reads(812.5, TEXT)),
    Row("HBN 1904-08", "812,5 ± 3,2", within(812.5, 3.2)),
    Row("HBN 1917+16", "3.412,7", reads(3412.7, TEXT)),
    Row("HBN 1925-33", "3 412,7", reads(3412.7, Remark.DIGIT_GROUPS)),
    Row("HBN 1931+05", "5\u202f120", reads(5120.0, Remark.DIGIT_GROUPS)),
    Row("HBN 1943-27", "2.345", unread("2.345", Reason.POINT_OR_GROUPS)),
    Row("HBN 1950+22", "1234.5", reads(1234.5, Remark.DECIMAL_POINT)),
    Row("HBN 2006-13", "6.100,0(9)", within(6100.0, 0.9)),
    Row("HBN 2018+39", "450,0 Mpc", reads(450.0)),
    Row("HBN 2027-04", "1,5 Gpc", reads(1500.0, UNIT_DIFFERS)),
    Row(
        "HBN 2034+10",
        "9,2 +0,3/\u22120,2 Gly",
        between(
            *(number * MPC_PER_GLY for number in (9.2, 0.3, 0.2)), Remark.ASYMMETRIC, UNIT_DIFFERS
        ),
    ),
    Row("HBN 2041-19", "> 8500", limit(">", 8500.0)),
    Row("HBN 2053+28", "10,9 Gyr", left(A_TIME, "10,9 Gyr")),
    Row("HBN 2105-35", "52 000", left(BEYOND, "52 000")),
    Row("HBN 2116+01", "7,5e3", reads(7500.0, TEXT)),
    Row("HBN 2122-24", "1,2; 3,4", unread("1,2; 3,4", Reason.CANDIDATES)),
    Row("HBN 2138+17", "—", no_value("—")),
    Row("HBN 2149-09", None, NOTHING),
)
LAST_ROW = FIRST_ROW + len(ROWS) - 1
COLUMNS = (
    ("Objekt", 14.0),
    ("D_C / Mpc", 20.0),
    ("z", 10.0),
    ("σ_z", 9.0),
    ("Age (Myr)", 11.0),
    ("Bemerkung", 20.0),
)


def write_commas_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    sheet.write("A1", "PM – Entfernungen aus dem Ordner", looks.of(_SERIF, {"font_size": 13}))
    for index, (heading, width) in enumerate(COLUMNS):
        sheet.set_column(index, index, width)
        write_entry(sheet, looks, (HEADER_ROW, index), heading, _HEADER)
    for offset, row in enumerate(ROWS):
        at = FIRST_ROW + offset
        write_entry(sheet, looks, (at, 0), row.name, _SERIF)
        write_entry(sheet, looks, (at, 1), row.distance, {**_SERIF, "align": "right"})
    sheet.data_validation(
        FIRST_ROW,
        1,
        LAST_ROW,
        1,
        {"validate": "any", "input_title": "Mpc", "input_message": "Komma, nicht Punkt."},
    )
