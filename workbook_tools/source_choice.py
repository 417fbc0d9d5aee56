"""Which column a sheet's new values are converted from; two that could serve are never guessed."""

from __future__ import annotations

import re
from collections.abc import Sequence

import numpy as np

from workbook_tools.cell_address import column_letters, column_number
from workbook_tools.column_meanings import ERRORS, Heading, Role
from workbook_tools.errors import UsageError
from workbook_tools.headings import lacks_unit, read_heading, same_heading
from workbook_tools.request import ErrorTerms, Request
from workbook_tools.rows_passed_over import rows_passed_over
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import LIMIT, NUMBER, ColumnCells
from workbook_tools.value_columns import ValueColumn, read_values

_LETTERS = re.compile(r"\$?([A-Za-z]{1,3}):\$?([A-Za-z]{1,3})")


def named_source(reading: SheetReading, request: Request) -> tuple[int, Heading] | None:
    """Return the column that the request names and what it holds; None where the sheet lacks it.

    Raises:
        UsageError: the name fits two columns, or what the column holds is not known.
    """
    assert request.source is not None
    meaning = None
    if request.source_measure is not None:
        meaning = known_heading(request.source_measure, "--as")
    letters = _LETTERS.fullmatch(request.source.strip())
    if letters is not None:
        if letters[1].upper() != letters[2].upper():
            raise UsageError(f"--source {request.source} is more than one column; name one, as C:C")
        column = column_number(letters[1])
    else:
        fitting = called(reading, request.source)
        if len(fitting) > 1:
            listed = " and ".join(f"{column_letters(c)}:{column_letters(c)}" for c in fitting)
            raise UsageError(
                f"sheet {reading.sheet.name!r} has the heading {request.source!r} more than once;"
                f" name the column by its letters with --source: {listed}"
            )
        if not fitting:
            return None
        column = fitting[0]
    heading = meaning or reading.headings.get(column)
    if heading is None:
        text = reading.texts.get(column)
        headed = "has no heading" if text is None else f"is headed {text!r}"
        raise UsageError(
            f"column {column_letters(column)} of sheet {reading.sheet.name!r} {headed}, which is no"
            " measure with a unit; say what it holds, as in --as redshift or --as 'age [Gyr]'"
        )
    return column, heading


def called(reading: SheetReading, text: str) -> list[int]:
    """Return the columns whose heading is a text, or whose name and unit it is: `Age [Gyr]`."""
    return [
        column
        for column, shown in reading.texts.items()
        if same_heading(shown, text) or is_called(reading.headings.get(column), text)
    ]


def is_called(heading: Heading | None, text: str) -> bool:
    """Tell whether a heading is called so, be its unit beside its name or in a row below."""
    return heading is not None and (
        same_heading(heading.text, text)
        or same_heading(f"{heading.name} [{heading.unit_text}]", text)
    )


def possible_sources(reading: SheetReading) -> list[int]:
    """Return the recognised columns that hold numbers and do not themselves wait to be filled.

    A column waits where another measure has something in all of its rows and in further ones.
    Two columns of one measure in one unit (redshifts by two methods) never fill each other.
    """
    columns = reading.columns(list(reading.headings))
    held = [cells for cells in columns if cells.count(NUMBER) or cells.count(LIMIT)]
    if len(held) < 2:
        return [cells.column for cells in held]
    filled = {cells.column: _filled_rows(reading, cells) for cells in held}
    return [
        column
        for column, rows in filled.items()
        if not any(
            rows < further and not reading.headings[other].same_kind(reading.headings[column])
            for other, further in filled.items()
        )
    ]


def waited_for(reading: SheetReading, sources: Sequence[int], request: Request) -> list[int]:
    """Return the sources from which error columns and flag columns of others could be filled.

    Args:
        sources: columns of values, each of which could serve.
    """
    values = {column: read_values(reading, column, reading.headings[column]) for column in sources}
    anywhere = any(held.has_errors for held in values.values())
    # Where none gives errors, those that are asked for count alone, and any could be their source;
    # where some do, they may have been made so from a column that gives none.
    asked = request.error_terms != ErrorTerms()
    found = set()
    for owner, heading in reading.headings.items():
        if heading.was_measured:
            continue
        lacks = request.with_errors and _lacks_errors(reading, owner) and not (asked and anywhere)
        for source, held in values.items():
            if source == owner or held.heading.same_kind(heading):
                continue
            if (lacks and (asked or held.has_errors)) or _waits(reading, owner, held):
                found.add(source)
    return sorted(found)


def _lacks_errors(reading: SheetReading, column: int) -> bool:
    (cells,) = reading.columns([column])
    stated = any(reading.companion(column, role) is not None for role in ERRORS)
    return not stated and not cells.errors


def _waits(reading: SheetReading, owner: int, source: ValueColumn) -> bool:
    """Tell whether a companion is blank beside an error or a limit of a source."""
    errors = np.flatnonzero(~np.isnan(source.lower)).tolist()
    for role in (*ERRORS, Role.LIMIT_FLAG):
        column = reading.companion(owner, role)
        if column is not None:
            (cells,) = reading.columns([column])
            given = source.limits if role is Role.LIMIT_FLAG else errors
            if any(cells.is_blank(position) for position in given):
                return True
    return False


def refuse_several(reading: SheetReading, sources: list[int]) -> None:
    """Raise where more than one column could serve.

    Raises:
        UsageError: it lists them.
    """
    if len(sources) > 1:
        listed = ", ".join(
            f"{reading.headings[column].text!r} ({column_letters(column)})" for column in sources
        )
        raise UsageError(
            f"sheet {reading.sheet.name!r} has {len(sources)} columns to convert from: {listed};"
            " choose one with --source"
        )


def known_heading(text: str, option: str) -> Heading:
    """Return what a heading given on the command line says.

    Raises:
        UsageError: it is no measure with a unit.
    """
    heading = read_heading(text)
    if heading is None:
        measure = lacks_unit(text)
        hint = "write a measure and its unit, as in 'Age [Gyr]' or 'redshift'"
        if measure is not None:
            hint = f"{measure.name} needs a unit: '{text.strip()} [{measure.unit}]'"
        raise UsageError(f"{option} {text!r} is no heading that is known here; {hint}")
    return heading


def _filled_rows(reading: SheetReading, cells: ColumnCells) -> frozenset[int]:
    """Return the rows in which a column has something, without those that are none of the log."""
    passed_over = rows_passed_over(reading, cells, reading.headings[cells.column])
    held = (p for p, kind in enumerate(cells.kinds) if kind >= NUMBER)
    return frozenset(p for p in held if p not in passed_over)
