"""Where new columns can stand: right of the data, and free over the whole height of the log."""

from __future__ import annotations

from workbook_tools.cell_address import MAX_COLUMN, Range
from workbook_tools.errors import Refusal
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.tables import Table


def right_edge(reading: SheetReading, source: int, count: int) -> tuple[int, Table | None, str]:
    """Return the first of `count` free columns at the right edge of the log.

    Args:
        source: the column to convert from; where a table holds it, that is the log's table.
    Returns:
        The column; the table that grows by it, or None; and a sentence for the report where the
        log's table cannot grow.
    Raises:
        Refusal: there is no room up to the last column of a sheet.
    """
    table, note = reading.table_of(source), ""
    if table is not None:
        edge = table.ref.last_column
        beside = table.ref._replace(first_column=edge + 1, last_column=edge + count)
        if table.growable and _is_free(reading, beside, table):
            return edge + 1, table, ""
        reason = table.reason or "something stands beside it"
        note = f"table {table.name!r} cannot grow ({reason}); the new columns stand outside it"
    rows = reading.rows
    top = reading.header_row or reading.scan.numbers[rows.start]
    bottom = reading.scan.numbers[rows[-1]]
    return free_columns(reading, top, bottom, count), None, note


def free_columns(reading: SheetReading, top: int, bottom: int, count: int) -> int:
    """Return the first of `count` free columns right of all that stands in rows top to bottom.

    Raises:
        Refusal: there is no room up to the last column of a sheet.
    """
    first = reading.last_used_column(reading.scan.rows_between(top, bottom)) + 1
    while first + count - 1 <= MAX_COLUMN:
        if _is_free(reading, Range(top, first, bottom, first + count - 1), None):
            return first
        first += 1
    raise Refusal(
        f"sheet {reading.sheet.name!r} has no {count} free columns at its right edge; move what"
        " stands there and try again"
    )


def _is_free(reading: SheetReading, wanted: Range, growing: Table | None) -> bool:
    """Tell whether nothing stands in a rectangle, and no merge, array or table reaches into it."""
    tables = [table.ref for table in reading.tables if table is not growing]
    if wanted.last_column > MAX_COLUMN or any(
        wanted.intersects(one) for one in [*tables, *reading.blocked]
    ):
        return False
    scan = reading.scan
    return not any(
        wanted.first_column <= cell.column <= wanted.last_column and not scan.is_empty(cell)
        for index in scan.rows_between(wanted.first_row, wanted.last_row)
        if scan.last_columns[index] >= wanted.first_column
        for cell in scan.cells(index)
    )
