"""What a fill will do to one sheet: which cells get which numbers, and which are left and why.

Pure: it reads, decides and returns.
"""

from __future__ import annotations

from array import array
from collections.abc import Mapping, Sequence

import numpy as np

from workbook_tools import source_choice
from workbook_tools.answers import Moments
from workbook_tools.cell_address import column_letters
from workbook_tools.column_filler import ColumnFiller
from workbook_tools.column_meanings import ERRORS, Heading
from workbook_tools.errors import UsageError
from workbook_tools.headings import same_heading
from workbook_tools.new_columns import append_columns
from workbook_tools.number_formats import format_for
from workbook_tools.request import Request
from workbook_tools.right_edge import free_columns
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import StyleSheet
from workbook_tools.typed_cells import LEFT, LIMIT, NUMBER
from workbook_tools.value_columns import read_values
from workbook_tools.warnings_of_columns import column_warnings

_TINY = float(np.finfo(np.float64).tiny)


def plan_sheet(reading: SheetReading, request: Request, styles: StyleSheet | None) -> SheetPlan:
    """Decide what a fill does to a sheet.

    A sheet without a source or without anything to fill gives a plan without columns.

    Raises:
        UsageError: two columns could serve as the source, or the request fits no column.
        Refusal: a partly filled column disagrees with the parameters, or there is no room.
        ArgumentError: an error term was asked for that the source or the parameter set lacks.
    """
    plan = SheetPlan(reading)
    source = _source(reading, request)
    if source is None:
        return plan
    column, heading = source
    (cells,) = reading.columns([column])
    if column in reading.texts or any(cells.count(kind) for kind in (NUMBER, LIMIT, LEFT)):
        plan.source = column
    targets, added = _targets(plan, request, column, heading)
    if not reading.rows or not (targets or added):
        return plan
    values = read_values(reading, column, heading)
    moments = Moments(values, request.history, request.side, request.error_terms)
    filler = ColumnFiller(plan, moments, styles)
    existing = filler.fill_existing(targets)
    append_columns(filler, added, existing, request.with_errors)
    filler.report_source()
    plan.notes += _about_errors(plan, moments, request)
    if plan.changed:
        plan.notes += _about_reading(request)
        plan.notes += column_warnings(moments, [c.heading for c in plan.columns], reading)
    return plan


def _about_errors(plan: SheetPlan, moments: Moments, request: Request) -> list[str]:
    """Return what the errors written count, or why none are written."""
    column = column_letters(moments.source.cells.column)
    if any("error" in one.holds and one.count for one in plan.columns):
        return moments.error_notes()
    if not moments.has_errors:
        return [f"column {column} gives no errors to carry"] if request.with_errors else []
    companions = (plan.reading.companion(c.column, role) for c in plan.columns for role in ERRORS)
    if request.with_errors or not plan.changed or any(companions):
        return []
    what = (
        "what was asked to count in errors" if moments.exact else f"the errors of column {column}"
    )
    return [f"{what} went nowhere, as no column holds errors; --with-errors appends some"]


def _about_reading(request: Request) -> list[str]:
    """Return by which choices cells were read otherwise than they are by default."""
    notes = []
    if request.decimal_comma:
        notes.append("commas in typed numbers were taken for decimal marks (--decimal-comma)")
    if request.brackets_are_notes:
        notes.append("brackets behind numbers were taken for notes (--brackets-are-notes)")
    if request.missing:
        listed = ", ".join(f"{number:g}" for number in request.missing)
        notes.append(f"taken for no value, as declared with --missing: {listed}")
    return notes


def _source(reading: SheetReading, request: Request) -> tuple[int, Heading] | None:
    if request.source is not None:
        found = source_choice.named_source(reading, request)
        if found is not None and reading.header is None:
            reading.take_header_above(found[0])
        return found
    if request.source_measure is not None:
        raise UsageError("--as says what a column holds; name that column with --source")
    sources = source_choice.possible_sources(reading)
    if len(sources) > 1:
        if _has_blank_target(reading, sources, request):
            source_choice.refuse_several(reading, sources)
        waited_for = source_choice.waited_for(reading, sources, request)
        source_choice.refuse_several(reading, waited_for)
        sources = waited_for or sources
    return (sources[0], reading.headings[sources[0]]) if sources else None


def _has_blank_target(reading: SheetReading, sources: list[int], request: Request) -> bool:
    """Tell whether anything waits to be filled from one of several possible sources."""
    if any(not source_choice.called(reading, text) for text in request.add):
        return True
    columns = reading.columns(list(reading.headings))
    filled = [one for one in columns if one.column in sources]
    return any(
        target.is_blank(position) and one.kinds[position] in (NUMBER, LIMIT)
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
        twin = next(iter(source_choice.called(reading, text)), None)
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
        and not heading.was_measured
        and (not request.only or any(source_choice.is_called(heading, one) for one in request.only))
    }
    return sorted((targets | asked).items()), added


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
        numbers = [0.0 if abs(value) < _TINY else float(value) for _, value in kept]
        if not np.all(np.isfinite(numbers)):
            raise UsageError(f"column {text!r} holds a number that no cell can hold; leave it out")
        style = 0 if styles is None else styles.with_format(0, format_for(numbers, 1))
        plan.cells.append(
            NewCells(
                column,
                array("q", [row for row, _ in kept]),
                array("d", numbers),
                array("q", [style] * len(kept)),
                texts={first_row - 1: (text, 0)} if first_row > 1 else {},
                width=12.0,
            )
        )
    return plan
