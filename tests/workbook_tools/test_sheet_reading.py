"""A sheet as a log: its header row, what its headings mean, and which rows belong to it."""

from __future__ import annotations

import pytest

from tests.workbook_tools.small_sheets import cell, grid, reading_of, row, scan_of, table_at
from workbook_tools.cell_address import Range, parse_range
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import NUMBER

LOG = grid(
    ["Programme of invented objects"],
    [None, "kept by many hands"],
    ["Object", "z", "Age [Gyr]", "Note"],
    ["first", 1.0, 5.8, "z from lines"],
    ["second", 2.0],
)


def rows_of(reading: SheetReading) -> list[int]:
    """Numbers of the rows of the log."""
    return [reading.scan.numbers[index] for index in reading.rows]


def test_the_header_row_is_the_one_with_most_headings() -> None:
    reading = reading_of(LOG)
    assert reading.header_row == 3
    assert reading.texts == {1: "Object", 2: "z", 3: "Age [Gyr]", 4: "Note"}
    assert {c: h.measure.name for c, h in reading.headings.items()} == {2: "redshift", 3: "age"}
    assert rows_of(reading) == [4, 5]


def test_one_heading_in_a_title_does_not_win() -> None:
    reading = reading_of(grid(["Redshift"], [], ["z", "Age [Gyr]"], [1.0]))
    assert reading.header_row == 3
    assert reading_of(grid(["z"], ["z_phot"], [1.0])).header_row == 1


def test_headings_may_be_shared_texts_rich_or_results_of_formulas() -> None:
    rows = (
        '<row r="2"><c r="A2" t="s"><v>1</v></c><c r="B2" t="inlineStr"><is><r><t>Age </t></r>'
        '<r><t>[Gyr]</t></r></is></c><c r="C2" t="str"><f>"D"&amp;"_C / Mpc"</f><v>D_C / Mpc</v>'
        '</c><c r="D2"/><c r="E2" t="inlineStr"><is><t> </t></is></c></row>'
    )
    assert reading_of(rows, texts=["x", "z"]).texts == {1: "z", 2: "Age [Gyr]", 3: "D_C / Mpc"}


def test_a_sheet_without_headings_has_no_header_row_and_no_log() -> None:
    reading = reading_of(grid(["Object", "magnitude"], ["first", 21.3]))
    assert (reading.header_row, reading.headings, list(reading.rows)) == (None, {}, [])
    assert reading_of("").header_row is None


def test_headings_far_below_the_top_are_not_looked_for() -> None:
    rows = "".join(row(number, float(number)) for number in range(1, 201))
    assert reading_of(rows + row(201, "z", "Age [Gyr]")).header_row is None
    assert reading_of(rows + row(201, "z"), header_row=201).header_row == 201


def test_the_header_row_can_be_named() -> None:
    reading = reading_of(grid(["z"], ["z", "Age [Gyr]"], [1.0, 5.8]), header_row=1)
    assert (reading.header_row, rows_of(reading)) == (1, [2, 3])


@pytest.mark.parametrize("number", [-1, 0, 2, 4, 9])
def test_a_row_that_holds_no_text_is_no_header(number: int) -> None:
    rows = grid(["z"], [], [1.0]) + '<row r="4"><c r="A4" s="2"/></row>'
    with pytest.raises(UsageError, match=f"row {number} of sheet 'Log' holds no headings; name"):
        reading_of(rows, header_row=number)


def test_the_log_ends_with_its_table() -> None:
    table = table_at(parse_range("A3:D4"), "Object", "z", "Age [Gyr]", "Note")
    assert rows_of(reading_of(LOG, tables=[table])) == [4]
    totals = table_at(parse_range("A3:D5"), "Object", "z", "Age [Gyr]", "Note", totals=1)
    assert rows_of(reading_of(LOG, tables=[totals])) == [4]


def test_the_log_ends_above_another_table() -> None:
    below = table_at(Range(5, 1, 9, 2), "P", "Q")
    assert rows_of(reading_of(LOG, tables=[below])) == [4]


@pytest.mark.parametrize("top", [1, 3, 5])
def test_a_table_beside_the_log_does_not_end_it(top: int) -> None:
    beside = table_at(Range(top, 8, top + 3, 9), "P", "Q")
    assert rows_of(reading_of(LOG, tables=[beside])) == [4, 5]


def test_the_table_of_a_column_is_told() -> None:
    table = table_at(parse_range("A3:C5"), "Object", "z", "Age [Gyr]")
    reading = reading_of(LOG, tables=[table])
    assert reading.table_of(2) == table
    assert reading.table_of(4) is None


def test_cells_are_read_once_in_the_rows_of_the_log() -> None:
    reading = reading_of(LOG)
    ages, redshifts = reading.columns([3, 2])
    assert list(redshifts.numbers) == [1.0, 2.0]
    assert [ages.is_blank(position) for position in (0, 1)] == [False, True]
    assert reading.columns([2])[0] is redshifts
    assert reading.where(1, 2) == "B5"


def test_nothing_goes_into_merges_arrays_and_pivot_tables() -> None:
    scan = scan_of(
        '<row r="1"><c r="A1"><f t="array" ref="A1:A3">B1:B3</f><v>1</v></c>'
        '<c r="D1"><f t="shared" ref="D1:D9" si="0">B1</f></c></row>'
        '<row r="5"><c r="F5"><f t="dataTable" ref="F5:G9" r1="A1"/><v>1</v></c></row>',
        tail='<mergeCells count="1"><mergeCell ref="B7:C8"/></mergeCells>',
    )
    blocked = [one.a1 for one in reading_of(scan, pivots=[parse_range("J1:K4")]).blocked]
    assert sorted(blocked) == ["A1:A3", "B7:C8", "F5:G9", "J1:K4"]


def test_a_merge_that_is_no_range_is_refused() -> None:
    scan = scan_of("", tail='<mergeCells><mergeCell ref="here"/></mergeCells>')
    with pytest.raises(Refusal, match="says 'here' where a range of cells belongs"):
        reading_of(scan)


def test_measures_without_their_unit_are_told() -> None:
    reading = reading_of(grid(["z", "Age", "D_C", "Note"], [1.0]))
    assert reading.doubts() == [
        "sheet 'Log': heading 'Age' (B1) is left alone: age without a unit; write 'Age [Gyr]'",
        "sheet 'Log': heading 'D_C' (C1) is left alone: comoving distance without a unit; write"
        " 'D_C [Mpc]'",
    ]
    assert len(reading.doubts(settled=2)) == 1


def test_the_last_used_column_is_that_of_the_last_cell_with_something() -> None:
    rows = row(1, 1.0, None, "x") + f'<row r="2">{cell("B2", 1.0)}{cell("H2", None, 3)}</row>'
    reading = reading_of(rows)
    assert reading.last_used_column([0]) == 3
    assert reading.last_used_column([1]) == 2
    assert reading.last_used_column(range(2)) == 3
    assert reading.last_used_column([]) == 0


@pytest.mark.parametrize(
    ("rows", "header", "log"),
    [
        (grid(["remark"], ["name", "value"], ["first", 0.5], ["second", 1.5]), 2, [3, 4]),
        (grid([0.0, 0.5], [None, 1.5]), None, [1, 2]),
        (grid(["a"], ["b"]), None, []),
        (grid([None, "value"], [None, None], [None, 0.5]), 1, [2, 3]),
    ],
    ids=["heading", "no heading", "no numbers", "gap"],
)
def test_the_header_above_a_column_of_numbers_is_found(
    rows: str, header: int | None, log: list[int]
) -> None:
    reading = reading_of(rows)
    reading.take_header_above(2)
    assert (reading.header_row, rows_of(reading)) == (header, log)
    if log:
        (cells,) = reading.columns([2])
        assert cells.count(NUMBER) == sum(f"B{number}" in rows for number in log)
