"""Cells and ranges in A1 notation; rows and columns count from 1."""

from __future__ import annotations

import re
from typing import NamedTuple

from workbook_tools.errors import UsageError

MAX_ROW = 1_048_576
"""Last row of a sheet (ECMA-376 part 1, ST_CellRef; limits of the file format)."""

MAX_COLUMN = 16_384
"""Last column of a sheet, XFD."""

_CORNER = re.compile(r"\$?([A-Za-z]{1,3})\$?([0-9]{1,7})")
_COLUMN = re.compile(r"\$?([A-Za-z]{1,3})")
_ROW = re.compile(r"\$?[0-9]{1,7}")


def column_letters(column: int) -> str:
    """Return the letters of a column: 1 gives A, 28 gives AB.

    Raises:
        UsageError: `column` is not in 1..16384.
    """
    if not 1 <= column <= MAX_COLUMN:
        raise UsageError(
            f"column number {column} does not exist; columns run from 1 to {MAX_COLUMN}."
        )
    letters = ""
    while column:
        column, place = divmod(column - 1, 26)
        letters = chr(ord("A") + place) + letters
    return letters


def column_number(letters: str) -> int:
    """Return the number of a column: A gives 1, `$ab` gives 28.

    Raises:
        UsageError: `letters` name no column between A and XFD.
    """
    match = _COLUMN.fullmatch(letters)
    number = 0
    for letter in match[1].upper() if match else "":
        number = number * 26 + ord(letter) - ord("A") + 1
    if not 1 <= number <= MAX_COLUMN:
        raise UsageError(f"{letters!r} is not a column; columns run from A to XFD.")
    return number


class CellAddress(NamedTuple):
    """One cell."""

    row: int
    column: int

    @property
    def a1(self) -> str:
        """The address without dollar signs, such as `D7`."""
        return f"{column_letters(self.column)}{self.row}"


class Range(NamedTuple):
    """A rectangle of cells, both corners included."""

    first_row: int
    first_column: int
    last_row: int
    last_column: int

    @property
    def a1(self) -> str:
        """The range without dollar signs; one cell gives `D7`, whole columns give `D1:D1048576`."""
        first = CellAddress(self.first_row, self.first_column).a1
        last = CellAddress(self.last_row, self.last_column).a1
        return first if first == last else f"{first}:{last}"

    @property
    def width(self) -> int:
        """Number of columns."""
        return self.last_column - self.first_column + 1

    @property
    def height(self) -> int:
        """Number of rows."""
        return self.last_row - self.first_row + 1

    def contains(self, row: int, column: int) -> bool:
        """Tell whether the cell lies inside."""
        return (
            self.first_row <= row <= self.last_row
            and self.first_column <= column <= self.last_column
        )

    def intersects(self, other: Range) -> bool:
        """Tell whether the two share at least one cell."""
        return (
            self.first_row <= other.last_row
            and other.first_row <= self.last_row
            and self.first_column <= other.last_column
            and other.first_column <= self.last_column
        )


def parse_cell(text: str) -> CellAddress:
    """Read one cell such as `D7`, `d7` or `$D$7`.

    Raises:
        UsageError: the text is no cell between A1 and XFD1048576.
    """
    match = _CORNER.fullmatch(text)
    if match:
        row, column = int(match[2]), _column_or_zero(match[1])
        if 1 <= row <= MAX_ROW and column:
            return CellAddress(row, column)
    raise UsageError(f"{text!r} is not a cell; cells run from A1 to XFD{MAX_ROW}.")


def parse_range(text: str) -> Range:
    """Read `A1:D10`, one cell `A1`, whole columns `B:D` or whole rows `3:5`, with or without `$`.

    Corners in any order are put right, as spreadsheet programs do.

    Raises:
        UsageError: the text is no range within a sheet.
    """
    ends = text.split(":")
    if len(ends) <= 2:
        first, last = ends[0], ends[-1]
        try:
            if _CORNER.fullmatch(first):
                top, bottom = parse_cell(first), parse_cell(last)
                return _ordered(top.row, top.column, bottom.row, bottom.column)
            if len(ends) == 2 and _COLUMN.fullmatch(first):
                return _ordered(1, column_number(first), MAX_ROW, column_number(last))
            if len(ends) == 2 and _ROW.fullmatch(first) and _ROW.fullmatch(last):
                top_row, bottom_row = sorted(int(end.removeprefix("$")) for end in ends)
                if top_row >= 1 and bottom_row <= MAX_ROW:
                    return Range(top_row, 1, bottom_row, MAX_COLUMN)
        except UsageError:
            pass
    raise UsageError(f"{text!r} is not a range; write it like A1:D10, B:D or 3:5.")


def _column_or_zero(letters: str) -> int:
    try:
        return column_number(letters)
    except UsageError:
        return 0


def _ordered(row: int, column: int, other_row: int, other_column: int) -> Range:
    return Range(
        min(row, other_row),
        min(column, other_column),
        max(row, other_row),
        max(column, other_column),
    )
