"""New columns at the right edge of a log: values that were asked for, their errors and signs."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from workbook_tools.cell_address import column_letters
from workbook_tools.column_filler import ColumnFiller, flag_heading
from workbook_tools.column_meanings import ERRORS, Heading, Role
from workbook_tools.column_widths import hidden_columns
from workbook_tools.right_edge import right_edge
from workbook_tools.sheet_edits import NewCells
from workbook_tools.tables import free_names

# Words, since E_ and e_ would differ in their case alone, which tables forbid.
_SIDES = {Role.UPPER_ERROR: "upper error of {}", Role.LOWER_ERROR: "lower error of {}"}

# Role, the values that it holds or belongs to, its name, and the unit that it is in.
_New = tuple[Role, Heading, str, str]


def append_columns(
    filler: ColumnFiller, added: Sequence[Heading], existing: Sequence[int], with_errors: bool
) -> None:
    """Plan new columns, where there is a value for any row.

    Args:
        added: headings of the columns of values that were asked for.
        existing: columns that hold what the source gives.
        with_errors: whether columns get error columns where they lack them.
    """
    reading, plan = filler.reading, filler.plan
    carries = with_errors and filler.moments.has_errors
    wanted: list[_New] = []
    for heading in added:
        wanted.append((Role.VALUE, heading, heading.name, heading.unit_text))
        wanted += _errors_of(heading, tuple(_SIDES)) if carries else []
        if filler.source.flagged and filler.answers(heading).limits:
            wanted.append((Role.LIMIT_FLAG, heading, flag_heading(filler.reading, heading), ""))
    for column in existing if carries else ():
        (held,) = reading.columns([column])
        if held.errors:  # which stand with the values
            continue
        has = {role for role in ERRORS if reading.companion(column, role) is not None}
        lacking = () if Role.ERROR in has else tuple(one for one in _SIDES if one not in has)
        wanted += _errors_of(reading.headings.get(column), lacking)
    if not wanted:
        return
    if np.all(np.isnan(filler.moments.moment.x)):
        filler.wanted[:] = True
        return
    first, table, note = right_edge(reading, filler.source.cells.column, len(wanted))
    plan.notes += [note] if note else []
    names = [_name(filler, one) for one in wanted]
    if table is not None:
        names = free_names(names, table.columns)
        plan.grown = (table, names)
    hidden = hidden_columns(reading.scan)
    for offset, ((role, heading, _, unit), name) in enumerate(zip(wanted, names, strict=True)):
        column = first + offset
        cells = filler.put(role, heading, column, None, name)
        _put_headings(filler, cells, first - 1, name, unit)
        if column in hidden:
            plan.notes.append(
                f"column {column_letters(column)} was hidden and is shown, as it is new"
            )
    if reading.header is None:
        plan.notes.append("no row of headings was found, so the new columns have none")


def _errors_of(heading: Heading | None, sides: Sequence[Role]) -> list[_New]:
    if heading is None:
        return []
    return [(side, heading, _SIDES[side].format(heading.name), heading.unit_text) for side in sides]


def _name(filler: ColumnFiller, new: _New) -> str:
    """Return what stands in the row of names: with the unit, unless that has a row of its own."""
    role, heading, name, unit = new
    header = filler.reading.header
    if header is not None and header.units is not None:
        return name
    if role is Role.VALUE:
        return heading.text
    return f"{name} [{unit}]" if unit else name


def _put_headings(filler: ColumnFiller, cells: NewCells, last: int, name: str, unit: str) -> None:
    """Put name and unit above a new column, in the look of the last heading before it."""
    header, looks = filler.reading.header, filler.looks
    style = 0
    if header is not None:
        numbers = filler.reading.scan.numbers
        style = looks.of_heading(header.names, last)
        cells.texts[numbers[header.names]] = (name, style)
        if header.units is not None and unit:
            cells.texts[numbers[header.units]] = (unit, looks.of_heading(header.units, last))
    cells.width = float(min(max(len(name) + 3, 11), 15 if looks.wraps(style) else 40))
