"""Build sample_sheets/observing_log.xlsx, the same bytes every time.

Run from the top of the project: python -m tests.samples.build_observing_log
"""

from __future__ import annotations

import datetime
import tempfile
from pathlib import Path

import xlsxwriter
from xlsxwriter.workbook import Workbook

from tests.samples import log_sheet, summary_sheet, wide_field_sheet
from tests.samples.looks import Looks
from tests.samples.programme import CLASSES, HERE, night_log, wide_field
from tests.samples.saved_by_hand import as_saved_by_hand
from tests.workbook_tools.repack import repack

SAMPLE = HERE.parents[1] / "sample_sheets" / "observing_log.xlsx"
BUILT_WITH = "3.3.1"  # the XlsxWriter that made the committed file
LISTS = "Lists"
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
        repack(raw, path, as_saved_by_hand(raw, len(book.worksheets())))


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
