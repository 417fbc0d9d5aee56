"""The log that everyone typed into is what its builder makes, as messy as life, and whole."""

from __future__ import annotations

import warnings
import zipfile
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from openpyxl.worksheet.worksheet import Worksheet

from tests.samples.build_everyones_log import SAMPLE, build
from tests.samples.build_observing_log import BUILT_WITH
from tests.samples.many_hands import (
    catalogue_sheet,
    commas_sheet,
    list_sheet,
    neighbours_sheet,
    times_sheet,
)
from tests.samples.many_hands.list_rows import ROWS
from tests.samples.many_hands.readings import Reading
from tests.workbook_tools.package_rules import problems
from tests.workbook_tools.read_back import cell_values
from tests.workbook_tools.repack import part
from tests.workbook_tools.schema_check import needs_schemas, package_schema_problems

READINGS: list[Reading] = [
    one.reading
    for rows in (
        ROWS,
        catalogue_sheet.ROWS,
        commas_sheet.ROWS,
        times_sheet.ROWS,
        neighbours_sheet.ROWS,
    )
    for one in rows
]


@pytest.mark.skipif(
    xlsxwriter.__version__ != BUILT_WITH,
    reason=f"another XlsxWriter than {BUILT_WITH} may write the same content otherwise",
)
def test_the_committed_file_is_what_the_builder_makes(tmp_path: Path) -> None:
    # Compared part by part: another zlib may pack the same part otherwise.
    build(tmp_path / "built.xlsx")
    with zipfile.ZipFile(tmp_path / "built.xlsx") as built, zipfile.ZipFile(SAMPLE) as committed:
        assert built.namelist() == committed.namelist()
        for name in built.namelist():
            assert built.read(name) == committed.read(name), name


def test_the_committed_cells_are_those_that_the_builder_writes(tmp_path: Path) -> None:
    build(tmp_path / "built.xlsx")
    for results in (False, True):
        built = cell_values(tmp_path / "built.xlsx", results=results)
        assert built == cell_values(SAMPLE, results=results)


def test_built_twice_is_the_same_bytes(tmp_path: Path) -> None:
    build(tmp_path / "one.xlsx")
    build(tmp_path / "two.xlsx")
    assert (tmp_path / "one.xlsx").read_bytes() == (tmp_path / "two.xlsx").read_bytes()


def test_nothing_is_broken() -> None:
    assert problems(SAMPLE) == []


@needs_schemas
@pytest.mark.long
def test_all_parts_are_valid() -> None:
    found = package_schema_problems(SAMPLE)
    assert {name: what for name, what in found.items() if what} == {}


def test_hands_left_every_kind_of_cell() -> None:
    assert len(READINGS) > 160
    kinds = {
        "plain": [r for r in READINGS if r.value is not None and not r.remarks and not r.limit],
        "remarked": [r for r in READINGS if r.value is not None and r.remarks],
        "with an error": [r for r in READINGS if r.upper is not None and r.upper == r.lower],
        "with an uneven error": [r for r in READINGS if r.upper != r.lower],
        "limits": [r for r in READINGS if r.limit],
        "left": [r for r in READINGS if r.reason],
        "words for none": [r for r in READINGS if r.word],
        "passed over": [r for r in READINGS if r.passed_over],
    }
    assert all(len(found) > 3 for found in kinds.values()), {k: len(v) for k, v in kinds.items()}
    assert {reading.limit for reading in READINGS} == {"", "<", ">", "≤", "≥", "≲", "≳"}


@pytest.fixture(scope="module")
def book() -> openpyxl.Workbook:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        return openpyxl.load_workbook(SAMPLE, rich_text=True)


def test_what_programs_make_of_typing_is_there(book: openpyxl.Workbook) -> None:
    sheet = book[list_sheet.NAME]
    rows = {row.name: list_sheet.FIRST_ROW + 1 + i for i, row in reversed([*enumerate(ROWS)])}

    def cell(name: str) -> openpyxl.cell.Cell:
        return sheet.cell(rows[name], 3)

    assert cell("HBN 1037+16").is_date
    assert cell("HBN 1325-17").number_format == "0%"
    assert cell("HBN 0826+10").font.strike
    assert cell("HBN 1344-08").value is True
    assert cell("HBN 1415+18").value == "=1.3+0.01"
    raised = cell("HBN 0728+04").value
    assert [run.font.vertAlign for run in raised if hasattr(run, "font")][-1] == "superscript"
    assert cell("HBN 0103-10").value == "\u00a02.07\u2009"
    heading = sheet.cell(list_sheet.NAMES_ROW + 1, 7).value
    assert str(heading) == "DC"
    assert sheet.cell(list_sheet.NAMES_ROW + 1, 6).value == "Age of\nthe universe"
    # A formula without a stored result.
    assert b"<f>1.3+0.01</f></c>" in part(SAMPLE, "xl/worksheets/sheet1.xml")


def test_what_belongs_to_colleagues_is_there(book: openpyxl.Workbook) -> None:
    everyone, catalogue = book[list_sheet.NAME], book[catalogue_sheet.NAME]
    assert (everyone.freeze_panes, catalogue.freeze_panes) == ("B7", "B3")
    merged = {str(one) for one in everyone.merged_cells.ranges}
    assert {"A4:B4", "C4:D4", "E4:F4", "G4:K4", "C100:C101"} <= merged
    assert comments_of(everyone) == 5
    assert comments_of(catalogue) == 1
    assert len(everyone.conditional_formatting) == 2
    assert len(catalogue.conditional_formatting) == 1
    assert [one.type for one in everyone.data_validations.dataValidation] == ["list"]
    assert catalogue.auto_filter.ref == "A2:R25"
    hidden = [row for row, one in everyone.row_dimensions.items() if one.hidden]
    assert hidden == [99]
    assert set(book.defined_names) == {"Lookbacks", "Redshifts"}
    assert b"<c:lineChart>" in part(SAMPLE, "xl/charts/chart1.xml")
    assert b"<ignoredError " in part(SAMPLE, "xl/worksheets/sheet1.xml")


def comments_of(sheet: Worksheet) -> int:
    return sum(cell.comment is not None for row in sheet.iter_rows() for cell in row)
