"""What a sheet holds, read once: its header rows, what columns mean, which rows are the log."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_meanings import Heading, Meaning, Role
from workbook_tools.errors import UsageError
from workbook_tools.header_rows import holds_units, read_headings
from workbook_tools.headings import lacks_unit, meaning_of
from workbook_tools.parts import Sheet
from workbook_tools.sheet_scan import SheetScan, attributes_of
from workbook_tools.tables import Table
from workbook_tools.typed_cells import (
    NOT_READ,
    NUMBER,
    CellRules,
    ColumnCells,
    read_columns,
    shown_text,
)
from workbook_tools.written_values import range_in

# A header row stands near the top: above it are titles, contacts, remarks.
_ROWS_SEARCHED = 200
# Redshifts are hardly ever that high, and magnitudes hardly ever that low.
_LIKE_MAGNITUDES = 10.0


@dataclass(frozen=True)
class HeaderBlock:
    """The rows of headings, by index in the scan.

    Attributes:
        names: the row of names.
        last: the row of units below them, or the names again.
        rows: texts by column of groups, names and units, as far as there are such rows; the text
            of a merged cell stands in each of its columns.
    """

    names: int
    last: int
    rows: tuple[Mapping[int, str], ...]


class SheetReading:
    """One sheet as a log.

    Attributes:
        sheet, scan, tables: what it was read from.
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
        self._merged = _merged(scan)
        self.blocked = [*self._merged, *_arrays(scan), *pivots]
        self._rules = rules
        self._known: dict[int, ColumnCells] = {}
        self.rows = range(0)
        self._take_header(self._find_header(header_row))

    @property
    def header_index(self) -> int | None:
        """Index of the row of names in the scan, None where none was found."""
        return None if self.header is None else self.header.names

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

    def texts_of(self, column: int) -> dict[int, str]:
        """Return the texts of a column's cells, by position in the rows of the log."""
        texts = {}
        for position, index in enumerate(self.rows):
            for cell in self.scan.cells(index):
                if cell.column == column and not self.scan.is_empty(cell):
                    text = shown_text(self.scan, cell, self._rules).text
                    if text.strip():
                        texts[position] = text
        return texts

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
        above = [i for i, why in cells.reasons.items() if i < first and why.startswith(NOT_READ)]
        if above:
            self._take_header(self._block(max(above)))
        else:
            self.rows = range(first, len(self.scan))

    def lacking_units(self) -> list[str]:
        """Return sentences about headings that name a measure but lack the unit it needs."""
        sentences = []
        for column, text in self.texts.items():
            measure = None if column in self.headings else lacks_unit(text)
            if measure is not None:
                sentences.append(
                    f"heading {text!r} ({column_letters(column)}{self.header_row}) has no unit and"
                    f" is left alone; write '{text.strip()} [{measure.unit}]'"
                )
        return sentences

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
            return self._block(index)
        best, most = None, 0
        for index in range(min(len(self.scan), _ROWS_SEARCHED)):
            found = sum(_likeness(text) for text in self._row_texts(index).values())
            if found > most:
                best, most = index, found
        return None if best is None else self._block(best)

    def _block(self, names: int) -> HeaderBlock:
        """Return the header rows around a row of names."""
        texts = self._row_texts(names)
        rows: list[Mapping[int, str]] = [texts]
        last = names
        numbers = self.scan.numbers
        if names + 1 < len(self.scan) and numbers[names + 1] == numbers[names] + 1:
            below = self._row_texts(names + 1)
            if below and holds_units(below):
                rows.append(below)
                last = names + 1
        if names > 0 and numbers[names - 1] == numbers[names] - 1:
            above = self._groups(names - 1, texts)
            if above:
                rows.insert(0, above)
        return HeaderBlock(names, last, tuple(rows))

    def _groups(self, index: int, names: Mapping[int, str]) -> dict[int, str]:
        """Return the texts of a row of groups over their columns; titles are no groups."""
        row = self.scan.numbers[index]
        spread: dict[int, str] = {}
        for column, text in self._row_texts(index).items():
            area = next((one for one in self._merged if one.contains(row, column)), None)
            reach = range(column, column + 1) if area is None else _columns(area)
            upright = area is not None and area.height > 1
            if upright or 1 < len(reach) < max(len(names), 3):
                spread.update(dict.fromkeys(reach, text))
        return spread

    def _take_header(self, header: HeaderBlock | None) -> None:
        self.header = header
        self._known.clear()
        self.meanings: dict[int, Meaning] = {}
        self.headings: dict[int, Heading] = {}
        self.texts: dict[int, str] = {}
        if header is None:
            return
        names = self._row_texts(header.names)
        above = header.rows[0] if header.rows[0] is not names else {}
        self.texts = {c: t for c, t in above.items() if c not in names} | names
        self._give_meanings(read_headings(header.rows))
        self._limit_rows()
        magnitudes = [c for c in self.headings if self._looks_like_magnitudes(c)]
        if magnitudes:
            self._known.clear()
            self._give_meanings(read_headings(header.rows, magnitudes))

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
        table = next((t for t in map(self.table_of, columns) if t is not None), None)
        last = table.data.last_row if table is not None else None
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


def _likeness(text: str) -> int:
    """Return how much a text speaks for a row of headings."""
    if meaning_of(text).role is Role.VALUE:
        return 2
    return 1 if lacks_unit(text) is not None else 0


def _columns(area: Range) -> range:
    return range(area.first_column, area.last_column + 1)


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
