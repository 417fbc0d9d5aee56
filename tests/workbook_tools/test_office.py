"""The bridge to LibreOffice gives stored values of all sheets of all workbooks."""

from __future__ import annotations

from pathlib import Path

import pytest
import xlsxwriter

from tests.workbook_tools.office import convert_to_csv, needs_office, to_pdf

pytestmark = [pytest.mark.long, needs_office]


def write_book(path: Path, value: float) -> Path:
    path.parent.mkdir(exist_ok=True)
    book = xlsxwriter.Workbook(path)
    sheet = book.add_worksheet("Night log")
    sheet.write(0, 0, 'Distance "as typed", Mpc')
    sheet.write(1, 1, value, book.add_format({"num_format": "0.0"}))
    book.add_worksheet("é-2").hide()
    book.close()
    return path


def test_all_sheets_of_all_workbooks_come_with_stored_values(tmp_path: Path) -> None:
    first = write_book(tmp_path / "one" / "log.xlsx", 13.7869012345678)
    second = write_book(tmp_path / "two" / "log.xlsx", 1.5e-300)
    broken = tmp_path / "broken.xlsx"
    broken.write_bytes(b"PK\3\4 no workbook")
    shown = convert_to_csv([first, broken, second])
    assert set(shown) == {first, second}
    assert list(shown[first]) == ["Night log", "é-2"]
    head = ['Distance "as typed", Mpc', ""]
    assert shown[first]["Night log"] == [head, ["", "13.7869012345678"]]
    assert shown[second]["Night log"] == [head, ["", "1.5E-300"]]


def test_a_workbook_is_printed(tmp_path: Path) -> None:
    book = write_book(tmp_path / "in" / "log.xlsx", 1.5)
    assert to_pdf(book, tmp_path).read_bytes().startswith(b"%PDF")


def test_a_workbook_that_cannot_be_loaded_is_not_printed(tmp_path: Path) -> None:
    broken = tmp_path / "broken.xlsx"
    broken.write_bytes(b"PK\3\4 no workbook")
    with pytest.raises(FileNotFoundError):
        to_pdf(broken, tmp_path)
