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
from workbook_tools.answers import Moments
from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_widths import column_style, hidden_columns
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.headings import Heading, same_heading
from workbook_tools.number_formats import format_for, significant_digits
from workbook_tools.request import Request
from workbook_tools.right_edge import free_columns, right_edge
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import GENERAL, StyleSheet
from workbook_tools.tables import Table, free_names
from workbook_tools.typed_cells import EMPTY, LEFT, NUMBER, ColumnCells

IndexArray = NDArray[np.intp]
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
        columns: the columns that get values.
        cells: the new cells.
        grown: the table that grows and the names of its new columns, or None.
        left: address and reason of each cell that stays unfilled for a reason.
        passed_over: rows that are no part of the log, such as totals, by address.
        notes: sentences for the report.
    """

    reading: SheetReading
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
    targets, added = _targets(plan, request, column, heading)
    if not reading.rows or not (targets or added):
        return plan
    (cells,) = reading.columns([column])
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
        target.is_blank(p) and any(one.kinds[p] == NUMBER for one in filled if one is not target)
        for target in columns
        for p in range(len(target.kinds))
    )


def _targets(
    plan: SheetPlan, request: Request, source: int, source_heading: Heading
) -> tuple[list[tuple[int, Heading]], list[Heading]]:
    """Return the existing columns to fill and the headings of those to append."""
    reading = plan.reading
    added = []
    asked: dict[int, Heading] = {}
    for text in request.add:
        heading = source_choice.known_heading(text, "--add")
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
        self.styles = styles
        self.source = source
        self.heading = heading
        self.moments = moments
        self.digits = _typical_digits(source)
        # Positions in the rows of the log at which a blank cell was asked for.
        self.wanted = np.zeros(len(source.kinds), dtype=bool)

    def fill_existing(self, targets: Sequence[tuple[int, Heading]]) -> None:
        """Plan the blanks of columns that are there."""
        for target in self.reading.columns([column for column, _ in targets]):
            heading = dict(targets)[target.column]
            blank = np.frombuffer(target.kinds, dtype=np.uint8) <= EMPTY
            if not np.any(blank & (np.frombuffer(self.source.kinds, dtype=np.uint8) >= NUMBER)):
                continue
            self._refuse_blocked(target.column)
            if target.count(NUMBER):
                agreement.refuse_disagreement(
                    self.moments,
                    target,
                    heading,
                    self._code,
                    lambda p, column=target.column: self.reading.where(p, column),  # type: ignore[misc]
                )
            self._fill(heading, target.column, blank, target)

    def append(self, headings: Sequence[Heading]) -> None:
        """Plan new columns at the right edge of the data."""
        if not headings:
            return
        if not self.source.count(NUMBER) and not self.source.count(LEFT):
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
                style = self._heading_style(first - 1)
                cells.heading = (self.reading.header_row, name, style)
            wraps = self.styles is not None and self.styles.wraps(style)
            cells.width = float(min(max(len(name) + 3, 11), 15 if wraps else 40))
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
            if reason.startswith("a formula over"):
                self.plan.passed_over.append(address)
            else:
                self.plan.left.append((address, reason))
        if source.from_formulas:
            self.plan.notes.append(
                f"{source.from_formulas} numbers of column {column_letters(source.column)} are"
                " results of formulas, as last stored"
            )
        if source.from_text:
            self.plan.notes.append(
                f"{source.from_text} numbers of column {column_letters(source.column)} were text"
            )

    def _fill(
        self,
        heading: Heading,
        column: int,
        blank: BoolArray,
        target: ColumnCells | None,
    ) -> NewCells:
        """Add a column's new cells to the plan; `blank` tells where there is room for one."""
        values, missing = self.moments.column(heading.measure, heading.unit)
        self.wanted |= blank
        positions = np.flatnonzero(blank & ~np.isnan(values))
        cells = NewCells(column)
        numbers = self.reading.scan.numbers
        start = self.reading.rows.start
        cells.rows = array("q", np.array(numbers)[start + positions].tobytes())
        cells.numbers = array("d", values[positions].tobytes())
        cells.styles = self._styles_of(column, positions, cells.numbers, target)
        self.plan.cells.append(cells)
        for position, reason in missing.items():
            if blank[position]:
                self.plan.left.append((self.reading.where(position, column), reason))
        filled = FilledColumn(
            heading, column, self.heading, self.source.column, len(cells.rows), target is None
        )
        self.plan.columns.append(filled)
        return cells

    def _styles_of(
        self,
        column: int,
        positions: IndexArray,
        values: Sequence[float],
        target: ColumnCells | None,
    ) -> array[int]:
        """Return the style of each new cell: that of its neighbours, with a fitting format."""
        if self.styles is None:
            return array("q", bytes(8 * len(positions)))
        code = format_for(values, self.digits)
        models = np.maximum(np.array(self.source.styles)[positions], 0)
        keeps = np.zeros(len(positions), dtype=bool)
        if target is not None:
            own, code = self._own_look(column, target, code)
            own = own[positions]
            keeps = own > 0
            models = np.where(keeps, own, models)
        known: dict[tuple[int, bool], int] = {}
        for model, keep in set(zip(models.tolist(), keeps.tolist(), strict=True)):
            named = keep and self._code(model) != GENERAL
            known[model, keep] = model if named else self.styles.with_format(model, code)
        pairs = zip(models.tolist(), keeps.tolist(), strict=True)
        return array("q", [known[pair] for pair in pairs])

    def _own_look(
        self, column: int, target: ColumnCells, code: str
    ) -> tuple[NDArray[np.int64], str]:
        """Return the style that an existing column gives each cell (0: none), and its format.

        An empty cell keeps its own style, a blank below filled ones takes that of the last of
        them, and the style of the whole column comes next. Without any of these a cell will look
        like its row's source. The format is that of the column's other cells, if they have one.
        """
        own = np.maximum(np.array(target.styles), 0)
        typed = np.flatnonzero(np.frombuffer(target.kinds, dtype=np.uint8) == NUMBER)
        fallback = column_style(self.reading.scan, column)
        if len(typed):
            fallback = int(own[typed[-1]])
        used = [self._code(int(one)) for one in np.unique(own[own > 0])]
        used += [self._code(fallback)] if fallback else []
        named = [one for one in used if one != GENERAL]
        return np.where(own > 0, own, fallback), named[-1] if named else code

    def _code(self, style: int) -> str:
        return GENERAL if self.styles is None else self.styles.format_code(max(style, 0))

    def _heading_style(self, column: int) -> int:
        """Return the style of the heading to the left of a new column."""
        assert self.reading.header_index is not None
        cells = self.reading.scan.cells(self.reading.header_index)
        styles = [c.style for c in cells if c.column <= column and c.column in self.reading.texts]
        return styles[-1] if styles else 0

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


def _typical_digits(source: ColumnCells) -> int:
    """Return the median number of significant digits among a column's first thousand cells."""
    digits = sorted(
        significant_digits(source.numbers[p])
        for p, kind in enumerate(source.kinds[:1000])
        if kind == NUMBER
    )
    return digits[len(digits) // 2] if digits else 1


def plan_columns(
    reading: SheetReading,
    columns: Mapping[str, Sequence[float | None]],
    first_row: int,
    styles: StyleSheet | None,
) -> SheetPlan:
    """Plan given numbers for the right edge of a sheet, headings in the row above the first.

    Raises:
        Refusal: there are no free columns at the right edge.
    """
    plan = SheetPlan(reading)
    last_row = first_row + max(len(values) for values in columns.values()) - 1
    top = max(first_row - 1, 1)
    first = free_columns(reading, top, last_row, len(columns))
    for column, (text, values) in enumerate(columns.items(), start=first):
        kept = [(first_row + i, v) for i, v in enumerate(values) if v is not None]
        numbers = [value for _, value in kept]
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
