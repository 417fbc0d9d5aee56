"""Rows that are none of the log: totals by formula or label, merges, hidden, other headings."""

from __future__ import annotations

from collections.abc import Sequence

import pytest

from tests.workbook_tools.small_sheets import Value, grid, reading_of, row, scan_of, table_at
from workbook_tools.cell_address import parse_range
from workbook_tools.rows_passed_over import rows_passed_over
from workbook_tools.sheet_reading import SheetReading


def passed(reading: SheetReading, column: int = 2) -> dict[str, str]:
    """Why by address."""
    (cells,) = reading.columns([column])
    found = rows_passed_over(reading, cells, reading.headings[column])
    return {reading.where(position, column): why for position, why in found.items()}


def log(*rows: Sequence[Value]) -> SheetReading:
    return reading_of(grid(["Object", "z", "Note"], *rows))


@pytest.mark.parametrize(
    "label",
    [
        *("Total", "TOTAL:", "Sum", "Subtotal", "Grand total", "sub-total"),
        *("Mean", "mean z", "Mean of all", "Average", "Avg.", "Median:", "Mean (12 objects)"),
        *("Count", "Min", "Maximum", "Std dev", "std. dev.", "Standard deviation", "RMS"),
        *("Mean = ", "mean ± scatter"),
    ],
)
def test_a_line_of_totals_is_known_by_its_label(label: str) -> None:
    found = log(["first", 1.0], ["second", 2.0], [label, 1.5], ["third", 3.0])
    assert passed(found) == {"B4": "a line of totals"}


@pytest.mark.parametrize(
    "label",
    ["Maxwell 12", "Meany", "Sumner 3", "total eclipse 4", "MEAN-0412", "Mini 5", "counterpart"],
)
def test_an_object_may_be_called_like_one(label: str) -> None:
    assert passed(log(["first", 1.0], [label, 1.5])) == {}


def test_only_what_stands_left_of_the_values_is_a_label() -> None:
    assert passed(log(["first", 1.0, "mean"], ["second", 2.0, "total"])) == {}
    assert passed(reading_of(grid(["z", "Note"], [1.0, "mean"])), 1) == {}


def test_a_label_without_a_value_is_nothing() -> None:
    assert passed(log(["first", 1.0], ["Total", None])) == {}


def test_labels_are_found_however_cells_are_written() -> None:
    rows = '<row r="1"><c t="inlineStr"><is><t>Object</t></is></c><c t="s"><v>0</v></c></row>'
    rows += '<row><c t="str"><f>"To"&amp;"tal"</f><v>Total</v></c><c><v>1.5</v></c></row>'
    reading = reading_of(rows, texts=["z"])
    assert not reading.scan.cells_regular
    assert passed(reading) == {"B2": "a line of totals"}


def test_a_formula_over_rows_is_a_total_whatever_its_label() -> None:
    total = '<row r="3"><c r="B3"><f>SUM(B2:B2,B1)</f><v>3</v></c></row>'
    reading = reading_of(grid(["Object", "z"], ["a", 1.0]) + total)
    assert passed(reading) == {"B3": "a line of totals"}


@pytest.mark.parametrize(
    ("area", "found"),
    [
        ("B2:B3", {"B2": "merged cells"}),  # only the first holds the value
        ("B2:C2", {}),  # one row, whatever its width
        ("A3:C3", {}),  # a heading between blocks
        ("C2:C3", {}),
        ("B5:B6", {}),
    ],
)
def test_values_in_merged_cells(area: str, found: dict[str, str]) -> None:
    rows = grid(["Object", "z", "Note"], ["a", 1.0], ["Spring"], ["b", 2.0])
    tail = f'<mergeCells><mergeCell ref="{area}"/></mergeCells>'
    assert passed(reading_of(scan_of(rows, tail=tail))) == found


def hidden(number: int, *values: Value) -> str:
    return row(number, *values).replace("<row ", '<row hidden="1" ')


ROWS = row(1, "Object", "z") + row(2, "a", 1.0) + hidden(3, "b", 2.0) + hidden(4, "c")
FILTER = '<autoFilter ref="A1:B9"><filterColumn colId="0"/></autoFilter>'
UNUSED = '<autoFilter ref="A1:B9"/>'


@pytest.mark.parametrize(
    ("tail", "found"),
    [
        ("", {"B3": "a row hidden by hand"}),
        (UNUSED, {"B3": "a row hidden by hand"}),
        (FILTER, {}),
        (FILTER.replace("A1:B9", "A7:B9"), {"B3": "a row hidden by hand"}),
    ],
)
def test_hidden_rows_are_passed_over_unless_a_filter_hides_them(
    tail: str, found: dict[str, str]
) -> None:
    assert passed(reading_of(scan_of(ROWS, tail=tail))) == found


def test_the_filter_of_a_table_hides_rows_too() -> None:
    table = table_at(parse_range("A1:B4"), "Object", "z")
    assert len(passed(reading_of(ROWS, tables=[table]))) == 1


def test_a_repeated_row_of_headings_or_units() -> None:
    rows = grid(["Object", "Age"], ["", "Gyr"], ["a", 1.0], ["Object", "Age"], ["", "Gyr"])
    rows += row(6, "b", 2.0)
    assert passed(reading_of(rows)) == {"B4": "repeated headings", "B5": "repeated headings"}


@pytest.mark.parametrize("text", [" Z", "z\n", "z  "])
def test_white_space_and_capitals_do_not_matter_in_repeated_headings(text: str) -> None:
    assert passed(log(["a", 1.0], ["Object", text])) == {"B3": "repeated headings"}


def test_a_heading_with_line_breaks_is_known_again() -> None:
    rows = grid(["Object", "Age\nof the universe\n[Gyr]"], ["a", 1.0])
    rows += row(3, "Object", "Age of the universe [Gyr]")
    assert passed(reading_of(rows)) == {"B3": "repeated headings"}


def test_below_other_headings_nothing_is_taken_for_the_old_ones() -> None:
    rows = [["a", 1.0], ["Object", "Age [Gyr]", "z"], ["b", 2.0, 3.3], [None, None], ["c", 3.0]]
    found = reading_of(grid(["Object", "z", "D_C [Mpc]", "a []"], *rows))
    why = "below other headings; fill these rows with --header-row 3"
    assert passed(found) == {"B3": why, "B4": why, "B6": why}


def test_a_remark_that_is_a_heading_elsewhere_begins_no_other_log() -> None:
    assert passed(log(["a", 1.0], ["b", "Age [Gyr]"], ["c", 2.0])) == {}


def test_a_label_among_the_values_is_a_text_like_others() -> None:
    assert passed(reading_of(grid(["z", "Note"], [1.0], ["Total"])), 1) == {}
