"""What cells hold: numbers, nothing, or something that is left and named."""

from __future__ import annotations

import pytest
from hypothesis import given, settings

from tests.workbook_tools.odd_sheets import LAST_COLUMN, odd_sheets, view_of
from tests.workbook_tools.small_sheets import PART, cell, row, rules, scan_of
from workbook_tools.errors import Refusal
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.typed_cells import (
    ABSENT,
    EMPTY,
    FORMULA,
    LEFT,
    NUMBER,
    SUMS_UP,
    TEXT,
    WHITE,
    ColumnCells,
    read_columns,
    shown_text,
)

TEXTS = ("2.31", ">6", " ", "1e400")


def column(scan: SheetScan, number: int = 1, rows: range | None = None) -> ColumnCells:
    """Read one column; style 9 is one of dates."""
    indices = range(len(scan)) if rows is None else rows
    return read_columns(scan, [number], indices, rules(TEXTS), lambda column: ())[number]


def only(content: str, attributes: str = "") -> ColumnCells:
    """Read cell A1 with this content, by search and by walk, which must agree."""
    searched = scan_of(f'<row r="1"><c r="A1"{attributes}>{content}</c></row>')
    walked = scan_of(f'<row r="1"><c {attributes} r="A1">{content}</c></row>')
    assert searched.cells_regular
    assert not walked.cells_regular
    assert column(searched) == column(walked)
    return column(searched)


@pytest.mark.parametrize(
    ("content", "attributes", "number"),
    [
        ("<v>2.5</v>", "", 2.5),
        ("<v>2.5</v>", ' t="n"', 2.5),
        ("<v>2.5</v>", ' s="3"', 2.5),
        ("<v> 2.5 </v>", "", 2.5),
        ("<v>2.5E-3</v>", "", 0.0025),
        ("<v>.5</v>", "", 0.5),
        ("<v>0</v>", ' t="s"', 2.31),
        ("<is><t>2.31</t></is>", ' t="inlineStr"', 2.31),
        ("<is><r><t>2.</t></r><r><t>31</t></r></is>", ' t="inlineStr"', 2.31),
        ("<f>1/4</f><v>0.25</v>", "", 0.25),
        ("<f>TEXT(2,0)</f><v>2</v>", ' t="str"', 2.0),
        ("<is><t>−0.5</t></is>", ' t="inlineStr"', -0.5),
    ],
)
def test_numbers_and_text_that_is_plainly_a_number(
    content: str, attributes: str, number: float
) -> None:
    cells = only(content, attributes)
    assert (list(cells.kinds), list(cells.numbers)) == ([NUMBER], [number])


@pytest.mark.parametrize(
    ("content", "attributes", "reason"),
    [
        ("<v>3</v>", ' t="s"', "not read: a number too large"),
        ("<v>1e400</v>", "", "not read: a number too large"),
        ("<v>1,5</v>", "", "not read: looks like a decimal comma; use --decimal-comma"),
        ("<is><t>tbc\nlater</t></is>", ' t="inlineStr"', "not read: no number"),
        ("<is><t>tbc</t></is>", ' t="inlineStr"', "no value yet"),
        ("<v>1</v>", ' t="b"', "not read: true or false and no number"),
        ("<v>0</v>", ' t="b"', "not read: true or false and no number"),
        ("<v>#N/A</v>", ' t="e"', "a formula error"),
        ("<v>46024</v>", ' s="9"', "a date that a spreadsheet program made of something"),
        (
            "<f>TODAY()</f><v>46024</v>",
            ' s="9"',
            "a date that a spreadsheet program made of something",
        ),
        ("<v>2026-01-02</v>", ' t="d"', "a date that a spreadsheet program made of something"),
        ("<f>B1*2</f>", "", "a formula without a stored result; recalculate and save the"),
        ("<f>B1*2</f><v></v>", "", "a formula without a stored result; recalculate and save the"),
        ("<f>SUM(B1:B5)</f><v>3</v>", "", SUMS_UP),
    ],
)
def test_everything_else_is_left_with_a_reason(content: str, attributes: str, reason: str) -> None:
    cells = only(content, attributes)
    assert list(cells.kinds) == [LEFT]
    assert cells.reasons[0].startswith(reason)


@pytest.mark.parametrize("content", ["", " ", "<v/>", "<v></v>", "<!-- tbc -->", "<v><!-- --></v>"])
def test_a_cell_element_may_hold_nothing(content: str) -> None:
    cells = only(content, ' s="5"')
    assert (list(cells.kinds), list(cells.styles)) == ([EMPTY], [5])
    assert cells.is_blank(0)


@pytest.mark.parametrize(
    ("content", "attributes"),
    [
        ("<v>2</v>", ' t="s"'),
        ("<is><t/></is>", ' t="inlineStr"'),
        ('<f>IF(B1="","",B1)</f><v></v>', ' t="str"'),
    ],
)
def test_white_space_is_nothing_to_read_and_nothing_to_overwrite(
    content: str, attributes: str
) -> None:
    cells = only(content, attributes)
    assert list(cells.kinds) == [WHITE]
    assert not cells.is_blank(0)
    assert not cells.reasons


@pytest.mark.parametrize(
    "formula",
    [
        "SUM(B2:B9)",
        "AVERAGE(B:B)",
        "AVERAGE(Log[z])",
        "SUBTOTAL(109,Log[z])",
        "SUM(Deep)",
        "average(b2,b3)",
        "ROUND(MEDIAN(Log!$B$2:$B$9),2)",
        "COUNTIFS(B$2:B9,1)",
        "STDEV.S(B2:C3)",
    ],
)
def test_a_formula_over_several_rows_is_no_row_of_the_log(formula: str) -> None:
    assert only(f"<f>{formula}</f><v>2</v>").reasons == {0: SUMS_UP}


@pytest.mark.parametrize(
    "formula",
    [
        "B2*2",
        "AVERAGE(B1:D1)",
        "AVERAGE(B1,D1)",
        "MAX(B1,0)",
        "AVERAGE(B1:D1)*$G$3",
        "SUM(Log[[#This Row],[z a]:[z b]])",
        "SUMMARY!B2+B7",
        'IF(COUNT(B1:C1)=0,"",AVERAGE(B1:C1))',
        "LOG10(B1)+B9",
    ],
)
def test_a_formula_within_a_row_gives_its_stored_number(formula: str) -> None:
    cells = only(f"<f>{formula}</f><v>2</v>")
    assert (list(cells.kinds), cells.remarks) == ([NUMBER], {FORMULA: [0]})


def test_totals_that_share_a_formula_are_known_in_every_column() -> None:
    scan = scan_of(
        '<row r="9"><c r="A9"><f t="shared" ref="A9:B9" si="0">SUM(A2:A8)</f><v>1</v></c>'
        '<c r="B9"><f t="shared" si="0"/><v>35</v></c></row>'
    )
    assert column(scan, 2).reasons == {0: SUMS_UP}


def test_rows_without_a_cell_are_told_from_empty_ones() -> None:
    scan = scan_of(row(1, 1.5) + '<row r="2"/>' + f'<row r="3">{cell("A3", None, 2)}</row>')
    cells = column(scan)
    assert list(cells.kinds) == [NUMBER, ABSENT, EMPTY]
    assert list(cells.styles) == [0, -1, 2]
    assert [cells.is_blank(position) for position in range(3)] == [False, True, True]


def test_only_the_rows_asked_for_are_read() -> None:
    scan = scan_of("".join(row(number, float(number), f"x{number}") for number in range(1, 9)))
    assert list(column(scan, 1, range(2, 5)).numbers) == [3.0, 4.0, 5.0]
    assert list(column(scan, 2, range(2, 5)).reasons) == [0, 1, 2]
    assert column(scan, 1, range(3, 3)).kinds == b""


def test_numbers_from_text_and_from_formulas_are_counted() -> None:
    formulas = "".join(
        f'<row r="{number}"><c r="A{number}"><f>1</f><v>1</v></c></row>' for number in (4, 5)
    )
    cells = column(scan_of(row(1, 1.5) + row(2, "2.5") + row(3, "3") + formulas + row(6, 1.5)))
    assert (cells.remarks, cells.count(NUMBER)) == ({TEXT: [1, 2], FORMULA: [3, 4]}, 6)


def test_long_texts_are_cut_for_the_report() -> None:
    cells = only(f"<is><t>{'remark ' * 30}</t></is>", ' t="inlineStr"')
    assert cells.shown[0] == ("remark " * 30)[:57] + "..."


@given(odd_sheets())
@settings(deadline=None, max_examples=150)
def test_numbers_of_odd_sheets_are_those_that_lxml_reads(xml: bytes) -> None:
    scan, view = SheetScan(xml, PART), view_of(xml)
    expected = {
        (c.row, c.column): float(c.value)
        for c in view.cells
        if c.kind == "n" and c.formula is None and c.value
    }
    columns = range(1, 2 * LAST_COLUMN + 1)
    found = read_columns(scan, columns, range(len(scan)), rules(TEXTS), lambda column: ())
    numbers = {
        (scan.numbers[position], number): cells.numbers[position]
        for number, cells in found.items()
        for position, kind in enumerate(cells.kinds)
        if kind == NUMBER
    }
    assert numbers == expected


@pytest.mark.parametrize(
    ("rows", "column_read"),
    [
        ('<row r="1"/><row r="2"><c r="A1"><v>1</v></c></row>', 1),
        ('<row r="1"><c r="A2"><v>1</v></c></row><row r="2"/>', 1),
        ('<row r="1"/><row r="3"><c r="A2"><v>1</v></c></row>', 1),
    ],
)
def test_a_cell_in_the_wrong_row_is_refused(rows: str, column_read: int) -> None:
    with pytest.raises(Refusal, match="out of order"):
        column(scan_of(rows), column_read)


def test_a_text_number_that_is_none_is_refused() -> None:
    scan = scan_of('<row r="1"><c r="A1" t="s"><v>first</v></c></row>')
    with pytest.raises(Refusal, match="says 'first' where a whole number belongs"):
        column(scan)


def test_what_a_cell_shows_is_read_as_text() -> None:
    scan = scan_of(
        '<row r="1"><c r="A1"/><c r="B1" t="s"><v>1</v></c><c r="C1" t="b"><v> 1 </v></c>'
        '<c r="D1"><v>2.5</v></c><c r="E1" t="inlineStr"><is><t>a&amp;b</t></is></c></row>'
    )
    shown = [shown_text(scan, one, rules(TEXTS)).text for one in scan.cells(0)]
    assert shown == ["", ">6", "TRUE", "2.5", "a&b"]
