"""What the cells of a column hold: a value, nothing, or something that is left with a reason.

A number cell holds a value; so does text that the grammar of typed values reads (with its error,
its limit, its unit), and the stored result of a formula. Whatever else stands in a cell is left and
said why; no cell is guessed at.
"""

from __future__ import annotations

import math
import re
from array import array
from collections.abc import Callable, Collection, Sequence
from dataclasses import dataclass, field

from epochconv.typed_outcomes import NoValue, Remark, Typed
from epochconv.typed_text import read_typed
from epochconv.units import Unit
from workbook_tools.cell_address import column_letters
from workbook_tools.shared_strings import TypedText
from workbook_tools.sheet_scan import CellSpan, SheetScan
from workbook_tools.written_values import whole_number

ABSENT, EMPTY, WHITE, WORD, NUMBER, LIMIT, LEFT = range(7)

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

SUMS_UP = "a formula over other cells, not a row of the log"
_DATE = "a date that a spreadsheet program made of something else, which is lost; type it again"
_PARTLY_STRUCK = "struck through in part; keep one value"
_RAISED = "raised or lowered digits, which could be an exponent or a footnote; retype it"

STRUCK = "struck through"
FORMULA = "results of formulas, as last stored"
TEXT = "numbers typed as text"


@dataclass(frozen=True)
class CellRules:
    """How cells are read, beyond the grammar.

    Attributes:
        text_of: a shared text by its number.
        is_date, is_percent, is_struck: what a style does with numbers and letters.
        decimal_comma: whether commas are decimal marks.
        brackets_are_notes: whether a bracket behind a number is a note.
        missing: numbers that stand for "no value".
    """

    text_of: Callable[[int], TypedText]
    is_date: Callable[[int], bool]
    is_percent: Callable[[int], bool]
    is_struck: Callable[[int], bool]
    decimal_comma: bool = False
    brackets_are_notes: bool = False
    missing: frozenset[float] = frozenset()


@dataclass
class ColumnCells:
    """The cells of one column in the given rows.

    Attributes:
        column: counted from 1.
        indices: indices of the rows in the scan.
        kinds: ABSENT (no element), EMPTY (an element that holds nothing), WHITE (a text without a
            visible sign, which is nothing to read and nothing to overwrite), WORD (a word for "no
            value"), NUMBER, LIMIT or LEFT.
        numbers: the value of each NUMBER and LIMIT cell; 0 elsewhere.
        styles: the format of each cell; -1 where there is no element.
        errors: lower and upper error typed with a value, by position.
        limits: the sign of each LIMIT, by position.
        units: the unit typed with a value, by position.
        reasons: why a LEFT cell is left, by position; the same words for the same cause.
        remarks: what a person should know of cells that were read, with their positions.
        shown: what a WORD or LEFT cell shows, where that is more than a date or nothing.
    """

    column: int
    indices: range
    kinds: bytearray
    numbers: array[float]
    styles: array[int]
    errors: dict[int, tuple[float, float]] = field(default_factory=dict)
    limits: dict[int, str] = field(default_factory=dict)
    units: dict[int, Unit] = field(default_factory=dict)
    reasons: dict[int, str] = field(default_factory=dict)
    remarks: dict[str, list[int]] = field(default_factory=dict)
    shown: dict[int, str] = field(default_factory=dict)

    def count(self, kind: int) -> int:
        """Return how many cells are of a kind."""
        return self.kinds.count(kind)

    def is_blank(self, position: int) -> bool:
        """Tell whether nothing stands in the cell."""
        return self.kinds[position] in (ABSENT, EMPTY)

    def remark(self, text: str, position: int) -> None:
        """Note something about a cell that was read."""
        self.remarks.setdefault(text, []).append(position)


def read_columns(
    scan: SheetScan,
    columns: Sequence[int],
    indices: range,
    rules: CellRules,
    names_of: Callable[[int], Collection[str]],
) -> dict[int, ColumnCells]:
    """Read columns of a sheet in the given rows.

    Args:
        indices: indices of rows in the scan.
        names_of: what a column's quantity may be called inside a cell, as in `z=1.2`.
    """
    readers = {
        column: _ColumnReader(scan, column, indices, rules, names_of(column)) for column in columns
    }
    if scan.cells_regular:
        for reader in readers.values():
            reader.take_all()
    else:
        for position, index in enumerate(indices):
            for cell in scan.cells(index):
                if cell.column in readers:
                    readers[cell.column].take(position, cell)
    return {column: reader.cells for column, reader in readers.items()}


def shown_text(scan: SheetScan, cell: CellSpan, rules: CellRules) -> TypedText:
    """Return what a cell holds as text, "" for nothing."""
    if cell.type == "inlineStr":
        return scan.inline_text(cell)
    value = scan.value_text(cell)
    if value is None:
        return TypedText("")
    if cell.type == "s":
        return rules.text_of(whole_number(value, scan.part))
    if cell.type == "b":
        return TypedText("TRUE" if value.strip() == "1" else "FALSE")
    return TypedText(value)


class _ColumnReader:
    """Sorts the cells of one column."""

    def __init__(
        self,
        scan: SheetScan,
        column: int,
        indices: range,
        rules: CellRules,
        names: Collection[str],
    ) -> None:
        self.scan = scan
        self.rules = rules
        self.names = names
        # Whether a style asks for a closer look: dates, percent, struck letters.
        self.special: dict[int, bool] = {}
        count = len(indices)
        self.cells = ColumnCells(
            column,
            indices,
            bytearray(count),
            array("d", bytes(8 * count)),
            array("q", [-1]) * count,
        )

    def take_all(self) -> None:
        """Sort every cell of the column, plain numbers and texts without a closer look."""
        cells, scan = self.cells, self.scan
        letters = column_letters(cells.column).encode()
        index, stop = cells.indices.start, cells.indices.stop
        kinds, numbers, styles, rows = cells.kinds, cells.numbers, cells.styles, scan.numbers
        missing = self.rules.missing
        first = rows[index] if index < stop else 0
        for row, start, style, number, text in scan.plain_cells(letters):
            if row < first:
                continue
            while index < stop and rows[index] < row:
                index += 1
            if index >= stop:
                break
            if rows[index] != row or not scan.starts[index] < start < scan.ends[index]:
                raise scan.disordered(f"{letters.decode()}{row}")
            position = index - cells.indices.start
            if number is not None and (
                -math.inf < number < math.inf
                and number not in missing
                and not self._is_special(style)
            ):
                kinds[position] = NUMBER
                numbers[position] = number
                styles[position] = style
            elif text is not None:
                self._take_text(position, self.rules.text_of(text), style)
            else:
                cell = scan.find_cell(index, letters)
                assert cell is not None  # it has just been seen there
                self.take(position, cell)

    def take(self, position: int, cell: CellSpan) -> None:
        """Sort one cell."""
        cells = self.cells
        cells.styles[position] = cell.style
        if self.scan.is_empty(cell):
            cells.kinds[position] = EMPTY
            return
        formula = self.scan.formula(cell)
        typed = shown_text(self.scan, cell, self.rules)
        is_text = cell.type in ("s", "inlineStr", "str")
        if is_text and formula is None:
            self._take_text(position, typed, cell.style)
            return
        if not typed.text.strip() and (formula is None or cell.type == "str"):
            cells.kinds[position] = WHITE
            return
        reason = self._reason(cell, formula, typed)
        if reason:
            self._leave(position, reason, "" if reason == _DATE else typed.text)
            return
        self._take_value(position, typed.text, is_text)
        if cells.kinds[position] not in (NUMBER, LIMIT):
            return
        if formula is not None:
            cells.remark(FORMULA, position)
        if self.rules.is_struck(cell.style):
            cells.remark(STRUCK, position)
        if not is_text and self.rules.is_percent(cell.style):
            cells.remark(Remark.PERCENT, position)

    def _take_text(self, position: int, typed: TypedText, style: int) -> None:
        """Sort a cell that holds a typed text."""
        cells = self.cells
        cells.styles[position] = style
        if not typed.text.strip():
            cells.kinds[position] = WHITE
        elif typed.shifted and any(letter.isdigit() for letter in typed.text):
            self._leave(position, _RAISED, typed.text)
        elif typed.partly_struck:
            self._leave(position, _PARTLY_STRUCK, typed.text)
        else:
            self._take_value(position, typed.text, True)
            struck = typed.struck or self.rules.is_struck(style)
            if struck and cells.kinds[position] in (NUMBER, LIMIT):
                cells.remark(STRUCK, position)

    def _take_value(self, position: int, text: str, is_text: bool) -> None:
        cells = self.cells
        found = read_typed(
            text,
            decimal_comma=self.rules.decimal_comma and is_text,
            brackets_are_notes=self.rules.brackets_are_notes,
            names=self.names,
        )
        if isinstance(found, NoValue) and found.listed:
            self._leave(position, "no value yet", text)
        elif isinstance(found, NoValue) or (
            isinstance(found, Typed) and found.value in self.rules.missing and not found.limit
        ):
            cells.kinds[position] = WORD
            cells.shown[position] = _shortened(text)
        elif not isinstance(found, Typed):
            self._leave(position, f"not read: {found.reason}", text)
        else:
            cells.kinds[position] = LIMIT if found.limit else NUMBER
            cells.numbers[position] = found.value
            if found.limit:
                cells.limits[position] = found.limit
            if found.lower_error is not None and found.upper_error is not None:
                cells.errors[position] = (found.lower_error, found.upper_error)
            if found.unit is not None:
                cells.units[position] = found.unit
            for remark in found.remarks:
                cells.remark(remark, position)
            if is_text and not (found.remarks or found.limit or position in cells.errors):
                cells.remark(TEXT, position)

    def _reason(self, cell: CellSpan, formula: str | None, typed: TypedText) -> str:
        """Return why a cell is left without reading its text, "" for one that is to be read."""
        if formula is not None and _sums_up_rows(formula):
            return SUMS_UP
        if not typed.text.strip():
            return "a formula without a stored result; recalculate and save the workbook first"
        if cell.type == "b":
            return "not read: true or false and no number"
        if cell.type == "e":
            return "a formula error"
        if cell.type == "d" or (cell.type == "n" and self.rules.is_date(cell.style)):
            return _DATE
        return ""

    def _leave(self, position: int, reason: str, text: str) -> None:
        self.cells.kinds[position] = LEFT
        self.cells.reasons[position] = reason
        if text.strip():
            self.cells.shown[position] = _shortened(text)

    def _is_special(self, style: int) -> bool:
        known = self.special.get(style)
        if known is None:
            rules = self.rules
            known = self.special[style] = (
                rules.is_date(style) or rules.is_percent(style) or rules.is_struck(style)
            )
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
