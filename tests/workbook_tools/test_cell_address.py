"""Addresses: what is read, what is refused, and that both directions agree with openpyxl's own."""

from __future__ import annotations

import pytest
from openpyxl.utils import get_column_letter, range_boundaries

from workbook_tools.cell_address import (
    MAX_COLUMN,
    MAX_ROW,
    CellAddress,
    Range,
    column_letters,
    column_number,
    parse_cell,
    parse_range,
)
from workbook_tools.errors import UsageError


def test_every_column_has_the_letters_that_openpyxl_gives_it() -> None:
    for column in range(1, MAX_COLUMN + 1):
        letters = column_letters(column)
        assert letters == get_column_letter(column)
        assert column_number(letters) == column


@pytest.mark.parametrize("column", [0, -1, MAX_COLUMN + 1])
def test_a_column_number_outside_the_sheet_is_refused(column: int) -> None:
    with pytest.raises(UsageError, match=str(column)):
        column_letters(column)


@pytest.mark.parametrize(("letters", "number"), [("a", 1), ("$AB", 28), ("xfd", MAX_COLUMN)])
def test_column_letters_are_read_in_any_case_with_or_without_a_dollar(
    letters: str, number: int
) -> None:
    assert column_number(letters) == number


@pytest.mark.parametrize("letters", ["", "XFE", "AAAA", "A1", "1", "A B", "Å", "$", "A$", "Ａ"])
def test_what_is_no_column_is_refused_by_name(letters: str) -> None:
    with pytest.raises(UsageError, match="is not a column"):
        column_number(letters)


@pytest.mark.parametrize(
    ("text", "row", "column"),
    [("A1", 1, 1), ("d7", 7, 4), ("$D$7", 7, 4), ("XFD1048576", MAX_ROW, MAX_COLUMN)],
)
def test_a_cell_is_read(text: str, row: int, column: int) -> None:
    assert parse_cell(text) == CellAddress(row, column)


@pytest.mark.parametrize(
    "text", ["", "A", "7", "A0", "XFE1", "A1048577", "A1:B2", "A-1", " A1", "A1 ", "A١", "$$A1"]
)
def test_what_is_no_cell_is_refused_by_name(text: str) -> None:
    with pytest.raises(UsageError, match="is not a cell"):
        parse_cell(text)


def test_a_cell_is_written_without_dollars() -> None:
    assert parse_cell("$ab$12").a1 == "AB12"


@pytest.mark.parametrize(
    "text", ["A1:D10", "$B$2:$C$9", "C3", "B:D", "$B:$B", "3:5", "$1:$1", "A1:XFD1048576"]
)
def test_ranges_agree_with_openpyxl(text: str) -> None:
    first_column, first_row, last_column, last_row = range_boundaries(text)
    assert parse_range(text) == Range(
        first_row or 1, first_column or 1, last_row or MAX_ROW, last_column or MAX_COLUMN
    )


def test_corners_in_the_wrong_order_are_put_right() -> None:
    assert parse_range("D10:A1") == parse_range("D1:A10") == parse_range("A1:D10")
    assert parse_range("D:B") == parse_range("B:D")
    assert parse_range("5:3") == parse_range("3:5")


@pytest.mark.parametrize(
    "text",
    [
        "",
        ":",
        "A",
        "3",
        "A1:",
        ":A1",
        "A:3",
        "3:A",
        "A1:B",
        "A1:B2:C3",
        "XFE:XFE",
        "0:3",
        "1:1048577",
    ],
)
def test_what_is_no_range_is_refused_by_name(text: str) -> None:
    with pytest.raises(UsageError, match="is not a range"):
        parse_range(text)


def test_a_range_is_written_as_short_as_possible_and_knows_its_size() -> None:
    assert parse_range("$A$1:$D$10").a1 == "A1:D10"
    assert parse_range("B2:B2").a1 == "B2"
    assert (parse_range("A1:D10").width, parse_range("A1:D10").height) == (4, 10)


def test_contains_counts_the_edges_in() -> None:
    area = parse_range("B2:C3")
    inside = {
        (row, column) for row in range(6) for column in range(6) if area.contains(row, column)
    }
    assert inside == {(2, 2), (2, 3), (3, 2), (3, 3)}


@pytest.mark.parametrize(
    ("other", "meets"),
    [
        ("A1", False),
        ("A1:B2", True),
        ("D4", True),
        ("E2:F9", False),
        ("B5:D6", False),
        ("A3:Z3", True),
        ("C:C", True),
        ("E:E", False),
        ("4:4", True),
        ("5:5", False),
        ("C3", True),
        ("A1:Z99", True),
    ],
)
def test_intersects_is_true_when_a_cell_is_shared_and_symmetric(other: str, meets: bool) -> None:
    area = parse_range("B2:D4")
    assert area.intersects(parse_range(other)) is meets
    assert parse_range(other).intersects(area) is meets
