"""One fill of one workbook, for the proof over a folder: what to fill, and what should come out.

Source columns and expected values are found with openpyxl and the core, not with the fill's own
reading of the workbook.
"""

from __future__ import annotations

import datetime
import math
from collections import Counter
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import NamedTuple, TypeGuard

import epochconv
from tests.workbook_tools.read_back import Values, cell_values
from tests.workbook_tools.rules.package import Package, descendants
from tests.workbook_tools.rules.sheet_view import LAST_ROW, Box, boxes, letters
from tests.workbook_tools.rules.table_rules import tables
from workbook_tools import FillResult, Refusal, fill, write_columns

HEADING = "Age [Gyr]"
GIVEN = (13.7869012345678, None, 2.5e-7, 0.1, 123456789012345.0)
FIRST_GIVEN_ROW = 2
NOW = datetime.datetime(2026, 12, 1, 12, 0, 0)


class Column(NamedTuple):
    """A column of numbers."""

    sheet: str
    column: int

    @property
    def letters(self) -> str:
        """Its letters."""
        return letters(self.column)


@dataclass
class Run:
    """What became of one workbook; where it was refused, there is no `after`.

    Attributes:
        column: the source of a fill by letters; None where given numbers were put in.
        sheet: the sheet that was filled.
        refusal: why it was refused, or ''.
        old, new: cells before and after, by sheet; formulas as their text.
        results: cells before, by sheet; formulas as their stored results.
    """

    before: Path
    after: Path
    column: Column | None
    sheet: str
    refusal: str = ""
    result: FillResult | None = None
    old: dict[str, Values] = field(default_factory=dict)
    results: dict[str, Values] = field(default_factory=dict)
    new: dict[str, Values] = field(default_factory=dict)

    @property
    def label(self) -> str:
        """File and way of filling, for messages."""
        way = f"by {self.column.letters}" if self.column else "given numbers"
        return f"{self.before.name}, {self.sheet}, {way}"

    @property
    def new_cells(self) -> Values:
        """Cells of the filled sheet that held nothing before."""
        old = self.old[self.sheet]
        return {place: v for place, v in self.new[self.sheet].items() if place not in old}


def number_column(path: Path, values: dict[str, Values]) -> Column | None:
    """The column of a workbook with the most typed numbers that can be redshifts, if any has one.

    Numbers of a pivot table do not count: nobody types them, and programs lay them out anew.
    """
    pivots = _pivots(path) if values else {}
    counts: Counter[tuple[str, int]] = Counter()
    for sheet, cells in values.items():
        for (row, column), value in cells.items():
            inside = any(extent.holds(row, column) for extent in pivots.get(sheet, ()))
            counts[sheet, column] += _is_number(value) and 0 <= value <= 1e9 and not inside
    best, count = counts.most_common(1)[0] if counts else (("", 0), 0)
    return Column(*best) if count else None


def _pivots(path: Path) -> dict[str, list[Box]]:
    package = Package(path)
    found: dict[str, list[Box]] = {}
    for sheet in package.sheets:
        roots = [package.tree(name) for name in package.related(sheet.part, "pivotTable")]
        places = [item.get("ref") for root in roots for item in descendants(root, "location")]
        found[sheet.name] = boxes(places)
    return found


def _is_number(value: object) -> TypeGuard[float]:
    return isinstance(value, int | float) and not isinstance(value, bool)


def run(path: Path, folder: Path) -> Run:
    """Fill a workbook into a new file in `folder`: by letters if it can be, else given numbers."""
    old, results = _old_values(path), _old_values(path, results=True)
    column = number_column(path, old)
    made = Run(path, _free(folder, path), column, _sheet(path, old, column))
    made.old, made.results = old, results
    return _carried_out(made)


def run_given(path: Path, folder: Path) -> list[Run]:
    """Put given numbers into each worksheet of a workbook, one result for each."""
    old = _old_values(path)
    return [_carried_out(Run(path, _free(folder, path), None, name, old=old)) for name in old]


def _free(folder: Path, path: Path) -> Path:
    number = len(list(folder.iterdir()))
    return folder / f"{number:04} {path.name}"


def _old_values(path: Path, *, results: bool = False) -> dict[str, Values]:
    try:
        return cell_values(path, results=results)
    except Exception:  # openpyxl has no error of its own for what it cannot load
        return {}


def _carried_out(made: Run) -> Run:
    try:
        made.result = _fill(made)
    except Refusal as refusal:
        made.refusal = str(refusal)
    else:
        made.new = cell_values(made.after)
    return made


def _fill(made: Run) -> FillResult:
    if made.column is None:
        return write_columns(
            made.before,
            made.after,
            made.sheet,
            {HEADING: GIVEN},
            first_row=FIRST_GIVEN_ROW,
            allow_protected=True,
        )
    return fill(
        made.before,
        output=made.after,
        sheet=made.sheet,
        add=(HEADING,),
        source=f"{made.column.letters}:{made.column.letters}",
        source_measure="redshift",
        allow_protected=True,
        now=NOW,
    )


def _sheet(path: Path, values: dict[str, Values], column: Column | None) -> str:
    """The column's sheet, else a worksheet, a visible one if any; '' for an unreadable file."""
    if column is not None:
        return column.sheet
    sheets = Package(path).sheets if values else []
    kept = [sheet for sheet in sheets if sheet.kind == "worksheet"]
    return min(kept, key=lambda sheet: sheet.state != "visible").name if kept else ""


def wrong_cells(made: Run) -> list[str]:
    """New cells that are wrong or unexpected, and rows that are neither filled nor named.

    A fill by letters puts the age of each redshift in its row and the heading above; given numbers
    come one below the other.
    """
    cells = made.new_cells
    columns = {column for _, column in cells}
    if len(columns) != 1:
        return [f"new cells are in {len(columns)} columns"]
    return list(_wrong_ages(made, cells) if made.column else _wrong_numbers(cells, columns.pop()))


def _wrong_numbers(cells: Values, column: int) -> Iterator[str]:
    given = enumerate(GIVEN, start=FIRST_GIVEN_ROW)
    expected: Values = {(row, column): value for row, value in given if value is not None}
    expected[FIRST_GIVEN_ROW - 1, column] = HEADING
    for place in sorted(set(expected) | set(cells)):
        if not same_value(cells.get(place), expected.get(place)):
            yield f"{_name(place)} is {cells.get(place)!r}, not {expected.get(place)!r}"


def _wrong_ages(made: Run, cells: Values) -> Iterator[str]:
    assert made.column is not None
    assert made.result is not None
    source = {
        row: value
        for (row, column), value in made.results[made.sheet].items()
        if column == made.column.column
    }
    headings = [place for place, value in cells.items() if isinstance(value, str)]
    for place in headings[1:]:
        yield f"{_name(place)} is a second heading"
    for place, value in cells.items():
        if place in headings:
            if value != HEADING or place[0] >= min(r for r, _ in set(cells) - set(headings)):
                yield f"{_name(place)} is {value!r} and no heading above the ages"
        elif not same_value(value, _age(source.get(place[0]))):
            yield f"{_name(place)} is {value!r}, the age of {source.get(place[0])!r}"
    named = {cell for sheet, cell, _ in made.result.left if sheet == made.sheet}
    named |= {one.cell for plan in made.result.plans for one in plan.passed_over}
    filled = {row for row, _ in cells}
    log = _log_rows(made, headings)
    for row, value in source.items():
        name = f"{made.column.letters}{row}"
        blank = isinstance(value, str) and not value.strip()
        if row in log and row not in filled and name not in named and not blank:
            yield f"{name}, {value!r}, is neither filled nor named"


def _age(redshift: object) -> float | None:
    try:
        value = float(redshift)  # type: ignore[arg-type]  # what is no number is caught
    except (TypeError, ValueError):
        return None
    return float(epochconv.convert(value, "redshift", "age", outside="nan").magnitude)


def _log_rows(made: Run, headings: list[tuple[int, int]]) -> range:
    """The rows that belong to the log: below the heading, and to the end of its table if any."""
    assert made.column is not None
    first = min((row for row, _ in made.new_cells), default=1)
    rows = range(first + 1 if headings else first, LAST_ROW + 1)
    package = Package(made.before)
    part = next(sheet.part for sheet in package.sheets if sheet.name == made.sheet)
    for table in tables(package):
        if table.sheet_part == part and table.extent.holds(first, made.column.column):
            return range(rows.start, table.extent.bottom - table.totals_rows + 1)
    return rows


def _name(place: tuple[int, int]) -> str:
    return f"{letters(place[1])}{place[0]}"


def same_value(value: object, target: object) -> bool:
    """Equal, numbers to the 15 digits that are written."""
    if _is_number(value) and _is_number(target):
        return math.isclose(value, target, rel_tol=1e-14)
    return value == target
