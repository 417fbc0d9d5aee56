"""What the cells of a column hold: a number, nothing, or something that is left with a reason.

Read are number cells, text that is plainly a number, and the stored results of formulas. Whatever
else stands in a cell is left and said why; no cell is guessed at.
"""

from __future__ import annotations

import math
import re
from array import array
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

from epochconv.number_text import plain_number
from workbook_tools.cell_address import column_letters
from workbook_tools.sheet_scan import CellSpan, SheetScan
from workbook_tools.written_values import whole_number

ABSENT, EMPTY, WHITE, NUMBER, LEFT = range(5)

# A formula that sums up a column stands in a line of totals, not in a row of the log; one that only
# looks at cells of one row, such as the mean of two spectra, is a value like any other.
_SUMMARY = re.compile(
    r"\b(?:SUM|SUBTOTAL|AGGREGATE|AVERAGE|MEDIAN|COUNT|COUNTA|MIN|MAX|STDEV|VAR|SUMPRODUCT)"
    r"(?:\.[SP]|A|IFS?)?\s*\(",
    re.IGNORECASE,
)
_RANGE = re.compile(r"\$?[A-Z]{1,3}\$?([0-9]{1,7}):\$?[A-Z]{1,3}\$?([0-9]{1,7})", re.IGNORECASE)
_MOVING_ROW = re.compile(r"(?<![\w.$])\$?[A-Z]{1,3}([0-9]{1,7})(?![\w.(\[])", re.IGNORECASE)
_THIS_ROW = re.compile(r"\[\[?#This Row\]", re.IGNORECASE)

NOT_READ = "not read: "
"""What precedes a text in the reason why it is left."""

SUMS_UP = "a formula over other cells, not a row of the log"
_DATE = "a date, not a number; what was typed is lost"

TextOf = Callable[[int], str]


@dataclass
class ColumnCells:
    """The cells of one column in the given rows.

    Attributes:
        column: counted from 1.
        indices: indices of the rows in the scan.
        kinds: ABSENT (no element), EMPTY (an element that holds nothing), WHITE (a text without a
            visible sign, which is nothing to read and nothing to overwrite), NUMBER or LEFT.
        numbers: the value of each NUMBER cell; 0 elsewhere.
        styles: the format of each cell; -1 where there is no element.
        reasons: why a LEFT cell is left, by position.
        from_text, from_formulas: how many numbers were text, or results of formulas.
    """

    column: int
    indices: range
    kinds: bytearray
    numbers: array[float]
    styles: array[int]
    reasons: dict[int, str] = field(default_factory=dict)
    from_text: int = 0
    from_formulas: int = 0

    def count(self, kind: int) -> int:
        """Return how many cells are of a kind."""
        return self.kinds.count(kind)

    def is_blank(self, position: int) -> bool:
        """Tell whether nothing stands in the cell."""
        return self.kinds[position] in (ABSENT, EMPTY)


def read_columns(
    scan: SheetScan,
    columns: Sequence[int],
    indices: range,
    text_of: TextOf,
    is_date: Callable[[int], bool],
) -> dict[int, ColumnCells]:
    """Read columns of a sheet in the given rows.

    Args:
        indices: indices of rows in the scan.
        text_of: the shared string of a number.
        is_date: whether a style shows numbers as dates.
    """
    readers = {column: _ColumnReader(scan, column, indices, text_of, is_date) for column in columns}
    if scan.cells_regular:
        for reader in readers.values():
            reader.take_all()
    else:
        for position, index in enumerate(indices):
            for cell in scan.cells(index):
                if cell.column in readers:
                    readers[cell.column].take(position, cell)
    return {column: reader.cells for column, reader in readers.items()}


def shown_text(scan: SheetScan, cell: CellSpan, text_of: TextOf) -> str:
    """Return what a cell holds as text, "" for nothing."""
    if cell.type == "inlineStr":
        return scan.inline_text(cell)
    value = scan.value_text(cell)
    if value is None:
        return ""
    if cell.type == "s":
        return text_of(whole_number(value, scan.part))
    if cell.type == "b":
        return "TRUE" if value.strip() == "1" else "FALSE"
    return value


class _ColumnReader:
    """Sorts the cells of one column."""

    def __init__(
        self,
        scan: SheetScan,
        column: int,
        indices: range,
        text_of: TextOf,
        is_date: Callable[[int], bool],
    ) -> None:
        self.scan = scan
        self.text_of = text_of
        self.is_date = is_date
        self.dates: dict[int, bool] = {}
        count = len(indices)
        self.cells = ColumnCells(
            column,
            indices,
            bytearray(count),
            array("d", bytes(8 * count)),
            array("q", [-1]) * count,
        )

    def take_all(self) -> None:
        """Sort every cell of the column, plain numbers without a closer look."""
        cells, scan = self.cells, self.scan
        letters = column_letters(cells.column).encode()
        index, stop = cells.indices.start, cells.indices.stop
        kinds, numbers, styles, rows = cells.kinds, cells.numbers, cells.styles, scan.numbers
        first = rows[index] if index < stop else 0
        for row, start, style, number in scan.plain_numbers(letters):
            if row < first:
                continue
            while index < stop and rows[index] < row:
                index += 1
            if index >= stop:
                break
            if rows[index] != row or not scan.starts[index] < start < scan.ends[index]:
                raise scan.disordered(f"{letters.decode()}{row}")
            position = index - cells.indices.start
            if number is None or not -math.inf < number < math.inf:
                cell = scan.find_cell(index, letters)
                assert cell is not None  # it has just been seen there
                self.take(position, cell)
            elif self._shows_dates(style):
                self._leave(position, style, _DATE)
            else:
                kinds[position] = NUMBER
                numbers[position] = number
                styles[position] = style

    def take(self, position: int, cell: CellSpan) -> None:
        """Sort one cell."""
        cells = self.cells
        cells.styles[position] = cell.style
        if self.scan.is_empty(cell):
            cells.kinds[position] = EMPTY
            return
        formula = self.scan.formula(cell)
        text = shown_text(self.scan, cell, self.text_of)
        if not text.strip() and (formula is None or cell.type == "str"):
            cells.kinds[position] = WHITE
            return
        found = self._number_or_reason(cell, formula, text)
        if isinstance(found, str):
            self._leave(position, cell.style, found)
            return
        cells.kinds[position] = NUMBER
        cells.numbers[position] = found
        cells.from_text += cell.type in ("s", "inlineStr", "str")
        cells.from_formulas += formula is not None

    def _leave(self, position: int, style: int, reason: str) -> None:
        cells = self.cells
        cells.kinds[position] = LEFT
        cells.styles[position] = style
        cells.reasons[position] = reason

    def _number_or_reason(self, cell: CellSpan, formula: str | None, text: str) -> float | str:
        if formula is not None and _sums_up_rows(formula):
            return SUMS_UP
        if not text.strip():
            return "a formula without a stored result; recalculate and save the workbook first"
        if cell.type == "b":
            return NOT_READ + text
        if cell.type == "e":
            return f"a formula error: {text}"
        if cell.type == "d" or (cell.type == "n" and self._shows_dates(cell.style)):
            return _DATE
        number = plain_number(text)
        if number is None or not math.isfinite(number):
            return NOT_READ + _shortened(text)
        return number

    def _shows_dates(self, style: int) -> bool:
        known = self.dates.get(style)
        if known is None:
            known = self.dates[style] = self.is_date(style)
        return known


def _sums_up_rows(formula: str) -> bool:
    if _SUMMARY.search(formula) is None or _THIS_ROW.search(formula) is not None:
        return False
    if any(first != last for first, last in _RANGE.findall(formula)):
        return True
    return len(set(_MOVING_ROW.findall(formula))) != 1


def _shortened(text: str) -> str:
    line = " ".join(text.split())
    return line if len(line) <= 60 else line[:57] + "..."
