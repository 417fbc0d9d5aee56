"""From new cells to edits of a sheet's bytes: cells, rows and the extent of the sheet."""

from __future__ import annotations

import re
from array import array
from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_widths import width_edits
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.splice import Edit, EditKind
from workbook_tools.written_values import range_in
from workbook_tools.xml_offsets import escape_text, qualified, set_attribute

# Rows that are laid out at a time: many enough to be quick, few enough to take little memory.
_ROWS_AT_ONCE = 4096
# Stands for a cell that is not there: takes row and value, and writes nothing.
_NOTHING = b"%.0a%.0a"


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


class _RowForm:
    """The new cells of a row without their numbers and texts; many rows have the same form.

    Attributes:
        first, last: columns of the outermost cells.
    """

    def __init__(self, columns: list[NewCells], codes: tuple[int, ...], prefix: bytes) -> None:
        self._cells = [
            (place, one.column, _form_of_cell(one.column, code, prefix))
            for place, (one, code) in enumerate(zip(columns, codes, strict=True))
            if code
        ]
        forms = {place: form for place, _, form in self._cells}
        self._whole = b"".join(forms.get(place, _NOTHING) for place in range(len(codes)))
        self.first, self.last = self._cells[0][1], self._cells[-1][1]

    def together(self, values: tuple[object, ...]) -> bytes:
        """Return the cells as one run of bytes, given row and value of every column in turn."""
        return self._whole % values

    def apart(self, values: tuple[object, ...]) -> list[tuple[int, bytes]]:
        """Return column and bytes of each cell."""
        return [
            (column, form % values[2 * place : 2 * place + 2])
            for place, column, form in self._cells
        ]


def _form_of_cell(column: int, code: int, prefix: bytes) -> bytes:
    """Return a template: 15 significant digits, all that programs keep, or a text."""
    p, address, (style, is_text) = prefix, column_letters(column).encode(), divmod(code - 1, 2)
    start = b'<%bc r="%b%%d" s="%d"' % (p, address, style)
    if is_text:
        inner = b' t="inlineStr"><%bis><%bt>%%b</%bt></%bis>' % (p, p, p, p)
    else:
        inner = b"><%bv>%%.15g</%bv>" % (p, p)
    return b"%b%b</%bc>" % (start, inner, p)


class _Columns:
    """Columns of new cells, laid out row by row."""

    def __init__(self, new: list[NewCells], prefix: bytes) -> None:
        self._new = new
        self._prefix = prefix
        self._numbers = [(np.array(one.rows), np.array(one.styles)) for one in new]
        self._texts = [np.array(sorted(one.texts), dtype=np.int64) for one in new]
        self._forms: dict[tuple[int, ...], _RowForm] = {}

    def __iter__(self) -> Iterator[tuple[int, _RowForm, tuple[object, ...]]]:
        """Yield number, form and values of each row that gets cells, top down."""
        every = [rows for rows, _ in self._numbers] + self._texts
        rows = np.unique(np.concatenate(every))
        for start in range(0, len(rows), _ROWS_AT_ONCE):
            part = rows[start : start + _ROWS_AT_ONCE]
            numbers = part.tolist()
            codes: list[list[int]] = []
            values: list[list[Any]] = []
            for place in range(len(self._new)):
                column_codes, column_values = self._in_rows(place, part)
                codes.append(column_codes)
                values += [numbers, column_values]
            keys, rows_of_values = zip(*codes, strict=True), zip(*values, strict=True)
            for row, key, its_values in zip(numbers, keys, rows_of_values, strict=True):
                form = self._forms.get(key)
                if form is None:
                    form = self._forms[key] = _RowForm(self._new, key, self._prefix)
                yield row, form, its_values

    def _in_rows(self, place: int, part: NDArray[np.int64]) -> tuple[list[int], list[Any]]:
        """Return code and value of one column's cell in each of the rows.

        The code is 0 where there is no cell; else it tells style and text or number.
        """
        one = self._new[place]
        codes, values = np.zeros(len(part), dtype=np.int64), np.zeros(len(part))
        rows, styles = self._numbers[place]
        first, stop = np.searchsorted(rows, (part[0], part[-1] + 1))
        there = np.searchsorted(part, rows[first:stop])
        codes[there] = 1 + 2 * styles[first:stop]
        values[there] = one.numbers[first:stop]
        all_codes, all_values = codes.tolist(), values.tolist()
        first, stop = np.searchsorted(self._texts[place], (part[0], part[-1] + 1))
        text_rows = self._texts[place][first:stop]
        places = np.searchsorted(part, text_rows).tolist()
        for at, row in zip(places, text_rows.tolist(), strict=True):
            text, style = one.texts[row]
            all_codes[at], all_values[at] = 2 + 2 * style, escape_text(text).encode()
        return all_codes, all_values


def _row_edits(scan: SheetScan, new: list[NewCells]) -> Iterator[Edit]:
    prefix = scan.data.prefix.encode() + b":" if scan.data.prefix else b""
    spans = _SpansEdits(scan)
    missing: list[bytes] = []
    index, count, numbers = 0, len(scan), scan.numbers
    for row, form, values in _Columns(new, prefix):
        while index < count and numbers[index] < row:
            if missing:
                yield _inserted_rows(scan, index, missing)
                missing = []
            index += 1
        if index == count or numbers[index] != row:
            cells = form.together(values)
            missing.append(b'<%brow r="%d">%b</%brow>' % (prefix, row, cells, prefix))
            continue
        if missing:
            yield _inserted_rows(scan, index, missing)
            missing = []
        widened = spans.edit(index, form.first, form.last)
        if widened is not None:
            yield widened
        tag_end = scan.tag_ends[index]
        if scan.ends[index] == tag_end:
            body = b">%b</%brow>" % (form.together(values), prefix)
            yield Edit(EditKind.EMPTY_ROW_OPENED, tag_end - 2, tag_end, body)
        elif scan.last_columns[index] < form.first:
            end = scan.end_of_cells(index)
            yield Edit(EditKind.CELL_INSERTED, end, end, form.together(values))
        else:
            yield from _edits_among_cells(scan, index, form.apart(values))
    if missing:
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
