"""Build sample_sheets/observing_log.xlsx, the same bytes every time.

Run from the top of the project: python -m tests.samples.build_observing_log
"""

from __future__ import annotations

import datetime
import re
import tempfile
from pathlib import Path

import xlsxwriter
from xlsxwriter.workbook import Workbook

from tests.samples import log_sheet, summary_sheet, wide_field_sheet
from tests.samples.looks import Looks
from tests.samples.programme import CLASSES, HERE, night_log, wide_field
from tests.workbook_tools.repack import part, repack, swapped

SAMPLE = HERE.parents[1] / "sample_sheets" / "observing_log.xlsx"
BUILT_WITH = "3.3.1"  # the XlsxWriter that made the committed file
LISTS = "Lists"
_NUMBER = re.compile(rb"<v>(-?[0-9.]+(?:E[-+]?[0-9]+)?)</v>")
LAST_EDIT = datetime.datetime(2026, 11, 9, 10, 42)


def build(path: Path) -> None:
    """Write the sample workbook to `path`, replacing what is there."""
    with tempfile.TemporaryDirectory() as folder:
        raw = Path(folder, "raw.xlsx")
        book = xlsxwriter.Workbook(raw)
        book.set_properties(
            {"title": "Hobnail night log", "author": "the Hobnail teams", "created": LAST_EDIT}
        )
        rows, others, looks = night_log(), wide_field(), Looks(book)
        log_sheet.write_log_sheet(book, looks, rows)
        wide_field_sheet.write_wide_field_sheet(book, looks, others)
        summary_sheet.write_summary_sheet(book, looks, rows, others)
        _write_lists(book, looks)
        _define_names(book, len(rows))
        book.close()
        repack(raw, path, _as_saved_by_hand(raw, len(book.worksheets())))


def _as_saved_by_hand(raw: Path, sheets: int) -> dict[str, bytes | None]:
    """The parts that a spreadsheet program writes otherwise than XlsxWriter."""
    workbook = "xl/workbook.xml"
    # A log that people save does not order the next program to recalculate it.
    parts: dict[str, bytes | None] = {
        workbook: swapped(part(raw, workbook), ' fullCalcOnLoad="1"', "")
    }
    for number in range(1, sheets + 1):
        name = f"xl/worksheets/sheet{number}.xml"
        parts[name] = _NUMBER.sub(_with_seventeen_digits, part(raw, name))
    return parts


def _with_seventeen_digits(value: re.Match[bytes]) -> bytes:
    """Excel keeps 15 digits of what is typed and stores the nearest double with 17."""
    typed = float(f"{float(value[1]):.15g}")
    return b"<v>%s</v>" % f"{typed:.17G}".encode()


def _write_lists(book: Workbook, looks: Looks) -> None:
    sheet = book.add_worksheet(LISTS)
    sheet.write("A1", "classes", looks.of({"bold": True}))
    sheet.write_column("A2", CLASSES, looks.of())
    sheet.hide()


def _define_names(book: Workbook, count: int) -> None:
    log = f"='{log_sheet.NAME}'!"
    book.define_name("AllRedshifts", log + log_sheet.cells_of("z", count))
    book.define_name("Lookbacks", log + log_sheet.cells_of("Lookback time [Gyr]", count))
    book.define_name("ClassList", f"={LISTS}!$A$2:$A${1 + len(CLASSES)}")


if __name__ == "__main__":
    build(SAMPLE)
    print(f"built {SAMPLE.name}")
