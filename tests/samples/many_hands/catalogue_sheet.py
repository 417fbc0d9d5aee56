"""A sheet kept like a catalogue: flags, upper and lower errors, codes for missing values."""

from __future__ import annotations

from dataclasses import dataclass

from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

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
)
from workbook_tools.typed_cells import TEXT

ONE_SIDED = "an error on one side only, which is not used"
UNREAD_ERROR = "an error beside it that is not read, and is not used"
SIGNS_DIFFER = "a limit (<) whose flag says > (B)"
UNKNOWN_FLAG = "a limit flag that is not known here: u (B)"
NAME = "Catalogue OZ"
HEADER_ROW = 1  # counted from zero
FIRST_ROW = HEADER_ROW + 1
SANS = {"font_name": "Arial", "font_size": 9}
_HEADER = {**SANS, "bold": True, "bottom": 1, "bg_color": "#E4EDE0"}


@dataclass(frozen=True)
class Row:
    """One row of the catalogue.

    Attributes:
        name: of the object.
        flag, z, upper, lower: sign of a limit, redshift, its upper and its lower error.
        reading: what they are to be read as together.
        quality, reference: carried and never interpreted.
        note: in the last column.
    """

    name: str
    flag: Entry
    z: Entry
    upper: Entry
    lower: Entry
    reading: Reading
    quality: int = 1
    reference: int = 4
    note: str = ""


ROWS = (
    Row("HBN 1517+21", None, 0.0521, 0.0004, 0.0003, between(0.0521, 0.0004, 0.0003)),
    Row("HBN 1528-05", None, 0.3712, 0.0011, 0.0011, between(0.3712, 0.0011, 0.0011)),
    Row("HBN 1534+33", None, 1.0405, None, None, reads(1.0405)),
    Row("HBN 1541-18", None, 1.62, 0.05, 0.04, between(1.62, 0.05, 0.04), 2),
    Row("HBN 1556+07", "<", 0.15, None, None, limit("<", 0.15), 3),
    Row("HBN 1603-29", ">", 5.9, None, None, limit(">", 5.9), 3),
    Row("HBN 1612+14", ">", 4.75, 0.2, 0.2, limit(">", 4.75), 3, note="errors of the drop-out"),
    Row("HBN 1620-36", "<=", 2.4, None, None, limit("≤", 2.4), 3),
    Row("HBN 1635+25", ">", -99, -99, -99, no_value("-99"), 8),
    Row("HBN 1647-11", None, -99, -99, -99, no_value("-99"), 8),
    # Hidden by the filter, which is only a view.
    Row("HBN 1649+40", None, 1.93, 0.01, 0.01, between(1.93, 0.01, 0.01), 9, note="bad sky"),
    Row("HBN 1651+02", None, 0.8801, -99, -99, reads(0.8801), 2),
    Row("HBN 1709-23", None, 2.031, 0.006, -0.004, between(2.031, 0.006, 0.004)),
    Row("HBN 1713+38", None, 3.3, 0.1, None, reads(3.3, ONE_SIDED), 2),
    Row("HBN 1726-14", None, "1.781", 0.002, 0.002, between(1.781, 0.002, 0.002, TEXT)),
    Row("HBN 1738+19", None, "<0.35", None, None, limit("<", 0.35), 3, note="sign in the cell"),
    Row("HBN 1744-30", ">", "<0.35", None, None, left(SIGNS_DIFFER, "<0.35"), 3),
    Row(
        "HBN 1752+08",
        "u",
        0.9,
        0.1,
        0.1,
        left(UNKNOWN_FLAG, "0.9"),
        3,
        note="u for unsure",
    ),
    Row("HBN 1807-02", None, "2.6(?)", None, None, reads(2.6, Remark.UNCERTAIN), 3),
    Row("HBN 1811+44", None, "2.6(b)", None, None, unread("2.6(b)", Reason.BRACKET), 3),
    Row("HBN 1815+27", None, 0.664, "0.02 or so", 0.02, reads(0.664, UNREAD_ERROR, ONE_SIDED), 2),
    Row("HBN 1823-17", None, None, None, None, NOTHING, 8, note="not yet observed"),
    Row("HBN 1839+11", None, 6.31, 0.04, 0.06, between(6.31, 0.04, 0.06), 1, 7),
)
LAST_ROW = FIRST_ROW + len(ROWS) - 1
# Heading and width; the first ones hold the fields of a row in their order.
COLUMNS = (
    ("Name", 13.0),
    ("l_zCMB", 6.5),
    ("zCMB", 8.0),
    ("E_zCMB", 7.5),
    ("e_zCMB", 7.5),
    ("q_zCMB", 7.5),
    ("r_zCMB", 7.5),
    ("Age [Gyr]", 9.0),
    ("l_Age", 6.0),
    ("E_Age", 7.5),
    ("e_Age", 7.5),
    ("D_L / Mpc", 10.0),
    ("e_D_L", 9.0),
    ("t_L (Gyr)", 8.0),
    ("l_t_L", 6.0),
    ("D_A (Mpc)", 9.0),
    ("scale factor", 9.0),
    ("Remarks", 24.0),
)
HIDDEN_BY_FILTER = 9  # the quality whose rows the filter hides


def write_catalogue_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    head = "OZ: flags and errors as in a catalogue; -99 = nothing there"
    sheet.write("A1", head, looks.of(SANS, {"italic": True}))
    for index, (heading, width) in enumerate(COLUMNS):
        sheet.set_column(index, index, width)
        sheet.write_string(HEADER_ROW, index, heading, looks.of(_HEADER))
    for offset, row in enumerate(ROWS):
        _write_row(sheet, looks, FIRST_ROW + offset, row)
    sheet.autofilter(HEADER_ROW, 0, LAST_ROW, len(COLUMNS) - 1)
    sheet.filter_column(5, f"x != {HIDDEN_BY_FILTER}")
    faint = book.add_format({"font_color": "#7F7F7F"})
    rule = {"type": "cell", "criteria": "=", "value": -99, "format": faint}
    sheet.conditional_format(FIRST_ROW, 2, LAST_ROW, 4, rule)
    sheet.write_comment(HEADER_ROW, 1, "OZ: < or > turns the number beside it into a limit.")
    sheet.freeze_panes(FIRST_ROW, 1)


def _write_row(sheet: Worksheet, looks: Looks, at: int, row: Row) -> None:
    if row.quality == HIDDEN_BY_FILTER:
        sheet.set_row(at, None, None, {"hidden": True})
    fields: tuple[Entry, ...] = (
        *(row.name, row.flag, row.z, row.upper, row.lower),
        *(row.quality, row.reference),
    )
    for index, entry in enumerate(fields):
        write_entry(sheet, looks, (at, index), entry, SANS)
    if row.note:
        write_entry(sheet, looks, (at, len(COLUMNS) - 1), row.note, SANS)
