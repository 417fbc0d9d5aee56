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
from workbook_tools.column_meanings import Heading
from workbook_tools.errors import UsageError
from workbook_tools.headings import same_heading
from workbook_tools.number_formats import format_for
from workbook_tools.request import Request
from workbook_tools.right_edge import free_columns
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.styles import StyleSheet
from workbook_tools.typed_cells import LIMIT, NUMBER
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
    targets, added = _targets(plan, request, column, heading)
    if not reading.rows or not (targets or added):
        return plan
    values = read_values(reading, column, heading)
    moments = Moments(values, request.history, request.side, request.error_terms)
    filler = ColumnFiller(plan, moments, styles)
    filler.fill_existing(targets)
    filler.append(added, [one for _, one in targets], request.with_errors)
    filler.report_source()
    if plan.changed:
        plan.notes += moments.error_notes()
        plan.notes += column_warnings(moments, [one.heading for one in plan.columns])
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
        target.is_blank(position) and one.kinds[position] in (NUMBER, LIMIT)
        for target in columns
        for one in filled
        if not reading.headings[one.column].same_kind(reading.headings[target.column])
        for position in range(len(target.kinds))
    )


def _was_measured(heading: Heading) -> bool:
    """Tell whether a heading says that its values are observed: then none is to be computed."""
    return bool(heading.method) or heading.frame not in ("", "CMB")


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
        and not _was_measured(heading)
        and (not request.only or any(same_heading(heading.text, one) for one in request.only))
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
