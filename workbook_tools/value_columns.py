"""A column of values with all that belongs to it: errors, limits and remarks, in one unit.

Errors and limits stand in the cells themselves or in companion columns; a value's own cell counts
before its companions.
"""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from epochconv.typed_outcomes import Remark
from epochconv.units import factor
from workbook_tools.cell_address import column_letters
from workbook_tools.column_meanings import Heading, Role
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import LIMIT, NUMBER, ColumnCells

FloatArray = NDArray[np.float64]

_FLAGS = {"<": "<", ">": ">", "≤": "≤", "≥": "≥", "<=": "≤", ">=": "≥", "≲": "≲", "≳": "≳"}
# Numbers that logs hold in place of "no value"; they are never dropped unless declared.
_SUSPECTS = (-99.0, -99.9, -99.99, -999.0, -9999.0, -9.0, -9.99, 99.0, 99.99, 999.0, 9999.0)
_UNIT_DIFFERS = "a unit in the cell that differs from the heading's, converted"


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
        remarks: what a person should know of cells that were read, with their positions.
        notes: sentences about the column as a whole.
    """

    heading: Heading
    cells: ColumnCells
    values: FloatArray
    lower: FloatArray
    upper: FloatArray
    limits: dict[int, str]
    flagged: bool
    reasons: dict[int, str]
    remarks: dict[str, list[int]]
    notes: list[str] = field(default_factory=list)

    @property
    def has_errors(self) -> bool:
        """Whether any value has an error."""
        return bool(np.any(~np.isnan(self.lower)))


def read_values(reading: SheetReading, column: int, heading: Heading) -> ValueColumn:
    """Read a column of values together with its companions.

    Args:
        heading: what the column holds, whatever its own heading says.
    """
    (cells,) = reading.columns([column])
    kinds = np.frombuffer(cells.kinds, dtype=np.uint8)
    held = (kinds == NUMBER) | (kinds == LIMIT)
    values = np.where(held, np.array(cells.numbers), np.nan)
    found = ValueColumn(
        heading,
        cells,
        values,
        np.full(len(values), np.nan),
        np.full(len(values), np.nan),
        dict(cells.limits),
        False,
        dict(cells.reasons),
        {text: list(where) for text, where in cells.remarks.items()},
    )
    _take_typed_errors(found)
    _take_units(found)
    _take_flags(found, reading, column)
    _take_error_columns(found, reading, column)
    found.notes += _suspects(values)
    return found


def _take_typed_errors(found: ValueColumn) -> None:
    errors = found.cells.errors
    if errors:
        positions = np.fromiter(errors, dtype=np.intp, count=len(errors))
        both = np.array(list(errors.values()))
        found.lower[positions], found.upper[positions] = both[:, 0], both[:, 1]


def _take_units(found: ValueColumn) -> None:
    """Bring cells with a unit of their own into that of the heading, or leave them."""
    unit = found.heading.unit
    # Of a unit in the cell only a difference is worth a remark, and that follows here.
    found.remarks.pop(Remark.UNIT, None)
    for position, typed in found.cells.units.items():
        if typed.dimension != unit.dimension:
            found.values[position] = np.nan
            found.limits.pop(position, None)
            found.reasons[position] = (
                f"a {typed.dimension} ({typed.symbol}) where the heading asks for a"
                f" {unit.dimension}"
            )
        elif typed != unit:
            scale = factor(typed, unit)
            for numbers in (found.values, found.lower, found.upper):
                numbers[position] *= scale
            found.remarks.setdefault(_UNIT_DIFFERS, []).append(position)


def _take_flags(found: ValueColumn, reading: SheetReading, column: int) -> None:
    flag = reading.companion(column, Role.LIMIT_FLAG)
    if flag is None:
        return
    found.flagged = True
    for position, text in reading.texts_of(flag).items():
        if np.isnan(found.values[position]):
            continue
        sign = _FLAGS.get(text.strip())
        if sign is None:
            found.values[position] = np.nan
            found.reasons[position] = (
                f"a limit flag that is not known here: {text.strip()} ({column_letters(flag)})"
            )
        else:
            found.limits.setdefault(position, sign)


def _take_error_columns(found: ValueColumn, reading: SheetReading, column: int) -> None:
    both = reading.companion(column, Role.ERROR)
    sides = [
        (found.lower, reading.companion(column, Role.LOWER_ERROR)),
        (found.upper, reading.companion(column, Role.UPPER_ERROR)),
    ]
    open_cells = np.isnan(found.lower) & ~np.isnan(found.values)
    for sizes, own in sides:
        companion = own if own is not None else both
        if companion is None:
            continue
        (cells,) = reading.columns([companion])
        kinds = np.frombuffer(cells.kinds, dtype=np.uint8)
        meaning = reading.meanings[companion]
        unit = meaning.unit or found.heading.unit
        scale = factor(unit, found.heading.unit)
        numbers = np.abs(np.array(cells.numbers)) * scale
        known = open_cells & (kinds == NUMBER)
        sizes[known] = numbers[known]
    # One side alone is no interval.
    half = np.isnan(found.lower) != np.isnan(found.upper)
    found.lower[half] = found.upper[half] = np.nan
    if np.any(half):
        text = "an error on one side only, which is not used"
        found.remarks[text] = np.flatnonzero(half).tolist()
    for position in found.limits:
        found.lower[position] = found.upper[position] = np.nan


def _suspects(values: FloatArray) -> list[str]:
    """Return a sentence for each number that looks like a missing-value code."""
    counts = Counter(values[np.isin(values, _SUSPECTS)].tolist())
    return [
        f"{value:g} stands {count} times and looks like a code for a missing value; if it is one,"
        f" say so with --missing={value:g}"
        for value, count in counts.items()
        if count > 1
    ]
