"""Edits of a sheet: new cells arrive, nothing else moves, and each edit can be undone."""

from __future__ import annotations

import math
from array import array

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.strategies import DataObject

from tests.workbook_tools.differences import part_change
from tests.workbook_tools.odd_sheets import LAST_COLUMN, LAST_ROW, odd_sheets, view_of
from tests.workbook_tools.rules.package import text_of
from tests.workbook_tools.rules.sheet_view import SheetView, letters
from tests.workbook_tools.small_sheets import PART, scan_of
from workbook_tools.errors import Refusal
from workbook_tools.sheet_edits import NewCells, edits
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.splice import Edit, EditKind, spliced, undone

K = EditKind
NUMBERS = (0.0, 1.5, -2.5e-7, 1 / 3, 123456789012345.0, 6.02e23, 1e300)
HEADING = 'Age <[Gyr]> & "more"'


def numbers(column: int, cells: dict[int, float], style: int = 1) -> NewCells:
    """New numbers by row."""
    rows = sorted(cells)
    return NewCells(
        column,
        array("q", rows),
        array("d", [cells[row] for row in rows]),
        array("q", [style] * len(rows)),
    )


def edited(scan: SheetScan, new: list[NewCells]) -> tuple[str, list[Edit]]:
    """The sheet with new cells, and the edits; what stands around the rows is cut off."""
    made = list(edits(scan, new))
    xml = b"".join(spliced(scan.xml, made)).decode()
    return xml.partition("main")[2].partition(">")[2].removesuffix("</worksheet>"), made


def put(rows: str, new: list[NewCells]) -> tuple[str, list[EditKind]]:
    """The rows of a sheet with new cells, and the kinds of the edits."""
    text, made = edited(scan_of(rows), new)
    return text.removeprefix("<sheetData>").removesuffix("</sheetData>"), [e.kind for e in made]


CELL = '<c r="D2" s="1"><v>1.5</v></c>'


@pytest.mark.parametrize(
    ("rows", "kinds", "result"),
    [
        (
            '<row r="2"><c r="A2"/></row>',
            [K.CELL_INSERTED],
            f'<row r="2"><c r="A2"/>{CELL}</row>',
        ),
        (
            '<row r="2"><c r="A2"/><c r="F2"/></row>',
            [K.CELL_INSERTED],
            f'<row r="2"><c r="A2"/>{CELL}<c r="F2"/></row>',
        ),
        (
            '<row r="2"><c r="F2"/></row>',
            [K.CELL_INSERTED],
            f'<row r="2">{CELL}<c r="F2"/></row>',
        ),
        (
            '<row r="2"> <c r="A2"/> <extLst/> </row>',
            [K.CELL_INSERTED],
            f'<row r="2"> <c r="A2"/>{CELL} <extLst/> </row>',
        ),
        (
            '<row r="2"><c r="A2"/><c r="D2" s="1"/><c r="E2"/></row>',
            [K.EMPTY_CELL_REPLACED],
            f'<row r="2"><c r="A2"/>{CELL}<c r="E2"/></row>',
        ),
        (
            '<row r="2"><c r="D2" s="1"><v></v></c></row>',
            [K.EMPTY_CELL_REPLACED],
            f'<row r="2">{CELL}</row>',
        ),
        ('<row r="2" ht="20"/>', [K.EMPTY_ROW_OPENED], f'<row r="2" ht="20">{CELL}</row>'),
        ('<row r="2"></row>', [K.CELL_INSERTED], f'<row r="2">{CELL}</row>'),
        ('<row r="1"/>', [K.ROW_INSERTED], f'<row r="1"/><row r="2">{CELL}</row>'),
        ('<row r="3"/>', [K.ROW_INSERTED], f'<row r="2">{CELL}</row><row r="3"/>'),
        ("", [K.ROW_INSERTED], f'<row r="2">{CELL}</row>'),
        (
            '<row r="2" spans="1:2"><c r="A2"/></row>',
            [K.ATTRIBUTE_CHANGED, K.CELL_INSERTED],
            f'<row r="2" spans="1:4"><c r="A2"/>{CELL}</row>',
        ),
        (
            "<row spans='2:3 6:7' r='2'/>",
            [K.ATTRIBUTE_CHANGED, K.EMPTY_ROW_OPENED],
            f"<row spans='2:7' r='2'>{CELL}</row>",
        ),
        (
            '<row r="2" spans="1:9"><c r="A2"/></row>',
            [K.CELL_INSERTED],
            f'<row r="2" spans="1:9"><c r="A2"/>{CELL}</row>',
        ),
    ],
)
def test_a_new_cell_lands_in_its_place(rows: str, kinds: list[EditKind], result: str) -> None:
    assert put(rows, [numbers(4, {2: 1.5})]) == (result, kinds)


def test_a_sheet_without_rows_gets_some() -> None:
    xml = scan_of("").xml.replace(b"<sheetData></sheetData>", b"<sheetData />")
    text, made = edited(SheetScan(xml, PART), [numbers(4, {2: 1.5, 5: 1.5})])
    assert text.startswith(f'<sheetData ><row r="2">{CELL}</row><row r="5">')
    assert text.endswith("</row></sheetData>")
    assert [one.kind for one in made] == [K.ROW_INSERTED]


def test_rows_and_cells_go_between_old_ones() -> None:
    rows = '<row r="2"><c r="A2"/></row><row r="5"><c r="A5"/><c r="E5"/></row>'
    result, kinds = put(rows, [numbers(4, dict.fromkeys((1, 2, 3, 4, 5, 6), 1.5))])
    cell = '<c r="D{}" s="1"><v>1.5</v></c>'.format
    assert result == (
        f'<row r="1">{cell(1)}</row><row r="2"><c r="A2"/>{cell(2)}</row>'
        f'<row r="3">{cell(3)}</row><row r="4">{cell(4)}</row>'
        f'<row r="5"><c r="A5"/>{cell(5)}<c r="E5"/></row><row r="6">{cell(6)}</row>'
    )
    assert kinds.count(K.ROW_INSERTED) == 3


def test_columns_with_other_rows_and_a_heading_meet_in_one_row() -> None:
    first, second = numbers(6, {2: 1.0, 3: 2.0}), numbers(3, {3: 4.0})
    first.heading = (2, "never", 0)
    third = NewCells(5, heading=(2, HEADING, 7))
    rows = '<row r="2"><c r="A2"/></row><row r="3"/>'
    result, _ = put(rows, [numbers(6, {2: 1.0, 3: 2.0}), second, third])
    text = HEADING.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    assert result == (
        f'<row r="2"><c r="A2"/><c r="E2" s="7" t="inlineStr"><is><t>{text}</t></is></c>'
        '<c r="F2" s="1"><v>1</v></c></row>'
        '<row r="3"><c r="C3" s="1"><v>4</v></c><c r="F3" s="1"><v>2</v></c></row>'
    )


@pytest.mark.parametrize("number", [1 / 3, 2 / 3 * 1e-300, 1e15 / 7, -5e22 / 7, 100.0, 0.1 + 0.2])
def test_a_number_keeps_fifteen_significant_digits(number: float) -> None:
    result, _ = put("", [numbers(1, {1: number})])
    text = result.partition("<v>")[2].partition("</v>")[0]
    assert float(text) == pytest.approx(number, rel=5e-15)
    assert len(text.partition("e")[0].replace(".", "").lstrip("-0")) <= 15


def test_the_prefix_of_the_sheet_is_taken_over() -> None:
    scan = scan_of('<x:row r="2"><x:c r="A2"/></x:row><x:row r="3"/>', prefix="x")
    new = numbers(2, {2: 1.5, 3: 2.5, 4: 3.5})
    new.heading = (1, "Age [Gyr]", 0)
    text, _ = edited(scan, [new])
    assert view_of(b"".join(spliced(scan.xml, edits(scan, [new])))).by_position.keys() == {
        (1, 2),
        (2, 1),
        (2, 2),
        (3, 2),
        (4, 2),
    }
    assert "<x:is><x:t>Age [Gyr]</x:t></x:is>" in text


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ("A1:C9", "A1:D9"),
        ("A1", "A1:D2"),
        ("B5:F9", "B2:F9"),
        ("A1:XFD1048576", "A1:XFD1048576"),
    ],
)
def test_the_extent_of_the_sheet_grows_where_it_must(old: str, new: str) -> None:
    scan = scan_of('<row r="2"/>', head=f'<dimension ref="{old}"/>')
    text, made = edited(scan, [numbers(4, {2: 1.5})])
    assert f'<dimension ref="{new}"/>' in text
    assert (K.ATTRIBUTE_CHANGED in [one.kind for one in made]) == (old != new)


def test_the_extent_of_an_empty_sheet_is_that_of_the_new_cells() -> None:
    scan = scan_of("", head='<dimension ref="A1"/>')
    assert edited(scan, [numbers(4, {2: 1.5})])[0].startswith('<dimension ref="D2"/>')


def test_an_extent_that_is_none_is_refused() -> None:
    scan = scan_of("", head='<dimension ref="all"/>')
    with pytest.raises(Refusal, match="says 'all' where a range of cells belongs"):
        list(edits(scan, [numbers(4, {2: 1.5})]))


def test_a_new_width_comes_with_the_cells() -> None:
    new = numbers(4, {2: 1.5})
    new.width = 12.5
    text, made = edited(scan_of('<row r="2"/>'), [new])
    assert text.startswith('<cols><col min="4" max="4" width="12.5" customWidth="1"/></cols>')
    assert made[0].kind == K.COLUMN_WIDTH_ADDED


def test_without_new_cells_there_are_no_edits() -> None:
    assert list(edits(scan_of('<row r="2"/>'), [NewCells(3, width=9.0)])) == []
    assert list(edits(scan_of('<row r="2"/>'), [])) == []


def test_what_holds_something_is_never_overwritten() -> None:
    scan = scan_of('<row r="2"><c r="D2" t="inlineStr"><is><t>tbc</t></is></c></row>')
    with pytest.raises(ValueError, match="row 2, column 4 is not empty"):
        list(edits(scan, [numbers(4, {2: 1.5})]))


def test_cells_and_rows_that_do_not_say_where_they_are_stay_there() -> None:
    cell = '<c r="{}" s="1"><v>1.5</v></c>'.format
    rows = "<row><c><v>1</v></c><c/><c><v>3</v></c></row><row><c><v>4</v></c></row>"
    replaced = rows.replace("<c/>", cell("B1"))
    assert put(rows, [numbers(2, {1: 1.5})])[0] == replaced
    beside = rows.replace("3</v></c>", f"3</v></c>{cell('D1')}")
    assert put(rows, [numbers(4, {1: 1.5})])[0] == beside
    gap = "<row r='2'><c r='B2'/><c><v>3</v></c></row><row/>"
    before = f"<row r=\"1\">{cell('A1')}</row><row r='2'>{cell('A2')}"
    assert put(gap, [numbers(1, {1: 1.5, 2: 1.5})])[0] == before + gap.removeprefix("<row r='2'>")


@given(odd_sheets(), st.data())
@settings(deadline=None, max_examples=250)
def test_random_cells_in_random_sheets(xml: bytes, data: DataObject) -> None:
    """All promises at once: old cells stay, new ones arrive, rows ascend, undoing gives back."""
    scan, before = SheetScan(xml, PART), view_of(xml)
    new = data.draw(_new_cells(before))
    made = list(edits(scan, new))
    result = b"".join(spliced(xml, made))
    assert undone(result, made, [xml[edit.start : edit.end] for edit in made]) == xml
    expected = {
        (row, one.column): v for one in new for row, v in zip(one.rows, one.numbers, strict=True)
    }
    headings = {(one.heading[0], one.column) for one in new if one.heading}
    change = part_change(xml, result)
    assert change.undone == xml
    seen = {cell for difference in change.differences for cell in difference.cells}
    assert seen == expected.keys() | headings
    after = view_of(result)
    _check_order(after, seen)
    for place in before.by_position.keys() - seen:
        assert _content(after, place) == _content(before, place)
    for place, value in expected.items():
        kind, style, text, _, _ = _content(after, place)
        assert (kind, style) == ("n", "2")
        assert math.isclose(float(text or ""), value, rel_tol=5e-15)
    for place in headings:
        assert _content(after, place)[3] == HEADING


@st.composite
def _new_cells(draw: st.DrawFn, view: SheetView) -> list[NewCells]:
    """Columns of new cells where there is room for them."""
    # `part_change` takes `<c><v/></c>` for something, so such cells stay as they are here
    taken = {place for place, cell in view.by_position.items() if len(cell.element)}
    new = []
    columns = st.integers(1, 2 * LAST_COLUMN + 2)
    for column in draw(st.lists(columns, unique=True, min_size=1, max_size=3)):
        free = [row for row in range(1, 2 * LAST_ROW + 8) if (row, column) not in taken]
        rows = draw(st.lists(st.sampled_from(free), unique=True, min_size=1, max_size=12))
        one = numbers(column, {row: draw(st.sampled_from(NUMBERS)) for row in rows}, style=2)
        if len(rows) > 1 and draw(st.booleans()):
            one.heading = (one.rows.pop(0), HEADING, 3)
            one.numbers.pop(0)
            one.styles.pop(0)
        new.append(one)
    return new


def _check_order(view: SheetView, new: set[tuple[int, int]]) -> None:
    """Rows and cells ascend, and the hints of rows cover the new cells."""
    rows = [row.number for row in view.rows]
    assert rows == sorted(set(rows))
    for row in view.rows:
        columns = [cell.column for cell in row.cells]
        assert columns == sorted(set(columns))
        assert {cell.row for cell in row.cells} <= {row.number}
        if columns and "spans" in row.element.attrib:
            first, last = map(int, row.element.get("spans").split(":"))
            assert all(first <= column <= last for column in columns if (row.number, column) in new)


def _content(view: SheetView, place: tuple[int, int]) -> tuple[str | None, ...]:
    """Type, style, value, inline text and formula of a cell."""
    cell = view.by_position[place]
    inline = cell.element.find("{*}is")
    formula = cell.formula
    return (
        cell.kind,
        cell.element.get("s"),
        cell.value,
        None if inline is None else text_of(inline),
        None if formula is None else formula.text,
    )


def test_a_column_says_how_far_its_cells_reach() -> None:
    new = numbers(4, {3: 1.0, 8: 2.0})
    assert new.extent.a1 == "D3:D8"
    new.heading = (2, HEADING, 0)
    assert new.extent.a1 == "D2:D8"
    assert letters(4) == "D"
