"""What a fill will do to one sheet: which cells get which numbers, and which are left and why.

Pure: it reads, decides and returns. The report and the edits are both made from the same plan.
"""

from __future__ import annotations

from array import array
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from workbook_tools import agreement, source_choice
from workbook_tools.answers import FloatArray, Moments
from workbook_tools.cell_address import Range, column_letters
from workbook_tools.cell_looks import CellLooks
from workbook_tools.column_widths import hidden_columns
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.headings import Heading, same_heading
from workbook_tools.number_formats import format_for
from workbook_tools.request import Request
from workbook_tools.right_edge import free_columns, right_edge
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import StyleSheet
from workbook_tools.tables import Table, free_names
from workbook_tools.typed_cells import EMPTY, LEFT, NOT_READ, NUMBER, SUMS_UP, WHITE, ColumnCells

BoolArray = NDArray[np.bool_]


@dataclass(frozen=True)
class FilledColumn:
    """One column that gets values.

    Attributes:
        heading: what it holds.
        column: counted from 1.
        source, source_column: what it is converted from.
        count: how many cells are filled.
        added: whether the column is new.
    """

    heading: Heading
    column: int
    source: Heading
    source_column: int
    count: int
    added: bool


@dataclass
class SheetPlan:
    """All that a fill does to one sheet.

    Attributes:
        reading: the sheet.
        source: the column to convert from, None where the sheet has none.
        columns: the columns that get values.
        cells: the new cells.
        grown: the table that grows and the names of its new columns, or None.
        left: address and reason of each cell that stays unfilled for a reason.
        passed_over: rows that are no part of the log, such as totals, by address.
        notes: sentences for the report.
    """

    reading: SheetReading
    source: int | None = None
    columns: list[FilledColumn] = field(default_factory=list)
    cells: list[NewCells] = field(default_factory=list)
    grown: tuple[Table, list[str]] | None = None
    left: list[tuple[str, str]] = field(default_factory=list)
    passed_over: list[str] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)

    @property
    def changed(self) -> list[Range]:
        """The rectangles that get new cells."""
        return [one.extent for one in self.cells if one.rows or one.heading]


def plan_sheet(reading: SheetReading, request: Request, styles: StyleSheet | None) -> SheetPlan:
    """Decide what a fill does to a sheet.

    A sheet without a source or without anything to fill gives a plan without columns.

    Raises:
        UsageError: two columns could serve as the source, or the request fits no column.
        Refusal: a partly filled column disagrees with the parameters, or there is no room.
    """
    plan = SheetPlan(reading)
    source = _source(reading, request)
    if source is None:
        return plan
    column, heading = source
    (cells,) = reading.columns([column])
    if column in reading.texts or cells.count(NUMBER) or cells.count(LEFT):
        plan.source = column
    targets, added = _targets(plan, request, column, heading)
    if not reading.rows or not (targets or added):
        return plan
    numbers = np.array(cells.numbers)
    numbers[np.frombuffer(cells.kinds, dtype=np.uint8) != NUMBER] = np.nan
    moments = Moments(numbers, heading.measure, heading.unit, request.history, request.side)
    filler = _Filler(plan, request, styles, cells, heading, moments)
    filler.fill_existing(targets)
    filler.append(added)
    filler.report_left()
    return plan


def _source(reading: SheetReading, request: Request) -> tuple[int, Heading] | None:
    if request.source is not None:
        found = source_choice.named_source(reading, request)
        if found is not None and reading.header_index is None:
            reading.take_header_above(found[0])
        return found
    if request.source_measure is not None:
        raise UsageError("--as says what a column holds; name that column with --source")
    sources = source_choice.possible_sources(reading)
    if len(sources) > 1 and _has_blank_target(reading, sources, request):
        source_choice.refuse_several(reading, sources)
    return (sources[0], reading.headings[sources[0]]) if sources else None


def _has_blank_target(reading: SheetReading, sources: list[int], request: Request) -> bool:
    """Tell whether anything waits to be filled from one of several possible sources."""
    if request.add:
        return True
    columns = reading.columns(list(reading.headings))
    filled = [one for one in columns if one.column in sources]
    return any(
        target.is_blank(position) and one.kinds[position] == NUMBER
        for target in columns
        for one in filled
        if not reading.headings[one.column].same_kind(reading.headings[target.column])
        for position in range(len(target.kinds))
    )


def _targets(
    plan: SheetPlan, request: Request, source: int, source_heading: Heading
) -> tuple[list[tuple[int, Heading]], list[Heading]]:
    """Return the existing columns to fill and the headings of those to append."""
    reading = plan.reading
    added: list[Heading] = []
    asked: dict[int, Heading] = {}
    for text in request.add:
        heading = source_choice.known_heading(text, "--add")
        if any(same_heading(one.text, text) for one in added):
            continue
        twin = next((c for c, t in reading.texts.items() if same_heading(t, text)), None)
        if twin is not None:
            plan.notes.append(
                f"{text!r} is there already (column {column_letters(twin)}), so no column is added"
            )
        if twin is None:
            added.append(heading)
        elif twin != source:
            asked[twin] = heading
    targets = {
        column: heading
        for column, heading in reading.headings.items()
        if column != source
        and not heading.same_kind(source_heading)
        and (not request.only or any(same_heading(heading.text, one) for one in request.only))
    }
    return sorted((targets | asked).items()), added


class _Filler:
    """Works out the columns of one plan from one source column."""

    def __init__(
        self,
        plan: SheetPlan,
        request: Request,
        styles: StyleSheet | None,
        source: ColumnCells,
        heading: Heading,
        moments: Moments,
    ) -> None:
        self.plan = plan
        self.reading = plan.reading
        self.request = request
        self.source = source
        self.heading = heading
        self.moments = moments
        self.looks = CellLooks(plan.reading, styles, source)
        # Positions in the rows of the log at which a blank cell was asked for.
        self.wanted = np.zeros(len(source.kinds), dtype=bool)

    def fill_existing(self, targets: Sequence[tuple[int, Heading]]) -> None:
        """Plan the blanks of columns that are there."""
        for target in self.reading.columns([column for column, _ in targets]):
            heading = dict(targets)[target.column]
            self._report_kept(target)
            blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
            if not np.any(blank & (np.frombuffer(self.source.kinds, dtype=np.uint8) >= NUMBER)):
                continue
            self._refuse_blocked(target.column)
            if target.count(NUMBER):
                agreement.refuse_disagreement(
                    self.moments,
                    target,
                    heading,
                    self.looks.code,
                    lambda p, column=target.column: self.reading.where(p, column),  # type: ignore[misc]
                )
            self._fill(heading, target.column, blank, target)

    def append(self, headings: Sequence[Heading]) -> None:
        """Plan new columns at the right edge of the data, where there is a value for any cell."""
        if not headings:
            return
        if np.all(np.isnan(self.moments.moment.x)):
            self.wanted[:] = True
            return
        first, table, note = right_edge(self.reading, self.source.column, len(headings))
        self.plan.notes += [note] if note else []
        names = [heading.text for heading in headings]
        if table is not None:
            names = free_names(names, table.columns)
            self.plan.grown = (table, names)
        hidden = hidden_columns(self.reading.scan)
        style = 0
        everywhere = np.ones(len(self.source.kinds), dtype=bool)
        for offset, (heading, name) in enumerate(zip(headings, names, strict=True)):
            column = first + offset
            cells = self._fill(heading, column, everywhere, None)
            if self.reading.header_row is not None:
                style = self.looks.of_heading(first - 1)
                cells.heading = (self.reading.header_row, name, style)
            cells.width = float(min(max(len(name) + 3, 11), 15 if self.looks.wraps(style) else 40))
            if column in hidden:
                self.plan.notes.append(
                    f"column {column_letters(column)} was hidden and is shown, as it is new"
                )
        if self.reading.header_row is None:
            self.plan.notes.append("no row of headings was found, so the new columns have none")

    def report_left(self) -> None:
        """List the rows that stay unfilled because of what stands in the source column."""
        source = self.source
        for position in sorted(set(source.reasons) | set(self.moments.reasons)):
            if not self.wanted[position]:
                continue
            address = self.reading.where(position, source.column)
            reason = source.reasons.get(position) or self.moments.reasons[position]
            if reason == SUMS_UP:
                self.plan.passed_over.append(address)
            else:
                self.plan.left.append((address, reason))
        if any(one.rows for one in self.plan.cells):
            self._note_origins()

    def _note_origins(self) -> None:
        source = self.source
        letters = column_letters(source.column)
        for count, one, several in (
            (
                source.from_formulas,
                "is the result of a formula, as last stored",
                "are results of formulas, as last stored",
            ),
            (source.from_text, "was text", "were text"),
        ):
            if count:
                numbers = f"{count} numbers" if count > 1 else "1 number"
                self.plan.notes.append(
                    f"{numbers} of column {letters} {several if count > 1 else one}"
                )

    def _report_kept(self, target: ColumnCells) -> None:
        """List the cells that hold something else than a number where a value would belong."""
        kinds = np.frombuffer(target.kinds, dtype=np.uint8)
        kept = ((kinds == WHITE) | (kinds == LEFT)) & ~np.isnan(self.moments.moment.x)
        for position in np.flatnonzero(kept).tolist():
            shown = target.reasons.get(position, "white space").removeprefix(NOT_READ)
            address = self.reading.where(position, target.column)
            self.plan.left.append((address, f"not overwritten: {shown}"))

    def _fill(
        self,
        heading: Heading,
        column: int,
        blank: BoolArray,
        target: ColumnCells | None,
    ) -> NewCells:
        """Add a column's new cells to the plan; `blank` tells where there is room for one."""
        values, missing = self.moments.column(heading.measure, heading.unit)
        values = _storable(values)
        self.wanted |= blank
        positions = np.flatnonzero(blank & ~np.isnan(values))
        cells = NewCells(column)
        numbers = self.reading.scan.numbers
        start = self.reading.rows.start
        cells.rows = array("q", np.array(numbers)[start + positions].tobytes())
        cells.numbers = array("d", values[positions].tobytes())
        cells.styles = self.looks.of_numbers(column, positions, cells.numbers, target)
        self.plan.cells.append(cells)
        for position, reason in missing.items():
            if blank[position]:
                self.plan.left.append((self.reading.where(position, column), reason))
        filled = FilledColumn(
            heading, column, self.heading, self.source.column, len(cells.rows), target is None
        )
        self.plan.columns.append(filled)
        return cells

    def _refuse_blocked(self, column: int) -> None:
        scan, rows = self.reading.scan, self.reading.rows
        area = Range(scan.numbers[rows[0]], column, scan.numbers[rows[-1]], column)
        for one in self.reading.blocked:
            if one.intersects(area):
                raise Refusal(
                    f"column {column_letters(column)} of sheet {self.reading.sheet.name!r} meets"
                    f" {one.a1}, which is merged or belongs to one formula; fill another column, or"
                    " undo that first"
                )


def _storable(values: FloatArray) -> FloatArray:
    """Return numbers as spreadsheet programs know them: no -0 and nothing below normal doubles."""
    return np.where(np.abs(values) < np.finfo(np.float64).tiny, 0.0, values)


def plan_columns(
    reading: SheetReading,
    columns: Mapping[str, Sequence[float | None]],
    first_row: int,
    styles: StyleSheet | None,
) -> SheetPlan:
    """Plan given numbers for the right edge of a sheet, headings in the row above the first.

    Raises:
        Refusal: there are no free columns at the right edge.
        UsageError: a number is infinite or not a number, which no cell can hold.
    """
    plan = SheetPlan(reading)
    last_row = first_row + max(len(values) for values in columns.values()) - 1
    top = max(first_row - 1, 1)
    first = free_columns(reading, top, last_row, len(columns))
    for column, (text, values) in enumerate(columns.items(), start=first):
        kept = [(first_row + i, v) for i, v in enumerate(values) if v is not None]
        numbers = _storable(np.array([value for _, value in kept], dtype=np.float64)).tolist()
        if not np.all(np.isfinite(numbers)):
            raise UsageError(f"column {text!r} holds a number that no cell can hold; leave it out")
        style = 0 if styles is None else styles.with_format(0, format_for(numbers, 1))
        plan.cells.append(
            NewCells(
                column,
                array("q", [row for row, _ in kept]),
                array("d", numbers),
                array("q", [style] * len(kept)),
                heading=(first_row - 1, text, 0) if first_row > 1 else None,
                width=12.0,
            )
        )
    return plan
