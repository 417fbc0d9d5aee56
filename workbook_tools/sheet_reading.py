"""What a sheet holds, read once: its header row, what headings mean, which rows are the log."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass

from workbook_tools.cell_address import Range, column_letters
from workbook_tools.column_meanings import Heading
from workbook_tools.errors import UsageError
from workbook_tools.headings import lacks_unit, read_heading
from workbook_tools.parts import Sheet
from workbook_tools.sheet_scan import SheetScan, attributes_of
from workbook_tools.tables import Table
from workbook_tools.typed_cells import NOT_READ, NUMBER, ColumnCells, read_columns, shown_text
from workbook_tools.written_values import range_in

# A header row stands near the top: above it are titles, contacts, remarks.
_ROWS_SEARCHED = 200


@dataclass(frozen=True)
class Context:
    """What the sheets of a workbook share: texts and the meaning of formats."""

    text_of: Callable[[int], str]
    is_date: Callable[[int], bool]


class SheetReading:
    """One sheet as a log.

    Attributes:
        sheet, scan, tables: what it was read from.
        blocked: rectangles into which nothing may be written: merged cells, array formulas and
            data tables, pivot tables.
        header_index: index of the header row in the scan, None where none was found.
        texts: text of each heading, by column.
        headings: what is recognised among them, by column.
        rows: indices of the rows below the header that belong to the log.
    """

    def __init__(
        self,
        sheet: Sheet,
        scan: SheetScan,
        tables: Sequence[Table],
        pivots: Sequence[Range],
        context: Context,
        header_row: int | None,
    ) -> None:
        """Read a sheet.

        Raises:
            UsageError: `header_row` is given and that row holds nothing.
        """
        self.sheet = sheet
        self.scan = scan
        self.tables = tables
        self.blocked = [*_merged(scan), *_arrays(scan), *pivots]
        self._context = context
        self._known: dict[int, ColumnCells] = {}
        self.rows = range(0)
        self.header_index, self.texts = self._find_header(header_row)
        self.headings: dict[int, Heading] = {}
        for column, text in self.texts.items():
            heading = read_heading(text)
            if heading is not None:
                self.headings[column] = heading
        self._limit_rows()

    @property
    def header_row(self) -> int | None:
        """Number of the header row, None where none was found."""
        return None if self.header_index is None else self.scan.numbers[self.header_index]

    def columns(self, wanted: Sequence[int]) -> list[ColumnCells]:
        """Return the cells of columns in the rows of the log, each read once."""
        unread = [column for column in wanted if column not in self._known]
        if unread:
            self._known |= read_columns(
                self.scan, unread, self.rows, self._context.text_of, self._context.is_date
            )
        return [self._known[column] for column in wanted]

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
        cells = read_columns(
            self.scan, [column], everything, self._context.text_of, self._context.is_date
        )[column]
        first = next((i for i in everything if cells.kinds[i] == NUMBER), None)
        if first is None:
            return
        above = [i for i, why in cells.reasons.items() if i < first and why.startswith(NOT_READ)]
        self.header_index = max(above) if above else None
        self.texts = self._row_texts(self.header_index) if self.header_index is not None else {}
        self.rows = range(first, len(self.scan))
        self._limit_rows()

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

    def _row_texts(self, index: int) -> dict[int, str]:
        texts = {}
        for cell in self.scan.cells(index):
            if cell.type in ("s", "inlineStr", "str") and not self.scan.is_empty(cell):
                text = shown_text(self.scan, cell, self._context.text_of)
                if text.strip():
                    texts[cell.column] = text
        return texts

    def _find_header(self, header_row: int | None) -> tuple[int | None, dict[int, str]]:
        if header_row is not None:
            index = next((i for i, n in enumerate(self.scan.numbers) if n == header_row), None)
            texts = self._row_texts(index) if index is not None else {}
            if not texts:
                raise UsageError(
                    f"row {header_row} of sheet {self.sheet.name!r} holds no headings; name the row"
                    " in which they stand with --header-row, and its sheet with --sheet"
                )
            return index, texts
        best, best_texts, most = None, dict[int, str](), 0
        for index in range(min(len(self.scan), _ROWS_SEARCHED)):
            texts = self._row_texts(index)
            found = sum(read_heading(text) is not None for text in texts.values())
            if found > most:
                best, best_texts, most = index, texts, found
        return best, best_texts

    def _limit_rows(self) -> None:
        """Set the rows of the log: those of the header's table, or all down to a table below."""
        if self.header_index is None:
            return
        start = self.header_index + 1
        header = self.scan.numbers[self.header_index]
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
