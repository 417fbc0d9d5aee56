"""From new cells to edits of a sheet's bytes: cells, rows and the extent of the sheet."""

from __future__ import annotations

import re
from array import array
from collections.abc import Iterator
from dataclasses import dataclass, field

from workbook_tools.cell_address import Range, column_letters, column_number, parse_range
from workbook_tools.column_widths import width_edits
from workbook_tools.errors import Refusal
from workbook_tools.sheet_scan import CellSpan, SheetScan
from workbook_tools.splice import Edit, EditKind
from workbook_tools.xml_offsets import escape_text, qualified, set_attribute

_SMALLEST = 2.2250738585072014e-308


@dataclass
class NewCells:
    """The cells that one column gets, in ascending order of rows.

    Attributes:
        column: counted from 1.
        rows, numbers, styles: row number, value and format of each number.
        heading: row, text and style of a heading to be written, or None.
        width: of a new column, in characters; None leaves the widths alone.
    """

    column: int
    rows: array[int] = field(default_factory=lambda: array("q"))
    numbers: array[float] = field(default_factory=lambda: array("d"))
    styles: array[int] = field(default_factory=lambda: array("q"))
    heading: tuple[int, str, int] | None = None
    width: float | None = None

    @property
    def extent(self) -> Range:
        """The rectangle from the first to the last new cell."""
        rows = [*([self.heading[0]] if self.heading else []), *self.rows[:1], *self.rows[-1:]]
        return Range(min(rows), self.column, max(rows), self.column)


def number_bytes(value: float) -> bytes:
    """Write a number with the 15 significant digits that spreadsheet programs keep."""
    if abs(value) < _SMALLEST:
        return b"0"
    return b"%.15g" % value


def edits(scan: SheetScan, new: list[NewCells]) -> Iterator[Edit]:
    """Yield the edits of a sheet that put new cells into it, in the order of the bytes.

    Nothing that holds something is touched: each new cell lands where there is no cell element or
    an empty one.

    Raises:
        Refusal: a cell would land where it cannot be written without moving others.
        ValueError: a cell would land on one that holds something (a bug of ours).
    """
    new = sorted((one for one in new if one.rows or one.heading), key=lambda one: one.column)
    if not new:
        return
    widths = {one.column: one.width for one in new if one.width is not None}
    yield from sorted([*_dimension_edits(scan, new), *width_edits(scan, widths)], key=_position)
    yield from _row_edits(scan, new)


def _position(edit: Edit) -> tuple[int, int]:
    return edit.start, edit.end


class _Writer:
    """Hands out the new cells row by row, as bytes."""

    def __init__(self, scan: SheetScan, new: list[NewCells]) -> None:
        self.new = new
        self.places = [0] * len(new)
        self.letters = [column_letters(one.column).encode() for one in new]
        prefix = scan.data.prefix.encode() + b":" if scan.data.prefix else b""
        self.prefix = prefix
        self.number_form = b'<%sc r="%%b%%d" s="%%d"><%sv>%%b</%sv></%sc>' % ((prefix,) * 4)
        self.text_form = (
            b'<%sc r="%%b%%d" s="%%d" t="inlineStr"><%sis><%st>%%b</%st></%sis></%sc>'
            % ((prefix,) * 6)
        )

    def all_rows(self) -> list[int]:
        """Return the numbers of the rows that get cells, ascending."""
        rows: set[int] = set()
        for one in self.new:
            rows.update(one.rows)
            if one.heading is not None:
                rows.add(one.heading[0])
        return sorted(rows)

    def cells(self, row: int) -> list[tuple[int, bytes]]:
        """Return column and bytes of the new cells of a row; rows must be asked in order."""
        found = []
        for i, one in enumerate(self.new):
            place = self.places[i]
            if one.heading is not None and one.heading[0] == row:
                _, text, style = one.heading
                body = escape_text(text).encode()
                found.append((one.column, self.text_form % (self.letters[i], row, style, body)))
            elif place < len(one.rows) and one.rows[place] == row:
                value = number_bytes(one.numbers[place])
                cell = self.number_form % (self.letters[i], row, one.styles[place], value)
                found.append((one.column, cell))
                self.places[i] = place + 1
        return found


def _row_edits(scan: SheetScan, new: list[NewCells]) -> Iterator[Edit]:
    writer = _Writer(scan, new)
    missing: list[bytes] = []
    index = 0
    for row in writer.all_rows():
        while index < len(scan) and scan.numbers[index] < row:
            if missing:
                yield _inserted_rows(scan, index, missing)
                missing = []
            index += 1
        cells = writer.cells(row)
        if index < len(scan) and scan.numbers[index] == row:
            if missing:
                yield _inserted_rows(scan, index, missing)
                missing = []
            yield from _edits_of_row(scan, index, cells)
            index += 1
        else:
            body = b"".join(cell for _, cell in cells)
            missing.append(b'<%brow r="%d">%b</%brow>' % (writer.prefix, row, body, writer.prefix))
    if missing:
        yield _inserted_rows(scan, index, missing)


def _inserted_rows(scan: SheetScan, index: int, rows: list[bytes]) -> Edit:
    """Return the edit that puts whole rows before the row element with that index."""
    body = b"".join(rows)
    if index < len(scan):
        if not scan.rows_explicit:
            raise Refusal(
                f"{scan.part} has rows without numbers, and a new row would renumber them; open the"
                " workbook in its own program, save it and try again."
            )
        return Edit(EditKind.ROW_INSERTED, scan.starts[index], scan.starts[index], body)
    if scan.data.self_closing:
        name = qualified(scan.data.prefix, "sheetData").encode()
        end = scan.data.end
        return Edit(EditKind.ROW_INSERTED, end - 2, end, b">%b</%b>" % (body, name))
    position = scan.ends[-1] if len(scan) else scan.data.start_tag_end
    return Edit(EditKind.ROW_INSERTED, position, position, body)


def _edits_of_row(scan: SheetScan, index: int, cells: list[tuple[int, bytes]]) -> Iterator[Edit]:
    spans = _spans_edit(scan, index, cells[0][0], cells[-1][0])
    if spans is not None:
        yield spans
    tag_end = scan.tag_ends[index]
    if scan.ends[index] == tag_end:
        closing = b"</%brow>" % (scan.data.prefix.encode() + b":" if scan.data.prefix else b"")
        body = b"".join(cell for _, cell in cells)
        yield Edit(EditKind.EMPTY_ROW_OPENED, tag_end - 2, tag_end, b">%b%b" % (body, closing))
        return
    if scan.cells_regular:
        last = scan.last_letters(index)
        if not last or column_number(last.decode()) < cells[0][0]:
            position = _end_of_cells(scan, index)
            yield Edit(
                EditKind.CELL_INSERTED, position, position, b"".join(cell for _, cell in cells)
            )
            return
    yield from _edits_among_cells(scan, index, cells)


def _end_of_cells(scan: SheetScan, index: int) -> int:
    """Return where the last cell of a row ends; what may follow it is an extension list."""
    content_end = scan.content_ends[index]
    last = scan.last_letters(index)
    if not last:
        return scan.tag_ends[index]
    cell = scan.find_cell(index, last)
    return content_end if cell is None else cell.end


def _edits_among_cells(
    scan: SheetScan, index: int, cells: list[tuple[int, bytes]]
) -> Iterator[Edit]:
    """Yield the edits that put new cells between, after or in place of empty old ones."""
    old = scan.cells(index)
    pending: list[bytes] = []
    place = 0
    position = scan.tag_ends[index]
    for column, cell in cells:
        while place < len(old) and old[place].column < column:
            if pending:
                yield _inserted_cells(scan, position, pending, old[place])
                pending = []
            position = old[place].end
            place += 1
        if place < len(old) and old[place].column == column:
            span = old[place]
            if pending:
                yield _inserted_cells(scan, position, pending, span)
                pending = []
            if not scan.is_empty(span):
                raise ValueError(f"row {scan.numbers[index]}, column {column} is not empty")
            yield Edit(EditKind.EMPTY_CELL_REPLACED, span.start, span.end, cell)
            position = span.end
            place += 1
        else:
            pending.append(cell)
    if pending:
        yield _inserted_cells(scan, position, pending, old[place] if place < len(old) else None)


def _inserted_cells(
    scan: SheetScan, position: int, cells: list[bytes], following: CellSpan | None
) -> Edit:
    if following is not None and not following.explicit:
        raise Refusal(
            f"{scan.part} has cells without addresses, and a new cell before them would move them;"
            " open the workbook in its own program, save it and try again."
        )
    return Edit(EditKind.CELL_INSERTED, position, position, b"".join(cells))


def _spans_edit(scan: SheetScan, index: int, first: int, last: int) -> Edit | None:
    """Return the edit that widens the `spans` hint of a row, None where it covers the columns."""
    if scan.plain.find(b"spans", scan.starts[index], scan.tag_ends[index]) < 0:
        return None
    where = scan.row_attribute_span(index, b"spans")
    if where is None:
        return None
    pairs = re.findall(rb"(\d+):(\d+)", scan.xml[where[0] : where[1]])
    if not pairs or any(int(low) <= first and last <= int(high) for low, high in pairs):
        return None
    low = min(first, *(int(pair[0]) for pair in pairs))
    high = max(last, *(int(pair[1]) for pair in pairs))
    return Edit(EditKind.ATTRIBUTE_CHANGED, *where, b"%d:%d" % (low, high))


def _dimension_edits(scan: SheetScan, new: list[NewCells]) -> list[Edit]:
    dimension = scan.outline.find("dimension")
    if dimension is None or "ref" not in dimension.attributes:
        return []
    old = parse_range(dimension.attributes["ref"])
    extents = [one.extent for one in new]
    # An empty sheet says A1, whether or not A1 holds something.
    parts = [*extents, old] if len(scan) or old.width > 1 or old.height > 1 else extents
    wide = Range(
        min(part.first_row for part in parts),
        min(part.first_column for part in parts),
        max(part.last_row for part in parts),
        max(part.last_column for part in parts),
    )
    return [] if wide == old else [set_attribute(dimension, "ref", wide.a1)]
