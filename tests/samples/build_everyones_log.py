"""Build sample_sheets/log_that_everyone_typed_into.xlsx, the same bytes every time.

Run from the top of the project: python -m tests.samples.build_everyones_log
"""

from __future__ import annotations

import datetime
import tempfile
from pathlib import Path

import xlsxwriter

from tests.samples.looks import Looks
from tests.samples.many_hands import (
    catalogue_sheet,
    commas_sheet,
    list_sheet,
    neighbours_sheet,
    summary_sheet,
    times_sheet,
)
from tests.samples.many_hands.entries import NEVER_COMPUTED
from tests.samples.programme import HERE
from tests.samples.saved_by_hand import as_saved_by_hand
from tests.workbook_tools.repack import repack, swapped

SAMPLE = HERE.parents[1] / "sample_sheets" / "log_that_everyone_typed_into.xlsx"
LAST_EDIT = datetime.datetime(2026, 11, 27, 16, 5)


def build(path: Path) -> None:
    """Write the sample workbook to `path`, replacing what is there."""
    with tempfile.TemporaryDirectory() as folder:
        raw = Path(folder, "raw.xlsx")
        book = xlsxwriter.Workbook(raw)
        book.set_properties(
            {"title": "Hobnail list", "author": "the Hobnail teams", "created": LAST_EDIT}
        )
        looks = Looks(book)
        list_sheet.write_list_sheet(book, looks)
        catalogue_sheet.write_catalogue_sheet(book, looks)
        commas_sheet.write_commas_sheet(book, looks)
        times_sheet.write_times_sheet(book, looks)
        neighbours_sheet.write_neighbours_sheet(book, looks)
        summary_sheet.write_summary_sheet(book, looks)
        book.define_name("Redshifts", f"='{list_sheet.NAME}'!{list_sheet.cells_of('z')}")
        book.define_name("Lookbacks", f"='{list_sheet.NAME}'!{list_sheet.cells_of('lookback')}")
        book.close()
        parts = as_saved_by_hand(raw, len(book.worksheets()))
        first = "xl/worksheets/sheet1.xml"
        parts[first] = swapped(parts[first] or b"", f"<v>{NEVER_COMPUTED}</v>", "")
        repack(raw, path, parts)


if __name__ == "__main__":
    build(SAMPLE)
    print(f"built {SAMPLE.name}")
