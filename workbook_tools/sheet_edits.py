"""From new cells to edits of a sheet's bytes: cells, rows and the extent of the sheet."""

from __future__ import annotations

import re
from array import array
from collections.abc import Iterator
from dataclasses import dataclass, field

import numpy as np

from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_widths import width_edits
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.splice import Edit, EditKind
from workbook_tools.written_values import range_in
from workbook_tools.xml_offsets import escape_text, qualified, set_attribute


@dataclass
class NewCells:
    """The cells that one column gets, in ascending order of rows.

    Attributes:
        column: counted from 1.
        rows, numbers, styles: row number, value and format of each number.
        texts: text and style of each cell with a text, such as the heading, by row.
        width: of a new column, in characters; None leaves the widths alone.
    """

    column: int
    rows: array[int] = field(default_factory=lambda: array("q"))
    numbers: array[float] = field(default_factory=lambda: array("d"))
    styles: array[int] = field(default_factory=lambda: array("q"))
    texts: dict[int, tuple[str, int]] = field(default_factory=dict)
    width: float | None = None

    @property
    def extent(self) -> Range:
        """The rectangle from the first to the last new cell."""
        rows = [*self.texts, *self.rows[:1], *self.rows[-1:]]
        return Range(min(rows), self.column, max(rows), self.column)


def edits(scan: SheetScan, new: list[NewCells]) -> Iterator[Edit]:
    """Yield the edits of a sheet that put new cells into it, in the order of the bytes.

    Nothing that holds something is touched: each new cell lands where there is no cell element or
    an empty one.

    Raises:
        Refusal: the extent or the columns of the sheet are written in a way that is none.
        ValueError: a cell would land on one that holds something (a bug of ours).
    """
    new = sorted((one for one in new if one.rows or one.texts), key=lambda one: one.column)
    if not new:
        return
    widths = {one.column: one.width for one in new if one.width is not None}
    yield from sorted([*_dimension_edits(scan, new), *width_edits(scan, widths)], key=_position)
    yield from _row_edits(scan, new)


def _position(edit: Edit) -> tuple[int, int]:
    return edit.start, edit.end


class _Block:
    """Columns that get numbers in the same rows, written together."""

    def __init__(self, columns: list[NewCells], prefix: bytes) -> None:
        self.rows = columns[0].rows
        self.columns = [one.column for one in columns]
        self.last = self.columns[-1]
        self._letters = [column_letters(column).encode() for column in self.columns]
        self._prefix = prefix
        self._styles = zip(*(one.styles for one in columns), strict=True)
        self._values = zip(
            *(part for one in columns for part in (one.rows, one.numbers)), strict=True
        )
        self._forms: dict[tuple[int, ...], list[bytes]] = {}
        self._joined: dict[tuple[int, ...], bytes] = {}
        self.place = 0

    def next_together(self) -> bytes:
        """Return the cells of the next row as one run of bytes."""
        self.place += 1
        styles = next(self._styles)
        joined = self._joined.get(styles)
        if joined is None:
            joined = self._joined[styles] = b"".join(self._forms_for(styles))
        return joined % next(self._values)

    def next_apart(self) -> list[tuple[int, bytes]]:
        """Return column and bytes of each cell of the next row."""
        self.place += 1
        forms, values = self._forms_for(next(self._styles)), next(self._values)
        return [
            (column, form % values[2 * i : 2 * i + 2])
            for i, (column, form) in enumerate(zip(self.columns, forms, strict=True))
        ]

    def _forms_for(self, styles: tuple[int, ...]) -> list[bytes]:
        """Return a template for each cell: 15 significant digits, all that programs keep."""
        forms = self._forms.get(styles)
        if forms is None:
            p = self._prefix
            forms = self._forms[styles] = [
                b'<%bc r="%b%%d" s="%d"><%bv>%%.15g</%bv></%bc>' % (p, letters, style, p, p, p)
                for letters, style in zip(self._letters, styles, strict=True)
            ]
        return forms


def _blocks(new: list[NewCells], prefix: bytes) -> list[_Block]:
    """Group neighbouring columns that have the same rows."""
    groups: list[list[NewCells]] = []
    for one in new:
        if one.rows and groups and groups[-1][0].rows == one.rows:
            groups[-1].append(one)
        elif one.rows:
            groups.append([one])
    return [_Block(group, prefix) for group in groups]


def _texts(new: list[NewCells], prefix: bytes) -> dict[int, list[tuple[int, bytes]]]:
    """Return column and bytes of each text, by row."""
    found: dict[int, list[tuple[int, bytes]]] = {}
    p = prefix
    for one in new:
        address = column_letters(one.column).encode()
        for row, (text, style) in one.texts.items():
            cell = b'<%bc r="%b%d" s="%d" t="inlineStr"><%bis><%bt>%b</%bt></%bis></%bc>' % (
                *(p, address, row, style),
                *(p, p, escape_text(text).encode(), p, p, p),
            )
            found.setdefault(row, []).append((one.column, cell))
    return found


def _row_edits(scan: SheetScan, new: list[NewCells]) -> Iterator[Edit]:
    prefix = scan.data.prefix.encode() + b":" if scan.data.prefix else b""
    blocks, texts = _blocks(new, prefix), _texts(new, prefix)
    parts = [np.array(block.rows, dtype=np.int64) for block in blocks]
    rows = np.unique(np.concatenate([*parts, np.array(list(texts), dtype=np.int64)]))
    spans = _SpansEdits(scan)
    missing: list[bytes] = []
    index, count, numbers = 0, len(scan), scan.numbers
    for row in rows.tolist():
        while index < count and numbers[index] < row:
            if missing:
                yield _inserted_rows(scan, index, missing)
                missing = []
            index += 1
        busy = [b for b in blocks if b.place < len(b.rows) and b.rows[b.place] == row]
        there = index < count and numbers[index] == row
        if there and missing:
            yield _inserted_rows(scan, index, missing)
            missing = []
        if there and len(busy) == 1 and row not in texts:
            (block,) = busy
            if scan.ends[index] > scan.tag_ends[index] and (
                scan.last_columns[index] < block.columns[0]
            ):
                widened = spans.edit(index, block.columns[0], block.last)
                if widened is not None:
                    yield widened
                position = scan.end_of_cells(index)
                yield Edit(EditKind.CELL_INSERTED, position, position, block.next_together())
                continue
        cells = [cell for block in busy for cell in block.next_apart()] + texts.get(row, [])
        cells.sort(key=lambda cell: cell[0])
        if there:
            yield from _edits_of_row(scan, index, cells, spans)
        else:
            body = b"".join(cell for _, cell in cells)
            missing.append(b'<%brow r="%d">%b</%brow>' % (prefix, row, body, prefix))
    if missing:
        while index < count and numbers[index] < row:
            index += 1
        yield _inserted_rows(scan, index, missing)


def _inserted_rows(scan: SheetScan, index: int, rows: list[bytes]) -> Edit:
    """Return the edit that puts whole rows before the row element with that index."""
    body = b"".join(rows)
    if index < len(scan):
        # A row that does not say its number follows the one before: no new one is due between them.
        return Edit(EditKind.ROW_INSERTED, scan.starts[index], scan.starts[index], body)
    if scan.data.self_closing:
        name = qualified(scan.data.prefix, "sheetData").encode()
        end = scan.data.end
        return Edit(EditKind.ROW_INSERTED, end - 2, end, b">%b</%b>" % (body, name))
    position = scan.ends[-1] if len(scan) else scan.data.start_tag_end
    return Edit(EditKind.ROW_INSERTED, position, position, body)


def _edits_of_row(
    scan: SheetScan, index: int, cells: list[tuple[int, bytes]], spans: _SpansEdits
) -> Iterator[Edit]:
    widened = spans.edit(index, cells[0][0], cells[-1][0])
    if widened is not None:
        yield widened
    tag_end = scan.tag_ends[index]
    if scan.ends[index] > tag_end:
        if scan.last_columns[index] >= cells[0][0]:
            yield from _edits_among_cells(scan, index, cells)
            return
        end = scan.end_of_cells(index)
        yield Edit(EditKind.CELL_INSERTED, end, end, b"".join(cell for _, cell in cells))
        return
    closing = b"</%brow>" % (scan.data.prefix.encode() + b":" if scan.data.prefix else b"")
    body = b"".join(cell for _, cell in cells)
    yield Edit(EditKind.EMPTY_ROW_OPENED, tag_end - 2, tag_end, b">%b%b" % (body, closing))


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
                yield _inserted_cells(position, pending)
                pending = []
            position = old[place].end
            place += 1
        if place < len(old) and old[place].column == column:
            span = old[place]
            if pending:
                yield _inserted_cells(position, pending)
                pending = []
            if not scan.is_empty(span):
                raise ValueError(f"row {scan.numbers[index]}, column {column} is not empty")
            yield Edit(EditKind.EMPTY_CELL_REPLACED, span.start, span.end, cell)
            position = span.end
            place += 1
        else:
            pending.append(cell)
    if pending:
        yield _inserted_cells(position, pending)


def _inserted_cells(position: int, cells: list[bytes]) -> Edit:
    # Nor can a cell without an address follow a gap in which a new one is due.
    return Edit(EditKind.CELL_INSERTED, position, position, b"".join(cells))


class _SpansEdits:
    """Widens the `spans` hint of rows; few different ones occur in a sheet."""

    def __init__(self, scan: SheetScan) -> None:
        self._scan = scan
        self._known: dict[tuple[bytes, int, int], bytes | None] = {}

    def edit(self, index: int, first: int, last: int) -> Edit | None:
        """Return the edit for one row, None where its hint covers the columns or it has none."""
        scan = self._scan
        start = scan.plain.find(b' spans="', scan.starts[index], scan.tag_ends[index])
        if start < 0:
            where = scan.row_attribute_span(index, b"spans")
            if where is None:
                return None
        else:
            where = start + 8, scan.plain.index(b'"', start + 8)
        key = scan.xml[where[0] : where[1]], first, last
        if key not in self._known:
            self._known[key] = _widened(*key)
        new = self._known[key]
        return None if new is None else Edit(EditKind.ATTRIBUTE_CHANGED, *where, new)


def _widened(spans: bytes, first: int, last: int) -> bytes | None:
    pairs = [(int(low), int(high)) for low, high in re.findall(rb"(\d+):(\d+)", spans)]
    if not pairs or any(low <= first and last <= high for low, high in pairs):
        return None
    low, high = min(first, *(one for one, _ in pairs)), max(last, *(one for _, one in pairs))
    return b"%d:%d" % (low, high)


def _dimension_edits(scan: SheetScan, new: list[NewCells]) -> list[Edit]:
    dimension = scan.outline.find("dimension")
    if dimension is None or "ref" not in dimension.attributes:
        return []
    old = range_in(dimension.attributes["ref"], scan.part)
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
