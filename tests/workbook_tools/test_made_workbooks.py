"""The made workbooks are clean, are what they say, and are the same every time."""

from __future__ import annotations

import zipfile
from pathlib import Path

import pytest

from tests.workbook_tools.made_workbooks import MADE, REDSHIFTS, make
from tests.workbook_tools.office import convert_to_csv, needs_office
from tests.workbook_tools.package_rules import problems
from tests.workbook_tools.read_back import cell_values
from tests.workbook_tools.repack import part
from tests.workbook_tools.schema_check import needs_schemas, package_schema_problems


@pytest.mark.parametrize("name", MADE)
def test_made_twice_is_the_same_file_without_problems(name: str, tmp_path: Path) -> None:
    (tmp_path / "again").mkdir()
    path = make(name, tmp_path)
    assert path.read_bytes() == make(name, tmp_path / "again").read_bytes()
    assert problems(path) == []


@pytest.mark.parametrize("name", MADE)
def test_openpyxl_finds_the_redshifts(name: str, tmp_path: Path) -> None:
    first = next(iter(cell_values(make(name, tmp_path)).values()))
    found = [
        value for (_, column), value in first.items() if column == 2 and isinstance(value, float)
    ]
    assert set(found) <= set(REDSHIFTS)
    assert len(found) >= 6


@needs_schemas
@pytest.mark.long
@pytest.mark.parametrize("name", MADE)
def test_made_parts_are_valid(name: str, tmp_path: Path) -> None:
    found = package_schema_problems(make(name, tmp_path))
    assert {part: what for part, what in found.items() if what} == {}


@needs_office
@pytest.mark.long
def test_libreoffice_reads_them_all(tmp_path: Path) -> None:
    paths = [make(name, tmp_path) for name in MADE]
    shown = convert_to_csv(paths)
    assert set(shown) == set(paths)
    for path in paths:
        rows = [row for sheet in shown[path].values() for row in sheet]
        assert any(str(REDSHIFTS[-1]) in row for row in rows), path.name


@pytest.mark.parametrize(
    ("name", "member", "text"),
    [
        ("crowded.xlsx", "xl/worksheets/sheet1.xml", "<autoFilter"),
        ("table with totals.xlsx", "xl/tables/table1.xml", 'totalsRowCount="1"'),
        ("table without header.xlsx", "xl/tables/table1.xml", 'headerRowCount="0"'),
        ("prefixed.xlsx", "xl/worksheets/sheet1.xml", "<x:c r="),
        ("prefixed.xlsx", "xl/tables/table1.xml", "<x:tableColumn "),
        ("without addresses.xlsx", "xl/worksheets/sheet1.xml", "<row><c t="),
        ("strict.xlsx", "xl/workbook.xml", 'conformance="strict"'),
        ("sparse.xlsx", "xl/worksheets/sheet1.xml", '<row r="6" spans="1:5"/>'),
        ("sparse.xlsx", "xl/worksheets/sheet1.xml", "></c>"),
        ("sparse.xlsx", "xl/worksheets/sheet1.xml", '<c r="E14" s="4"/>'),
        ("sparse.xlsx", "xl/worksheets/sheet1.xml", "></row>"),
        ("sparse.xlsx", "xl/worksheets/sheet2.xml", "<sheetData/>"),
        ("wide columns.xlsx", "xl/worksheets/sheet1.xml", 'max="16384"'),
        ("wide columns.xlsx", "xl/worksheets/sheet2.xml", 'hidden="1"'),
        ("formulas.xlsx", "xl/worksheets/sheet1.xml", '<f t="shared" si="0"/>'),
        ("formulas.xlsx", "xl/worksheets/sheet1.xml", '<f t="array" ref="F4:F7">'),
        ("formulas.xlsx", "xl/worksheets/sheet1.xml", 'cm="1"'),
        ("merged 1904.xlsx", "xl/workbook.xml", 'date1904="1"'),
        ("merged 1904.xlsx", "xl/worksheets/sheet1.xml", "<mergeCell "),
        ("protected.xlsx", "xl/worksheets/sheet1.xml", "<sheetProtection "),
        ("template.xltx", "[Content_Types].xml", "template.main"),
        ("macro.xlsm", "[Content_Types].xml", "vbaProject"),
        ("oddly written.xlsx", "xl/worksheets/sheet1.xml", "\ufeff<?xml"),
        ("oddly written.xlsx", "xl/worksheets/sheet1.xml", "<![CDATA[0.0312]]></v >"),
        ("numbers as text.xlsx", "xl/sharedStrings.xml", "<t>0.158</t>"),
    ],
)
def test_the_trait_is_there(name: str, member: str, text: str, tmp_path: Path) -> None:
    assert text.encode() in part(make(name, tmp_path), member)


def test_without_styles_has_no_styles(tmp_path: Path) -> None:
    with zipfile.ZipFile(make("without styles.xlsx", tmp_path)) as archive:
        assert not any("styles" in name for name in archive.namelist())
        assert b"styles" not in archive.read("xl/_rels/workbook.xml.rels")


@pytest.mark.parametrize("name", MADE)
def test_nobody_asks_for_recalculation_yet(name: str, tmp_path: Path) -> None:
    assert b"fullCalcOnLoad" not in part(make(name, tmp_path), "xl/workbook.xml")
