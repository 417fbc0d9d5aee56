"""A sheet of lookback times with units in the cells and notes in brackets, beside photometry."""

from __future__ import annotations

from dataclasses import dataclass

from xlsxwriter.workbook import Workbook

from epochconv.typed_outcomes import Reason, Remark
from tests.samples.looks import Looks
from tests.samples.many_hands.entries import Entry, write_entry
from tests.samples.many_hands.readings import (
    Reading,
    between,
    left,
    limit,
    pending,
    reads,
    unread,
    within,
)
from workbook_tools.typed_cells import TEXT

UNIT_DIFFERS = "a unit in the cell that differs from the heading's, converted"
NAME = "Times RQ"
GROUPS_ROW, HEADER_ROW = 0, 1  # counted from zero
FIRST_ROW = HEADER_ROW + 1
_LOOK = {"font_name": "Calibri", "font_size": 11}
_HEADER = {**_LOOK, "bold": True, "align": "center", "bg_color": "#F3E7D3", "border": 1}

A_LENGTH = "a length (Mpc) where the heading asks for a time"
TOO_OLD = "lookback time is older than the universe"
"""The report adds how old the universe is, which depends on the parameters."""


@dataclass(frozen=True)
class Row:
    """One row: an object and what was typed as its lookback time in Gyr."""

    name: str
    time: Entry
    reading: Reading


ROWS = (
    Row("HBN 2151+35", 10.9, reads(10.9)),
    Row("HBN 2203-12", "10.9 Gyr", reads(10.9)),
    Row("HBN 2214+06", "13.2Gyr", reads(13.2)),
    Row("HBN 2220-28", "850 Myr", reads(0.85, UNIT_DIFFERS)),
    Row("HBN 2236+19", "10 900 Myr", reads(10.9, Remark.DIGIT_GROUPS, UNIT_DIFFERS)),
    Row("HBN 2242-01", "2.1 billion years", reads(2.1)),
    Row("HBN 2257+24", "10.9 (KJ)", reads(10.9, Remark.NOTE)),
    Row("HBN 2305-37", "10.9(2)", reads(10.9, Remark.NOTE)),
    Row("HBN 2311+13", "10.9 ± 0.2 Gyr", within(10.9, 0.2)),
    Row("HBN 2326-16", "(10.9 ± 0.2) Gyr", within(10.9, 0.2)),
    Row("HBN 2334+29", "10.9 Gyr ± 150 Myr", within(10.9, 0.15)),
    Row("HBN 2340-05", "12.9 +0.1/-0.2 Gyr", between(12.9, 0.1, 0.2, Remark.ASYMMETRIC)),
    Row("HBN 2352+08", "13.7 ± 0.2", within(13.7, 0.2)),
    Row("HBN 2359-33", "< 12 Gyr", limit("<", 12.0)),
    Row("HBN 0004-20", "450 Mpc", left(A_LENGTH, "450 Mpc")),
    Row("HBN 0012+37", "13.2 Gyr ago", unread("13.2 Gyr ago", Reason.WORDS)),
    Row("HBN 0027-15", "≈ 3 bn ly", unread("≈ 3 bn ly", Reason.WORDS)),
    Row("HBN 0035+04", "10,900", unread("10,900", Reason.COMMA_OR_GROUPS)),
    Row("HBN 0049-26", "14.2 Gyr", left(TOO_OLD, "14.2 Gyr")),
    Row("HBN 0057+18", 14.2, left(TOO_OLD, "14.2")),
    Row("HBN 0108-07", "9.81", reads(9.81, TEXT)),
    Row("HBN 0122+27", "TBC", pending("TBC")),
)
LAST_ROW = FIRST_ROW + len(ROWS) - 1
BANDS = "griz"
# Apparent magnitudes that somebody typed for the first few objects.
MAGNITUDES = (
    (19.82, 19.41, 19.27, 19.2),
    (20.65, 20.11, 19.98, 19.9),
    (22.4, 21.63, 21.02, 20.85),
    (21.07, 20.94, 20.9, 20.86),
)
COLUMNS = (
    ("Object", 14.0),
    *((band, 7.0) for band in BANDS),
    ("Lookback time [Gyr]", 20.0),
    ("Redshift", 10.0),
    ("Redshift upper error", 12.0),
    ("Redshift lower error", 12.0),
    ("D_C [h\u207b\u00b9 Mpc]", 12.0),
    ("T_CMB\n(K)", 9.0),
)
TIME = 1 + len(BANDS)


def write_times_sheet(book: Workbook, looks: Looks) -> None:
    """Add the sheet."""
    sheet = book.add_worksheet(NAME)
    sheet.merge_range(GROUPS_ROW, 1, GROUPS_ROW, len(BANDS), "Photometry", looks.of(_HEADER))
    for index, (heading, width) in enumerate(COLUMNS):
        sheet.set_column(index, index, width)
        write_entry(sheet, looks, (HEADER_ROW, index), heading, {**_HEADER, "text_wrap": True})
    for offset, row in enumerate(ROWS):
        at = FIRST_ROW + offset
        write_entry(sheet, looks, (at, 0), row.name, _LOOK)
        write_entry(sheet, looks, (at, TIME), row.time, {**_LOOK, "align": "right"})
        for band, magnitude in enumerate(MAGNITUDES[offset] if offset < len(MAGNITUDES) else ()):
            look = {**_LOOK, "num_format": "0.00"}
            write_entry(sheet, looks, (at, 1 + band), magnitude, look)
    sheet.set_row(HEADER_ROW, 32)
    sheet.write_comment(HEADER_ROW, TIME, "RQ: unit in the cell if it is not Gyr. (Or if it is.)")
    sheet.freeze_panes(FIRST_ROW, 1)
