"""Rows that are none of the log: hidden by hand, merged, totals, or headings that are repeated.

They are passed over, counted and named. A line of totals is known by its formula, or by the label
with which it begins.
"""

from __future__ import annotations

import re

from workbook_tools.column_meanings import Heading, Role
from workbook_tools.header_block import likeness
from workbook_tools.headings import meaning_of, same_heading
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.sheet_scan import attributes_of
from workbook_tools.typed_cells import EMPTY, SUMS_UP, ColumnCells

_HIDDEN = "a row hidden by hand"
_MERGED = "merged cells"
_TOTALS = "a line of totals"
_REPEATED = "repeated headings"

_LABEL = re.compile(
    r"\W*(?:(?:grand|overall|sub)[ -]?)?"
    r"(?:totals?|sums?|means?|averages?|avg|medians?|counts?|min(?:imum)?|max(?:imum)?|"
    r"standard deviation|std(?:\.? ?dev)?|rms|scatter)\b\.?"
    r"(?: (?:of|over|all|number|value|z|redshift)\b.*)?\s*(?:[:=(±+].*)?",
    re.IGNORECASE,
)


def rows_passed_over(reading: SheetReading, cells: ColumnCells, heading: Heading) -> dict[int, str]:
    """Return why cells of a column of values are passed over, by position in the rows of the log.

    Args:
        cells: of the column.
        heading: what the column holds.
    """
    found: dict[int, str] = {}
    for position, why in (
        *((p, _HIDDEN) for p in _hidden(reading)),
        *((p, _MERGED) for p in _merged(reading, cells.column)),
        *((p, _TOTALS) for p, reason in cells.reasons.items() if reason == SUMS_UP),
        *((p, _TOTALS) for p in _labelled(reading, cells.column)),
        *_headings(reading, cells, heading),
    ):
        if cells.kinds[position] > EMPTY:
            found.setdefault(position, why)
    return found


def _hidden(reading: SheetReading) -> list[int]:
    """Return the rows that somebody hid; one that a filter hides is only out of view."""
    scan = reading.scan
    if scan.plain.find(b"hidden", scan.data.start_tag_end, scan.data.end_tag_start) < 0:
        return []
    return [
        position
        for position, index in enumerate(reading.rows)
        if attributes_of(scan.plain[scan.starts[index] : scan.tag_ends[index]]).get("hidden")
        in (b"1", b"true")
        and not any(a.first_row <= scan.numbers[index] <= a.last_row for a in reading.filtered)
    ]


def _merged(reading: SheetReading, column: int) -> list[int]:
    """Return the rows that share a cell; one merged within its row belongs to that row alone."""
    rows = reading.rows
    areas = [
        area
        for area in reading.merged
        if area.first_column <= column <= area.last_column and area.height > 1
    ]
    return [
        position
        for area in areas
        for index in reading.scan.rows_between(area.first_row, area.last_row)
        if 0 <= (position := index - rows.start) < len(rows)
    ]


def _labelled(reading: SheetReading, column: int) -> list[int]:
    """Return the rows whose first cell, left of the values, says that they sum up others."""
    labels = min(reading.texts, default=column)
    if labels >= column:
        return []
    texts = reading.texts_of(labels)
    return [position for position, text in texts.items() if _LABEL.fullmatch(text)]


def _headings(reading: SheetReading, cells: ColumnCells, heading: Heading) -> list[tuple[int, str]]:
    """Return repeated headings and units, and all rows below headings of another kind."""
    column = cells.column
    own = [reading.texts.get(column, "")]
    own += [row[column] for row in (reading.header.rows if reading.header else ()) if column in row]
    found: list[tuple[int, str]] = []
    for position in sorted(cells.shown):
        text = cells.shown[position]
        if any(same_heading(text, one) for one in own):
            found.append((position, _REPEATED))
        elif _starts_another_log(reading, position, text, heading):
            row = reading.scan.numbers[reading.rows[position]]
            why = f"below other headings; fill these rows with --header-row {row}"
            return found + [(p, why) for p in range(position, len(cells.kinds))]
    return found


def _starts_another_log(reading: SheetReading, position: int, text: str, heading: Heading) -> bool:
    """Tell whether a text in a column of values is the heading of another column below it."""
    meaning = meaning_of(text)
    if meaning.role is not Role.VALUE or meaning.heading is None:
        return False
    texts = reading.texts_in_row(position)
    several = sum(likeness(one) > 0 for one in texts.values()) > 1
    return several and not meaning.heading.same_kind(heading)
