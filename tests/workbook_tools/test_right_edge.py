"""Where new columns stand: at the right edge of the log, in its table where that can grow."""

from __future__ import annotations

import pytest

from tests.workbook_tools.small_sheets import cell, grid, reading_of, row, scan_of, table_at
from workbook_tools.cell_address import MAX_COLUMN, Range, parse_range
from workbook_tools.errors import Refusal
from workbook_tools.right_edge import free_columns, right_edge
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.tables import Table

LOG = grid(["Object", "z"], ["first", 1.0], ["second", 2.0])
TABLE = table_at(parse_range("A1:B3"), "Object", "z")


def edge(reading: SheetReading, count: int = 1) -> tuple[int, Table | None, str]:
    return right_edge(reading, 2, count)


def test_without_a_table_the_next_free_column_is_taken() -> None:
    assert edge(reading_of(LOG), 3) == (3, None, "")


def test_a_remark_in_the_rows_of_the_log_is_left_free() -> None:
    rows = grid(["Object", "z"], ["first", 1.0], ["second", 2.0, None, "beside"])
    assert edge(reading_of(rows))[0] == 5


def test_what_stands_above_and_below_the_log_does_not_count() -> None:
    above = row(1, *[None] * 8, "title") + grid([], ["Object", "z"], ["first", 1.0])[16:]
    assert reading_of(above).header_row == 2
    assert edge(reading_of(above))[0] == 3


def test_cells_with_nothing_but_a_colour_are_free() -> None:
    rows = LOG + f'<row r="4">{cell("B4", 3.0)}{cell("C4", None, 3)}</row>'
    assert edge(reading_of(rows))[0] == 3


@pytest.mark.parametrize("count", [1, 2])
def test_a_column_that_meets_a_merge_is_passed_over(count: int) -> None:
    merge = '<mergeCells count="1"><mergeCell ref="D2:E2"/></mergeCells>'
    expected = {1: 3, 2: 6}
    assert edge(reading_of(scan_of(LOG, tail=merge)), count)[0] == expected[count]


def test_a_neighbouring_table_is_passed_over() -> None:
    other = table_at(Range(3, 3, 4, 4), "P", "Q")
    assert edge(reading_of(LOG, tables=[other]))[0] == 5


def test_the_table_of_the_log_grows() -> None:
    assert edge(reading_of(LOG, tables=[TABLE]), 2) == (3, TABLE, "")


@pytest.mark.parametrize(
    ("rows", "tables"),
    [
        (LOG, [TABLE, table_at(Range(3, 3, 9, 3), "P")]),
        (grid(["Object", "z"], ["first", 1.0], ["second", 2.0, "remark"]), [TABLE]),
        (LOG + row(4, None, None, "below"), [table_at(parse_range("A1:B4"), "Object", "z")]),
    ],
    ids=["another table", "a remark", "a remark in the last row"],
)
def test_a_table_with_something_beside_it_does_not_grow(rows: str, tables: list[Table]) -> None:
    column, table, note = edge(reading_of(rows, tables=tables))
    assert (column, table) == (4, None)
    assert note == (
        "table 'Objects' cannot grow (something stands beside it); the new columns stand outside it"
    )


def test_a_table_that_must_not_grow_says_why() -> None:
    table = table_at(parse_range("A1:B3"), "Object", "z", growable=False)
    column, grown, note = edge(reading_of(LOG, tables=[table]))
    assert (column, grown) == (3, None)
    assert "cannot grow (it shows the result of a query)" in note


def test_a_full_sheet_is_refused() -> None:
    last = '<row r="1"><c r="A1" t="inlineStr"><is><t>z</t></is></c><c r="XFC1"><v>1</v></c></row>'
    reading = reading_of(last + row(2, 1.0))
    assert free_columns(reading, 1, 2, 1) == MAX_COLUMN
    with pytest.raises(Refusal, match="sheet 'Log' has no 2 free columns at its right edge; move"):
        free_columns(reading, 1, 2, 2)


def test_a_table_at_the_last_column_does_not_grow() -> None:
    table = table_at(Range(1, 1, 3, MAX_COLUMN), "Object", "z")
    reading = reading_of(LOG, tables=[table])
    with pytest.raises(Refusal, match="no 1 free columns"):
        edge(reading)
