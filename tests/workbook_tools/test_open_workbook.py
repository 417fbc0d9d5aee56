"""A workbook opened: which of its sheets may be filled, and what reading them needs."""

from __future__ import annotations

from pathlib import Path

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.loose_parts import MAIN, relations
from tests.workbook_tools.made_workbooks import make
from tests.workbook_tools.repack import repack
from tests.workbook_tools.small_logs import SHEET, WORKBOOK, with_parts, write_log
from tests.workbook_tools.small_sheets import request
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.open_workbook import OpenWorkbook


def several(book: Workbook, sheet: Worksheet) -> None:
    book.get_worksheet_by_name("Hidden").hide()
    book.get_worksheet_by_name("Deep").very_hidden()
    chart = book.add_chart({"type": "line"})
    chart.add_series({"values": "=Log!$B$2:$B$4"})
    book.add_chartsheet("Picture").set_chart(chart)


@pytest.fixture
def log(tmp_path: Path) -> OpenWorkbook:
    more = {"Hidden": [["z"]], "Deep": [["z"]], "Spring": [["z"]]}
    return OpenWorkbook(write_log(tmp_path / "log.xlsx", dress=several, more=more))


def test_visible_worksheets_may_be_filled(log: OpenWorkbook) -> None:
    assert [sheet.name for sheet in log.sheets(None)] == ["Log", "Spring"]


@pytest.mark.parametrize("name", ["Hidden", "deep", "SPRING"])
def test_any_worksheet_can_be_named(log: OpenWorkbook, name: str) -> None:
    assert [sheet.name.lower() for sheet in log.sheets(name)] == [name.lower()]


def test_a_sheet_that_is_not_there_is_refused_with_those_that_are(log: OpenWorkbook) -> None:
    words = "log.xlsx has no sheet 'Autumn'; it has 'Log', 'Hidden', 'Deep', 'Spring', 'Picture'"
    with pytest.raises(UsageError) as caught:
        log.sheets("Autumn")
    assert str(caught.value) == words


def test_a_sheet_without_cells_is_refused(log: OpenWorkbook) -> None:
    with pytest.raises(Refusal, match="sheet 'Picture' is a chartsheet and holds no cells to fill"):
        log.sheets("Picture")


def test_texts_dates_and_tables_are_those_of_the_workbook(tmp_path: Path) -> None:
    workbook = OpenWorkbook(make("table with totals.xlsx", tmp_path))
    reading = workbook.reading(workbook.sheets("Log")[0], request())
    assert reading.texts[1] == "Object"
    assert [table.name for table in reading.tables] == ["Log"]
    merged = OpenWorkbook(make("merged 1904.xlsx", tmp_path))
    night = merged.reading(merged.sheets(None)[0], request())
    (days,) = night.columns([5])
    assert (
        days.reasons[0]
        == "a date that a spreadsheet program made of something else, which is lost; type it again"
    )


def test_where_a_workbook_has_no_styles_nothing_is_a_date(tmp_path: Path) -> None:
    workbook = OpenWorkbook(make("without styles.xlsx", tmp_path))
    reading = workbook.reading(workbook.sheets(None)[0], request())
    (redshifts,) = reading.columns([2])
    assert not redshifts.reasons


def test_a_text_without_a_list_of_texts_is_refused(tmp_path: Path) -> None:
    path = write_log(tmp_path / "log.xlsx", rows=[[1.0]])
    with_parts(path, sheet=('<c r="A1">', '<c r="A1" t="s">'))
    workbook = OpenWorkbook(path)
    with pytest.raises(Refusal, match=r"log\.xlsx: a cell shows text number 1, but the workbook"):
        workbook.reading(workbook.sheets(None)[0], request())


def test_a_part_that_is_held_is_not_read_again(log: OpenWorkbook) -> None:
    assert log.read(WORKBOOK) == log.archive.read(WORKBOOK)
    log.hold(SHEET, b"<kept/>")
    assert log.read(SHEET) == b"<kept/>"
    found = log.find(SHEET.upper())
    assert found is not None
    assert found.name == SHEET


def test_pivot_tables_are_kept_free(tmp_path: Path) -> None:
    path = write_log(tmp_path / "log.xlsx")
    link = relations(("rId1", "pivotTable", "../pivotTables/pivotTable1.xml"))
    pivot = f'<pivotTableDefinition xmlns="{MAIN}"><location ref="D1:E9"/></pivotTableDefinition>'
    parts = {
        "xl/worksheets/_rels/sheet1.xml.rels": link.encode(),
        "xl/pivotTables/pivotTable1.xml": pivot.encode(),
    }
    workbook = OpenWorkbook(repack(path, path, parts))
    reading = workbook.reading(workbook.sheets(None)[0], request())
    assert [one.a1 for one in reading.blocked] == ["D1:E9"]


@pytest.mark.parametrize(("flag", "protected"), [("1", True), ("true", True), ("0", False)])
def test_protection_counts_where_it_is_switched_on(
    tmp_path: Path, flag: str, protected: bool
) -> None:
    path = write_log(tmp_path / "log.xlsx", dress=lambda book, sheet: sheet.protect())
    with_parts(path, sheet=('sheet="1"', f'sheet="{flag}"'))
    workbook = OpenWorkbook(path)
    reading = workbook.reading(workbook.sheets(None)[0], request())
    assert workbook.is_protected(reading) == protected
