"""A column of values with all that belongs to it: errors, limits and remarks, in one unit.

Errors and limits stand in the cells themselves or in companion columns; a value's own cell counts
before its companions.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from epochconv.typed_outcomes import NoValue, Remark
from epochconv.typed_text import read_typed
from epochconv.units import Unit, factor
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading, Role
from workbook_tools.rows_passed_over import rows_passed_over
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import LEFT, LIMIT, NUMBER, ColumnCells

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

# "" says that a value is measured.
_FLAGS = {"<": "<", ">": ">", "≤": "≤", "≥": "≥", "<=": "≤", ">=": "≥", "≲": "≲", "≳": "≳", "=": ""}
_ABOUT = ("~", "≈")
# Numbers that logs hold in place of "no value"; they are never dropped unless declared.
_SUSPECTS = (
    *(-1.0, -9.0, -9.9, -9.99, -99.0, -99.9, -99.99, -999.0, -9999.0),
    *(99.0, 99.99, 999.0, 9999.0, 99999.0),
)
# Days since 1900 of the years 1998 to 2031, which a date shows when its format is taken away.
_DAYS = (36_000.0, 48_000.0)

_LIMIT = "a limit"
_UNIT_DIFFERS = "a unit in the cell that differs from the heading's, converted"
_ZERO = "a redshift of exactly 0, which may stand for a missing value"
_DAY = "a whole number that may be a date without its format"
_ONE_SIDE = "an error on one side only, which is not used"
_ERROR_LEFT = "an error beside it that is not read, and is not used"
_ERROR_LIMIT = "an error beside it that is a limit, and is not used"
_ERROR_PERCENT = "an error beside it in percent, which may be relative, and is not used"
_ERROR_NEGATIVE = "an error beside it that is negative, and is not used"


@dataclass
class ValueColumn:
    """The values of one column in the rows of the log.

    Attributes:
        heading: what the column holds; all numbers are in its unit.
        cells: the cells as they were read.
        values: NaN where there is nothing to convert.
        lower, upper: sizes of the errors; NaN where none is known.
        limits: the sign of each limit, by position.
        flagged: whether limits are numbers with a flag column beside them.
        reasons: why a cell is left, by position.
        passed_over: why a cell is in no row of the log, by position.
        remarks: what a person should know of cells that were read, with their positions.
        notes: sentences about the column as a whole.
    """

    heading: Heading
    cells: ColumnCells
    values: FloatArray
    lower: FloatArray
    upper: FloatArray
    limits: dict[int, str]
    reasons: dict[int, str]
    remarks: dict[str, list[int]]
    flagged: bool = False
    passed_over: dict[int, str] = field(default_factory=dict)
    notes: list[str] = field(default_factory=list)

    @property
    def has_errors(self) -> bool:
        """Whether any value has an error."""
        return bool(np.any(~np.isnan(self.lower)))

    def remark(self, text: str, positions: list[int]) -> None:
        """Note something about cells that were read."""
        if positions:
            self.remarks.setdefault(text, []).extend(positions)

    def leave(self, position: int, reason: str) -> None:
        """Convert a cell no more."""
        self.values[position] = np.nan
        self.limits.pop(position, None)
        self.reasons[position] = reason


def read_values(reading: SheetReading, column: int, heading: Heading) -> ValueColumn:
    """Read a column of values together with its companions.

    Args:
        heading: what the column holds, whatever its own heading says.
    """
    (cells,) = reading.columns([column])
    values = _held(cells, NUMBER, LIMIT)
    found = ValueColumn(
        heading,
        cells,
        values,
        np.full(len(values), np.nan),
        np.full(len(values), np.nan),
        dict(cells.limits),
        dict(cells.reasons),
        {text: list(where) for text, where in cells.remarks.items()},
    )
    _pass_over(found, reading)
    found.notes += _suspects(found.values, column)
    if heading.measure.name == "redshift":
        _doubt_redshifts(found)
    _take_typed_errors(found)
    _take_units(found)
    _take_flags(found, reading)
    _take_error_columns(found, reading)
    found.limits = dict(sorted(found.limits.items()))
    found.remark(_LIMIT, list(found.limits))
    for position in found.limits:
        found.lower[position] = found.upper[position] = np.nan
    found.lower[np.isnan(found.values)] = found.upper[np.isnan(found.values)] = np.nan
    known = {r: [p for p in where if not np.isnan(values[p])] for r, where in found.remarks.items()}
    found.remarks = {remark: where for remark, where in known.items() if where}
    return found


def _held(cells: ColumnCells, *kinds: int) -> FloatArray:
    """Return the numbers of cells of these kinds, NaN elsewhere."""
    held = np.isin(np.frombuffer(cells.kinds, dtype=np.uint8), kinds)
    return np.where(held, np.array(cells.numbers), np.nan)


def _pass_over(found: ValueColumn, reading: SheetReading) -> None:
    found.passed_over = rows_passed_over(reading, found.cells, found.heading)
    for position in found.passed_over:
        found.values[position] = np.nan
        found.limits.pop(position, None)
        found.reasons.pop(position, None)


def _doubt_redshifts(found: ValueColumn) -> None:
    values = found.values
    found.remark(_ZERO, np.flatnonzero(values == 0.0).tolist())
    days = (values >= _DAYS[0]) & (values <= _DAYS[1]) & (np.trunc(values) == values)
    found.remark(_DAY, np.flatnonzero(days).tolist())


def _take_typed_errors(found: ValueColumn) -> None:
    errors = found.cells.errors
    if errors:
        positions = np.fromiter(errors, dtype=np.intp, count=len(errors))
        both = np.array(list(errors.values()))
        found.lower[positions], found.upper[positions] = both[:, 0], both[:, 1]


def _take_units(found: ValueColumn) -> None:
    """Bring cells with a unit of their own into that of the heading, or leave them."""
    unit, powers = found.heading.unit, found.heading.h_power
    # Of a unit in the cell only a difference is worth a remark, and that follows here.
    found.remarks.pop(Remark.UNIT, None)
    for position, typed in found.cells.units.items():
        if position in found.passed_over:
            continue
        if typed.dimension != unit.dimension:
            found.leave(
                position,
                f"a {typed.dimension} ({typed.symbol}) where the heading asks for a"
                f" {unit.dimension}",
            )
        elif powers:
            found.leave(
                position,
                f"a unit in the cell ({typed.symbol}) without the h of the heading; take it away,"
                " or put the value into a column without h",
            )
        elif typed != unit:
            scale = factor(typed, unit)
            for numbers in (found.values, found.lower, found.upper):
                numbers[position] *= scale
            found.remark(_UNIT_DIFFERS, [position])


def _take_flags(found: ValueColumn, reading: SheetReading) -> None:
    flag = reading.companion(found.cells.column, Role.LIMIT_FLAG)
    if flag is None:
        return
    found.flagged = True
    letters = column_letters(flag)
    for position, text in reading.texts_of(flag).items():
        if np.isnan(found.values[position]):
            continue
        shown = text.strip()
        sign = _FLAGS.get(shown)
        own = found.limits.get(position)
        if shown in _ABOUT:
            found.remark(Remark.APPROXIMATE, [position])
        elif sign is None:
            word = read_typed(text)
            if not isinstance(word, NoValue) or word.listed:
                found.leave(position, f"a limit flag that is not known here: {shown} ({letters})")
        elif own is not None and own != sign:
            found.leave(position, f"a limit ({own}) whose flag says {shown} ({letters})")
        elif sign:
            found.limits[position] = sign


def _take_error_columns(found: ValueColumn, reading: SheetReading) -> None:
    column = found.cells.column
    both = reading.companion(column, Role.ERROR)
    sides = (
        (Role.LOWER_ERROR, found.lower, reading.companion(column, Role.LOWER_ERROR)),
        (Role.UPPER_ERROR, found.upper, reading.companion(column, Role.UPPER_ERROR)),
    )
    wanted = np.isnan(found.lower) & ~np.isnan(found.values)
    wanted[list(found.limits)] = False
    for role, sizes, own in sides:
        companion = own if own is not None else both
        if companion is not None:
            kind = Role.ERROR if own is None else role
            numbers = _error_sizes(found, reading, companion, wanted, kind)
            sizes[wanted] = numbers[wanted]
    half = np.isnan(found.lower) != np.isnan(found.upper)
    found.remark(_ONE_SIDE, np.flatnonzero(half).tolist())
    found.lower[half] = found.upper[half] = np.nan


def _error_sizes(
    found: ValueColumn, reading: SheetReading, column: int, wanted: BoolArray, role: Role
) -> FloatArray:
    """Return the sizes that an error column holds, in the unit of the values; NaN where none."""
    (cells,) = reading.columns([column])
    own = found.heading.unit
    unit = reading.meanings[column].unit or own
    numbers = _held(cells, NUMBER) * factor(unit, own)
    for position, typed in cells.units.items():
        numbers[position] = _in_unit(cells.numbers[position], typed, own)
    codes = [note for note in _suspects(_held(cells, NUMBER), column) if note not in found.notes]
    found.notes += codes
    kinds = np.frombuffer(cells.kinds, dtype=np.uint8)
    # A lower error may be written with its sign, but not as a code for a missing one.
    coded = np.isin(_held(cells, NUMBER), [one for one in _SUSPECTS if one < -1.0])
    negative = (numbers < 0.0) & (coded | (role is not Role.LOWER_ERROR))
    percent = np.zeros(len(numbers), dtype=bool)
    percent[cells.remarks.get(Remark.PERCENT, [])] = True
    for remark, faulty in (
        (_ERROR_LEFT, (kinds == LEFT) | ((kinds == NUMBER) & np.isnan(numbers))),
        (_ERROR_LIMIT, kinds == LIMIT),
        (_ERROR_PERCENT, percent),
        (_ERROR_NEGATIVE, negative),
    ):
        known = set(found.remarks.get(remark, ()))
        found.remark(
            remark, [p for p in np.flatnonzero(faulty & wanted).tolist() if p not in known]
        )
    return np.where(negative | percent, np.nan, np.abs(numbers))


def _in_unit(number: float, typed: Unit, unit: Unit) -> float:
    return number * factor(typed, unit) if typed.dimension == unit.dimension else float("nan")


def _suspects(values: FloatArray, column: int) -> list[str]:
    """Return a sentence for each number that looks like a missing-value code."""
    # Some programs write 99.99 as 99.98999999999999.
    rounded = np.round(np.where(np.abs(values) < 1e6, values, np.nan), 6)
    counts = Counter(rounded[np.isin(rounded, _SUSPECTS)].tolist())
    return [
        f"{value:g} stands {count} times in column {column_letters(column)} and looks like a code"
        f" for a missing value; if it is one, say so with --missing={value:g}"
        if count > 1
        else f"{value:g} stands in column {column_letters(column)} and looks like a code for a"
        f" missing value; if it is one, say so with --missing={value:g}"
        for value, count in sorted(counts.items())
        if count > 1 or value < 0.0
    ]
