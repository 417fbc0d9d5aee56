"""What a sheet holds, read once: its header rows, what columns mean, which rows are the log."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence

import numpy as np

from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_meanings import Heading, Meaning, Role
from workbook_tools.errors import UsageError
from workbook_tools.header_block import HeaderBlock, HeaderFinder
from workbook_tools.header_rows import read_headings
from workbook_tools.parts import Sheet
from workbook_tools.sheet_scan import SheetScan, attributes_of
from workbook_tools.tables import Table
from workbook_tools.typed_cells import (
    NUMBER,
    CellRules,
    ColumnCells,
    read_columns,
    shown_text,
)
from workbook_tools.written_values import range_in

# Redshifts are hardly ever that high, and magnitudes hardly ever that low.
_LIKE_MAGNITUDES = 10.0


class SheetReading:
    """One sheet as a log.

    Attributes:
        sheet, scan, tables: what it was read from.
        merged: the merged cells.
        filtered: rectangles whose rows a filter may hide.
        blocked: rectangles into which nothing may be written: merged cells, array formulas and
            data tables, pivot tables.
        header: the rows of headings, None where none were found.
        texts: text of each heading, by column.
        meanings: what each column is taken for.
        headings: what the columns of values hold.
        rows: indices of the rows below the header that belong to the log.
    """

    def __init__(
        self,
        sheet: Sheet,
        scan: SheetScan,
        tables: Sequence[Table],
        pivots: Sequence[Range],
        rules: CellRules,
        header_row: int | None,
    ) -> None:
        """Read a sheet.

        Raises:
            UsageError: `header_row` is given and that row holds nothing.
        """
        self.sheet = sheet
        self.scan = scan
        self.tables = tables
        self.merged = _merged(scan)
        self.filtered = [*_filtered(scan), *(table.ref for table in tables if table.filtered)]
        self.blocked = [*self.merged, *_arrays(scan), *pivots]
        self._headers = HeaderFinder(scan, self._row_texts, self.merged)
        self._rules = rules
        self._known: dict[int, ColumnCells] = {}
        self._known_texts: dict[int, dict[int, str]] = {}
        self.rows = range(0)
        self._take_header(self._find_header(header_row))

    @property
    def header_row(self) -> int | None:
        """Number of the row of names, None where none was found."""
        return None if self.header is None else self.scan.numbers[self.header.names]

    def columns(self, wanted: Sequence[int]) -> list[ColumnCells]:
        """Return the cells of columns in the rows of the log, each read once."""
        unread = [column for column in wanted if column not in self._known]
        if unread:
            self._known |= read_columns(self.scan, unread, self.rows, self._rules, self._names_of)
        return [self._known[column] for column in wanted]

    def companion(self, column: int, role: Role) -> int | None:
        """Return the companion of that role which belongs to a column, None where it has none."""
        return next(
            (c for c, one in self.meanings.items() if one.owner == column and one.role is role),
            None,
        )

    def texts_of(self, column: int) -> Mapping[int, str]:
        """Return the texts of a column's cells, by position in the rows of the log."""
        known = self._known_texts.get(column)
        if known is None:
            quick = self.scan.cells_regular
            found = self._quick_texts(column) if quick else self._all_texts(column)
            known = {position: text for position, text in found if text.strip()}
            self._known_texts[column] = known
        return known

    def texts_in_row(self, position: int) -> dict[int, str]:
        """Return the texts in a row of the log, by column."""
        return self._row_texts(self.rows[position])

    def table_of(self, column: int) -> Table | None:
        """Return the table that holds the header row at that column, None where none does."""
        row = self.header_row
        return next(
            (t for t in self.tables if row and t.header_rows and t.ref.contains(row, column)), None
        )

    def take_header_above(self, column: int) -> None:
        """Where no header row was found, take the row with text above a column's first number.

        Without such a row the numbers stand without a heading, and the log begins at the first.
        """
        everything = range(len(self.scan))
        cells = read_columns(self.scan, [column], everything, self._rules, self._names_of)[column]
        first = next((i for i in everything if cells.kinds[i] == NUMBER), None)
        if first is None:
            return
        above = [i for i in cells.shown if i < first and column in self._row_texts(i)]
        if above:
            self._take_header(self._headers.at(max(above)))
        else:
            self._forget()
            self.rows = range(first, len(self.scan))

    def doubts(self, settled: int | None = None) -> list[str]:
        """Return sentences about headings that are unclear, and what settles each.

        Args:
            settled: a column of which somebody has said what it holds.
        """
        return [
            f"heading {' '.join(self.texts.get(column, '').split())!r}"
            f" ({column_letters(column)}{self.header_row}) is left alone: {meaning.reason}"
            for column, meaning in sorted(self.meanings.items())
            if meaning.role is Role.UNCLEAR and column != settled
        ]

    def last_used_column(self, indices: Iterable[int]) -> int:
        """Return the last column that holds something in rows of the scan, 0 for none."""
        last = 0
        for index in indices:
            if self.scan.last_columns[index] > last:
                last = max(last, self._last_filled(index))
        return last

    def where(self, position: int, column: int) -> str:
        """Return the address of a cell in the log's row at that position."""
        return f"{column_letters(column)}{self.scan.numbers[self.rows[position]]}"

    def _quick_texts(self, column: int) -> Iterator[tuple[int, str]]:
        """Yield position and text of each cell of a column, for regular cells."""
        scan, letters = self.scan, column_letters(column).encode()
        places = {scan.numbers[index]: position for position, index in enumerate(self.rows)}
        for row, _, _, _, shared in scan.plain_cells(letters):
            position = places.get(row)
            if position is None:
                continue
            if shared is not None:
                yield position, self._rules.text_of(shared).text
                continue
            cell = scan.find_cell(self.rows[position], letters)
            if cell is not None and not scan.is_empty(cell):
                yield position, shown_text(scan, cell, self._rules).text

    def _all_texts(self, column: int) -> Iterator[tuple[int, str]]:
        for position, index in enumerate(self.rows):
            for cell in self.scan.cells(index):
                if cell.column == column and not self.scan.is_empty(cell):
                    yield position, shown_text(self.scan, cell, self._rules).text

    def _last_filled(self, index: int) -> int:
        cells = self.scan.cells(index)
        return max((c.column for c in cells if not self.scan.is_empty(c)), default=0)

    def _names_of(self, column: int) -> frozenset[str]:
        """Return what a column's quantity may be called inside its cells."""
        heading = self.headings.get(column)
        if heading is None:
            return frozenset()
        measure = heading.measure
        return frozenset((measure.name, measure.symbol, heading.name, *measure.aliases))

    def _row_texts(self, index: int) -> dict[int, str]:
        texts = {}
        for cell in self.scan.cells(index):
            if cell.type in ("s", "inlineStr", "str") and not self.scan.is_empty(cell):
                text = shown_text(self.scan, cell, self._rules).text
                if text.strip():
                    texts[cell.column] = text
        return texts

    def _find_header(self, header_row: int | None) -> HeaderBlock | None:
        if header_row is not None:
            index = next((i for i, n in enumerate(self.scan.numbers) if n == header_row), None)
            if index is None or not self._row_texts(index):
                raise UsageError(
                    f"row {header_row} of sheet {self.sheet.name!r} holds no headings; name the row"
                    " in which they stand with --header-row, and its sheet with --sheet"
                )
            return self._headers.at(index)
        return self._headers.find()

    def _take_header(self, header: HeaderBlock | None) -> None:
        self.header = header
        self._forget()
        self.meanings: dict[int, Meaning] = {}
        self.headings: dict[int, Heading] = {}
        self.texts: dict[int, str] = {}
        if header is None:
            return
        self.texts = dict(header.texts)
        self._give_meanings(read_headings(header.rows))
        self._limit_rows()
        magnitudes = [c for c in self.headings if self._looks_like_magnitudes(c)]
        if magnitudes:
            self._forget()
            self._give_meanings(read_headings(header.rows, magnitudes))

    def _forget(self) -> None:
        """Forget cells that were read in other rows or under other names."""
        self._known.clear()
        self._known_texts.clear()

    def _give_meanings(self, meanings: dict[int, Meaning]) -> None:
        self.meanings = meanings
        self.headings = {
            column: meaning.heading
            for column, meaning in meanings.items()
            if meaning.role is Role.VALUE and meaning.heading is not None
        }

    def _looks_like_magnitudes(self, column: int) -> bool:
        heading = self.headings[column]
        if heading.measure.name != "redshift" or heading.name != "z":
            return False
        (cells,) = self.columns([column])
        held = np.frombuffer(cells.kinds, dtype=np.uint8) == NUMBER
        numbers = np.array(cells.numbers)[held]
        return len(numbers) > 0 and float(np.median(numbers)) > _LIKE_MAGNITUDES

    def _limit_rows(self) -> None:
        """Set the rows of the log: those of the header's table, or all down to a table below."""
        assert self.header is not None
        start = self.header.last + 1
        header = self.scan.numbers[self.header.names]
        columns = list(self.headings) or list(self.texts)
        tables = [t for t in map(self.table_of, columns) if t is not None]
        # A table without a header row of its own may lie right below the headings.
        tables += [
            t
            for t in self.tables
            if not t.header_rows and t.ref.first_row == self.scan.numbers[self.header.last] + 1
        ]
        last = tables[0].data.last_row if tables else None
        if last is None:
            below = [
                table.ref.first_row
                for table in self.tables
                if table.ref.first_row > header
                and any(table.ref.contains(table.ref.first_row, column) for column in columns)
            ]
            last = min(below) - 1 if below else None
        stop = len(self.scan)
        if last is not None:
            stop = next((i for i in range(start, stop) if self.scan.numbers[i] > last), stop)
        self.rows = range(start, stop)


def _filtered(scan: SheetScan) -> list[Range]:
    """Return the reach of the sheet's own filter where it hides rows."""
    return [
        range_in(one.attributes.get("ref"), scan.part)
        for one in scan.outline.find_all("autoFilter")
        if any(True for _ in one.find_all("filterColumn"))
    ]


def _merged(scan: SheetScan) -> list[Range]:
    return [
        range_in(cell.attributes.get("ref"), scan.part)
        for group in scan.outline.find_all("mergeCells")
        for cell in group.find_all("mergeCell")
    ]


def _arrays(scan: SheetScan) -> list[Range]:
    """Return the rectangles of array formulas and data tables, whose cells belong to them."""
    ranges = []
    if scan.plain.find(b"array") >= 0 or scan.plain.find(b"dataTable") >= 0:
        for match in scan.formula_tag.finditer(scan.plain):
            attributes = attributes_of(match[1])
            if attributes.get("t") in (b"array", b"dataTable") and "ref" in attributes:
                ranges.append(range_in(attributes["ref"].decode(), scan.part))
    return ranges
