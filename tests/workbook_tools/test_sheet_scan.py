"""The scan of a sheet: where rows and cells lie, however the sheet is written."""

from __future__ import annotations

import pytest
from hypothesis import given, settings

from tests.workbook_tools.odd_sheets import odd_sheets, view_of
from tests.workbook_tools.rules.package import child, text_of
from tests.workbook_tools.rules.sheet_view import letters
from tests.workbook_tools.small_sheets import PART, scan_of, sheet_xml
from workbook_tools.errors import Refusal
from workbook_tools.sheet_scan import SheetScan, attributes_of


def addresses(scan: SheetScan) -> list[str]:
    """The cells of a sheet in A1 form."""
    return [
        f"{letters(cell.column)}{scan.numbers[index]}"
        for index in range(len(scan))
        for cell in scan.cells(index)
    ]


@given(odd_sheets())
@settings(deadline=None, max_examples=150)
def test_odd_but_legal_sheets_are_read_as_lxml_reads_them(xml: bytes) -> None:
    scan, view = SheetScan(xml, PART), view_of(xml)
    assert list(scan.numbers) == [row.number for row in view.rows]
    for index, row in enumerate(view.rows):
        cells = scan.cells(index)
        assert [cell.column for cell in cells] == [cell.column for cell in row.cells]
        for cell, other in zip(cells, row.cells, strict=True):
            formula, inline = other.formula, child(other.element, "is")
            assert cell.style == int(other.element.get("s", "0"))
            assert cell.type == other.kind
            assert scan.is_empty(cell) == other.is_empty
            assert (scan.value_text(cell) or "") == (other.value or "")
            assert scan.formula(cell) == (None if formula is None else formula.text)
            if inline is not None:
                assert scan.inline_text(cell).text == text_of(inline)


@given(odd_sheets())
@settings(deadline=None, max_examples=150)
def test_the_bytes_of_rows_and_cells_are_theirs_to_the_last(xml: bytes) -> None:
    scan = SheetScan(xml, PART)
    prefix = scan.data.prefix.encode() + b":" if scan.data.prefix else b""
    place = scan.data.start_tag_end
    for index in range(len(scan)):
        assert place <= scan.starts[index]
        place = scan.ends[index]
        assert xml[scan.starts[index] :].startswith(b"<" + prefix + b"row")
        assert xml[scan.tag_ends[index] - 1 : scan.tag_ends[index]] == b">"
        assert xml[scan.ends[index] - 1 : scan.ends[index]] == b">"
        inside = scan.tag_ends[index]
        for cell in scan.cells(index):
            assert inside <= cell.start < cell.tag_end <= cell.end <= scan.content_ends[index]
            assert xml[cell.start :].startswith(b"<" + prefix + b"c")
            inside = cell.end
        assert scan.end_of_cells(index) == inside
    assert place <= scan.data.end_tag_start


@given(odd_sheets())
@settings(deadline=None, max_examples=150)
def test_plain_search_finds_the_same_cells_as_a_walk(xml: bytes) -> None:
    scan = SheetScan(xml, PART)
    walked = [scan.cells(index) for index in range(len(scan))]
    assert list(scan.last_columns) == [cells[-1].column if cells else 0 for cells in walked]
    if not scan.cells_regular:
        return
    for index, cells in enumerate(walked):
        by_column = {cell.column: cell for cell in cells}
        for column in range(1, 14):
            assert scan.find_cell(index, letters(column).encode()) == by_column.get(column)


def test_sheets_as_programs_write_them_are_searched_and_others_walked() -> None:
    assert scan_of('<row r="1"><c r="A1"/><c r="XFD1" s="2"><v>1</v></c></row>').cells_regular
    for odd in (
        '<row r="1"><c/></row>',
        '<row><c r="A1"/></row>',
        '<row r="1"><c s="1" r="A1"/></row>',
        '<row r="1"><c  r="A1"/></row>',
        "<row r='1'><c r='A1'/></row>",
        '<row r="1"><c\nr="A1"/></row>',
        '<row r="1"><c r="a1"/></row>',
        '<row r="1"><c r="$A$1"/></row>',
    ):
        scan = scan_of(odd)
        assert not scan.cells_regular
        assert addresses(scan) == ["A1"]


def test_what_only_looks_like_a_cell_is_none() -> None:
    rich = '<is><r><rPr><color rgb="FF"/></rPr><t>r="B1" &lt;c r="C1"/></t></r></is>'
    scan = scan_of(f'<row r="1"><c r="A1" t="inlineStr">{rich}</c ><c r="D1"/></row >')
    assert addresses(scan) == ["A1", "D1"]
    assert scan.inline_text(scan.cells(0)[0]).text == 'r="B1" <c r="C1"/>'


def test_a_false_end_of_the_rows_hides_nothing() -> None:
    xml = sheet_xml(
        "<!-- </sheetData> --><row r='1'/>",
        head="<!-- <sheetData><row r='5'/> -->",
        tail="<mergeCells count='1'><mergeCell ref='A1:B1'/></mergeCells><!-- </sheetData> -->",
    )
    scan = SheetScan(xml, PART)
    assert list(scan.numbers) == [1]
    assert scan.outline.find("mergeCells") is not None


def test_the_outline_counts_its_offsets_in_the_whole_part() -> None:
    scan = scan_of('<row r="1"><c r="A1"/></row>', head='<cols><col min="1" max="2"/></cols>')
    (columns,) = scan.outline.find_all("cols")
    assert scan.xml[columns.start : columns.end] == b'<cols><col min="1" max="2"/></cols>'
    assert scan.xml[scan.data.end_tag_start : scan.data.end] == b"</sheetData>"
    assert scan.data.children == []


def test_plain_numbers_and_shared_texts_come_with_row_place_and_style() -> None:
    scan = scan_of(
        '<row r="3"><c r="B3" s="4"><v>1.5</v></c></row>'
        '<row r="5"><c r="B5" t="n"><v>-2E-3</v></c><c r="BB5"><v>9</v></c></row>'
        '<row r="6"><c r="B6" t="s"><v>7</v></c></row>'
        '<row r="7"><c r="B7" s="2" t="s"><v>0</v></c></row>'
        '<row r="8"><c r="B8"><f>1+1</f><v>2</v></c></row>'
        '<row r="9"><c r="B9" t="b"><v>1</v></c></row>'
    )
    found = [(row, style, number, text) for row, _, style, number, text in scan.plain_cells(b"B")]
    assert found == [
        (3, 4, 1.5, None),
        (5, 0, -0.002, None),
        (6, 0, None, 7),
        (7, 2, None, 0),
        (8, 0, None, None),
        (9, 0, None, None),
    ]
    places = [cell.start for cell in scan.plain_cells(b"B")]
    assert all(scan.xml[start:].startswith(b'<c r="B') for start in places)


def test_a_child_of_a_shared_formula_has_the_text_of_the_first() -> None:
    scan = scan_of(
        '<row r="2"><c r="A2"><f t="shared" ref="A2:C2" si="4">SUM(A1:A9)</f></c>'
        '<c r="B2"><f t="shared" si="4"/></c><c r="C2"><f t="shared" si="4"></f></c>'
        '<c r="D2"><f t="shared" si="9"/></c><c r="E2"><f/></c></row>'
    )
    assert [scan.formula(cell) for cell in scan.cells(0)] == ["SUM(A1:A9)"] * 3 + ["", ""]


def test_the_last_row_and_column_are_as_good_as_any() -> None:
    scan = scan_of('<row r="1048576"><c r="XFD1048576"/></row>')
    assert (list(scan.numbers), list(scan.last_columns)) == ([1048576], [16384])
    assert [one.column for one in scan.cells(0)] == [16384]


def test_the_last_cell_of_a_row_must_belong_to_it() -> None:
    scan = scan_of('<row r="5"><c r="A5"/><c r="B55"/></row>')
    assert scan.cells_regular
    with pytest.raises(Refusal, match=r"out of order \(row 5\)"):
        _ = scan.last_columns


def test_rows_are_found_by_their_numbers() -> None:
    scan = scan_of('<row r="2"/><row r="3"/><row r="7"/>')
    assert len(scan) == 3
    assert scan.rows_between(1, 2) == range(1)
    assert scan.rows_between(3, 7) == range(1, 3)
    assert scan.rows_between(4, 6) == range(2, 2)


def test_the_place_of_a_row_attribute_is_told() -> None:
    scan = scan_of("<row spans='1:3' r=\"2\"/>")
    start, end = scan.row_attribute_span(0, b"spans") or (0, 0)
    assert scan.xml[start:end] == b"1:3"
    assert scan.row_attribute_span(0, b"ht") is None


def test_attributes_are_read_with_either_quote() -> None:
    assert attributes_of(b" a = '1>2'  b:c=\"'x'\"") == {"a": b"1>2", "b:c": b"'x'"}


@pytest.mark.parametrize(
    "rows",
    [
        '<row r="2"/><row r="1"/>',
        '<row r="2"/><row r="2"/>',
        '<row r="0"/>',
        '<row r="1048577"/>',
        '<row r="99999999999999999999"/>',
        "<other/>",
    ],
)
def test_rows_out_of_order_are_refused(rows: str) -> None:
    with pytest.raises(Refusal, match=r"rows or cells out of order .*save it again"):
        scan_of(rows)


@pytest.mark.parametrize(
    "cells",
    [
        '<c r="B1"/><c r="A1"/>',
        '<c r="A1"/><c r="A1"/>',
        '<c r="A2"/>',
        '<c r="XFE1"/>',
        '<c r="XFD1"/><c/>',
        '<c r="one"/>',
        '<c r=""/>',
    ],
)
def test_cells_out_of_order_are_refused(cells: str) -> None:
    scan = scan_of(f'<row r="1">{cells}</row>')
    with pytest.raises(Refusal, match=r"out of order \(row 1\)"):
        scan.cells(0)


def test_a_style_that_is_no_number_is_refused() -> None:
    scan = scan_of('<row r="1"><c r="A1" s="bold"/></row>')
    with pytest.raises(Refusal, match=r"sheet1\.xml says 'bold' where a whole number belongs"):
        scan.cells(0)


@pytest.mark.parametrize(
    ("xml", "words"),
    [
        (b"<worksheet><sheetData></worksheet>", "not well-formed"),
        (b"<!DOCTYPE a><worksheet/>", "document type"),
        (b"<worksheet><rows/></worksheet>", "its rows are not found"),
        (b"<worksheet><a><sheetData/></a></worksheet>", "its rows are not found"),
        ("<worksheet/>".encode("utf-16"), "UTF-16"),
    ],
)
def test_what_is_no_sheet_is_refused(xml: bytes, words: str) -> None:
    with pytest.raises(Refusal, match=words):
        SheetScan(xml, PART)
