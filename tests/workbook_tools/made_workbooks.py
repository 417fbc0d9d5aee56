"""Invented observing logs, made to hold what a fill might disturb.

Each has a column of redshifts. The bytes are the same wherever and whenever they are made.
"""

from __future__ import annotations

import datetime
import io
import zipfile
from collections.abc import Callable
from pathlib import Path

import xlsxwriter
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools import made_xml
from tests.workbook_tools.made_xml import Changes, Parts
from tests.workbook_tools.repack import repack

REDSHIFTS = (0.0312, 0.158, 0.3507, 0.7721, 1.0488, 1.5012, 2.1179, 2.7333, 3.6104, 5.0275, 6.3401)
HEADER = ("Object", "Redshift", "Seeing [arcsec]", "Note")
FIRST_ROW = 3  # of the objects, counted from zero; the header stands above
LAST_ROW = FIRST_ROW + len(REDSHIFTS) - 1


def write_log(
    book: Workbook,
    name: str = "Log",
    *,
    headings: tuple[str, ...] = HEADER,
    bare_notes: bool = False,
) -> Worksheet:
    """A sheet with a title in row 1, headings in row 3 and objects from row 4 on."""
    sheet = book.add_worksheet(name)
    two_digits, pale = (
        book.add_format({"num_format": "0.00"}),
        book.add_format({"bg_color": "#EEF"}),
    )
    sheet.write(0, 0, "Programme of invented objects")
    sheet.write_row(FIRST_ROW - 1, 0, headings, book.add_format({"bold": True}))
    for index, redshift in enumerate(REDSHIFTS):
        row = FIRST_ROW + index
        sheet.write(row, 0, f"invented {index + 1}")
        sheet.write(row, 1, redshift)
        sheet.write(row, 2, 0.6 + index / 20, two_digits)
        sheet.write(row, 3, None if bare_notes else "photometric" if index % 3 else "", pale)
    return sheet


def crowded(book: Workbook) -> None:
    """Title, frozen panes, filter, comments, validation, conditional formats, chart, names."""
    sheet = write_log(book, "Log 1")
    sheet.freeze_panes(FIRST_ROW, 1)
    sheet.autofilter(FIRST_ROW - 1, 0, LAST_ROW, 3)
    sheet.set_column("A:A", 18)
    sheet.set_column("C:H", 12)
    sheet.write_comment("B5", "value of a colleague", {"author": "an observer"})
    sheet.data_validation("D4:D14", {"validate": "list", "source": ["photometric", "spectrum"]})
    sheet.conditional_format("B4:B14", {"type": "3_color_scale"})
    red = book.add_format({"font_color": "red"})
    sheet.conditional_format("B4:B14", {"type": "top", "value": 2, "format": red})
    chart = book.add_chart({"type": "scatter"})
    chart.add_series({"categories": "='Log 1'!$B$4:$B$14", "values": "='Log 1'!$C$4:$C$14"})
    sheet.insert_chart("J2", chart)
    sheet.add_sparkline("H4", {"range": "'Log 1'!B4:B14"})
    sheet.write_url("A20", "internal:'Log 1'!B5", string="the fifth")
    book.define_name("Deep", "='Log 1'!$B$11:$B$14")
    sheet.print_area(0, 0, LAST_ROW, 3)


def table_with_totals(book: Workbook) -> None:
    """A table with a row of totals."""
    columns = [
        {"header": HEADER[0], "total_string": "Number"},
        {"header": HEADER[1], "total_function": "count", "total_value": len(REDSHIFTS)},
        {"header": HEADER[2]},
        {"header": HEADER[3]},
    ]
    sheet = write_log(book)
    place = (FIRST_ROW - 1, 0, LAST_ROW + 1, 3)
    sheet.add_table(*place, {"columns": columns, "total_row": True, "name": "Log"})


def table_without_header(book: Workbook) -> None:
    """A table that has no header row, and nothing in the row above it."""
    sheet = write_log(book, headings=())
    sheet.add_table(FIRST_ROW, 0, LAST_ROW, 3, {"header_row": False, "name": "Bare"})


def tables_side_by_side(book: Workbook) -> None:
    """A table that cannot grow because another one touches it."""
    sheet = write_log(book)
    columns = [{"header": text} for text in HEADER]
    sheet.add_table(FIRST_ROW - 1, 0, LAST_ROW, 3, {"columns": columns})
    sheet.add_table(FIRST_ROW - 1, 4, LAST_ROW, 5, {"columns": [{"header": "P"}, {"header": "Q"}]})


def plain(book: Workbook) -> None:
    """A log and nothing else."""
    write_log(book)


def contiguous(book: Workbook) -> None:
    """A log that starts at A1 without a gap, as the sheets without addresses must."""
    sheet = book.add_worksheet("Log")
    sheet.write_row(0, 0, HEADER)
    for index, redshift in enumerate(REDSHIFTS):
        sheet.write_row(index + 1, 0, [f"invented {index + 1}", redshift, 0.8, "seen"])


def a_table(book: Workbook) -> None:
    """A log in a table."""
    columns = [{"header": text} for text in HEADER]
    write_log(book).add_table(FIRST_ROW - 1, 0, LAST_ROW, 3, {"columns": columns})


def sparse(book: Workbook) -> None:
    """Objects with gaps between them, styled cells with nothing in them; and an empty sheet."""
    sheet = write_log(book, bare_notes=True)
    for row in range(FIRST_ROW, LAST_ROW + 1):
        sheet.write_blank(row, 4, None, book.add_format({"bg_color": "#FFD"}))
    book.add_worksheet("Empty")


def wide_columns(book: Workbook) -> None:
    """Column elements up to the last column: styled, hidden, outlined."""
    sheet = write_log(book)
    grey = book.add_format({"bg_color": "#EEEEEE"})
    sheet.set_column("A:C", 14)
    sheet.set_column("D:XFD", 9, grey)
    second = write_log(book, "Hidden right")
    second.set_column("E:XFD", None, None, {"hidden": True})
    third = write_log(book, "Outlined")
    third.set_column("B:G", 11, None, {"level": 1})
    third.set_row(5, 20, grey)


def formulas(book: Workbook) -> None:
    """Formulas to be shared, an array formula with its spill, a dynamic one, readers of columns."""
    sheet = write_log(book)
    last = FIRST_ROW + 4
    for row in range(FIRST_ROW, last):
        sheet.write_formula(row, 4, f"B{row + 1}*2", None, REDSHIFTS[row - FIRST_ROW] * 2)
    sheet.write_array_formula("F4:F7", "{B4:B7+1}", None, 1.0312)
    for row, redshift in enumerate(REDSHIFTS[1:4]):
        sheet.write(FIRST_ROW + 1 + row, 5, redshift + 1)
    other = book.add_worksheet("Summary")
    unique = "=_xlfn.UNIQUE(A4:A14)"
    sheet.write_dynamic_array_formula(LAST_ROW + 3, 0, LAST_ROW + 3, 0, unique, None, "invented 1")
    other.write_formula("B1", "SUM(Log!E:Z)", None, 10)
    other.write_formula("B2", "COUNT(Log!G4:G14)", None, 0)


def merged_1904(book: Workbook) -> None:
    """Dates counted from 1904; merged cells above and beside the objects."""
    sheet = write_log(book)
    sheet.merge_range(0, 0, 0, 6, "Programme of invented objects")
    day = book.add_format({"num_format": "yyyy-mm-dd"})
    sheet.write(FIRST_ROW - 1, 4, "Night")
    for row in range(FIRST_ROW, LAST_ROW + 1):
        sheet.write_datetime(row, 4, datetime.datetime(2026, 3, row), day)
    sheet.merge_range(LAST_ROW + 2, 1, LAST_ROW + 3, 4, "checked twice")


def protected(book: Workbook) -> None:
    """A sheet that is protected, with one range open to all."""
    sheet = write_log(book)
    sheet.protect("not a secret")
    sheet.unprotect_range("D4:D14")


def macro(book: Workbook) -> None:
    """A workbook with macros; the macro part is only a header of the right kind."""
    write_log(book)
    header = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(504)
    book.add_vba_project(io.BytesIO(header), is_stream=True)


def numbers_as_text(book: Workbook) -> None:
    """Redshifts that somebody typed as text among numbers, blanks and remarks."""
    sheet = write_log(book)
    for row, text in ((4, "0.158"), (5, " 0.35 "), (6, "about 0.8"), (7, "n/a")):
        sheet.write_string(row, 1, text)
    sheet.write_blank(8, 1, None, book.add_format({"italic": True}))
    bold = book.add_format({"bold": True})
    sheet.write_rich_string(2, 1, "Red", bold, "shift")


Build = Callable[[Workbook], None]
Change = Callable[[Parts], Changes]
_sheet = made_xml.cells_of
# File name -> what XlsxWriter writes, and what is changed then.
MADE: dict[str, tuple[Build, tuple[Change, ...]]] = {
    "crowded.xlsx": (crowded, ()),
    "table with totals.xlsx": (table_with_totals, ()),
    "table without header.xlsx": (table_without_header, ()),
    "tables side by side.xlsx": (tables_side_by_side, ()),
    "prefixed.xlsx": (a_table, (made_xml.prefixed,)),
    "without addresses.xlsx": (contiguous, (_sheet(made_xml.without_addresses),)),
    "strict.xlsx": (a_table, (made_xml.strict,)),
    "sparse.xlsx": (sparse, (_sheet(made_xml.with_empty_elements),)),
    "wide columns.xlsx": (wide_columns, ()),
    "formulas.xlsx": (formulas, (_sheet(made_xml.with_shared_formulas),)),
    "merged 1904.xlsx": (merged_1904, ()),
    "protected.xlsx": (protected, ()),
    "template.xltx": (plain, (made_xml.as_template,)),
    "macro.xlsm": (macro, ()),
    "oddly written.xlsx": (plain, (_sheet(made_xml.oddly_written),)),
    "without styles.xlsx": (contiguous, (made_xml.without_styles,)),
    "texts in cells.xlsx": (contiguous, ()),
    "numbers as text.xlsx": (numbers_as_text, (made_xml.without_calculation,)),
}


def make(name: str, folder: Path) -> Path:
    """Make one of `MADE` in a folder; the same bytes every time."""
    build, changes = MADE[name]
    raw = io.BytesIO()
    # In constant memory XlsxWriter writes every text into its cell, and no shared strings.
    options = {"constant_memory": "texts in cells" in name, "date_1904": "1904" in name}
    book = xlsxwriter.Workbook(raw, options)
    book.set_properties({"created": datetime.datetime(2026, 1, 1)})
    build(book)
    book.close()
    path = folder / name
    path.write_bytes(raw.getvalue())
    for change in (made_xml.quiet, *changes):
        with zipfile.ZipFile(path) as archive:
            parts = {member: archive.read(member) for member in archive.namelist()}
        repack(path, path, change(parts))
    return path


def make_all(folder: Path) -> list[Path]:
    """Make all of `MADE` in a folder."""
    return [make(name, folder) for name in MADE]
