"""A workbook opened for reading: its parts, its map, and its sheets as logs."""

from __future__ import annotations

import functools
from collections.abc import Callable
from pathlib import Path

from workbook_tools.archive import Archive
from workbook_tools.cell_address import Range
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.parts import Sheet, SheetKind, SheetState, read_workbook, table_parts
from workbook_tools.relations import Named, relations_of
from workbook_tools.request import Request
from workbook_tools.shared_strings import SharedStrings, TypedText
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.styles import StyleSheet
from workbook_tools.tables import Table, read_table
from workbook_tools.typed_cells import CellRules
from workbook_tools.written_values import range_in
from workbook_tools.xml_offsets import parse


class OpenWorkbook:
    """One workbook.

    Attributes:
        archive: the file.
        map: where everything is.
        styles: the style sheet, None where the workbook has none.
    """

    def __init__(self, path: Path, *, keeps_readings: bool = False) -> None:
        """Open a workbook.

        Args:
            keeps_readings: whether a sheet that is asked for again is not read again.
        Raises:
            Refusal: it is none, or one that cannot be filled without harm.
        """
        self.archive = Archive.open(path)
        self.label = self.archive.label
        self._large: dict[str, bytes] = {}
        self._readings: dict[str, SheetReading] | None = {} if keeps_readings else None
        self.map = read_workbook(self.archive)
        part = self.map.styles_part
        self.styles = None if part is None else StyleSheet(self.archive.read(part), part)

    def find(self, name: str) -> Named | None:
        """Return the member of that name, whatever its case."""
        return self.archive.find(name)

    def read(self, name: str) -> bytes:
        """Return the content of a part; that of a sheet which is still held is not read again."""
        held = self._large.get(name)
        return self.archive.read(name) if held is None else held

    def hold(self, name: str, xml: bytes) -> None:
        """Keep the content of a part that will be needed again."""
        self._large[name] = xml

    def sheets(self, name: str | None) -> list[Sheet]:
        """Return the sheets that may be filled: the visible worksheets, or the one of that name.

        Raises:
            UsageError: there is no sheet of that name.
            Refusal: the sheet of that name is no worksheet.
        """
        if name is None:
            return [
                sheet
                for sheet in self.map.sheets
                if sheet.kind is SheetKind.WORKSHEET and sheet.state is SheetState.VISIBLE
            ]
        named = [sheet for sheet in self.map.sheets if sheet.name.casefold() == name.casefold()]
        if not named:
            listed = ", ".join(repr(sheet.name) for sheet in self.map.sheets)
            raise UsageError(f"{self.label} has no sheet {name!r}; it has {listed}")
        if named[0].kind is not SheetKind.WORKSHEET:
            raise Refusal(f"sheet {name!r} is a {named[0].kind} and holds no cells to fill")
        return named

    def reading(self, sheet: Sheet, request: Request) -> SheetReading:
        """Read one sheet as a log.

        Raises:
            Refusal: the sheet or one of its tables cannot be read.
            UsageError: the header row that is given holds nothing.
        """
        if self._readings is not None and sheet.part in self._readings:
            return self._readings[sheet.part]
        scan = SheetScan(self.archive.read(sheet.part), sheet.part)
        rules = CellRules(
            self._text_of,
            self._style_test(StyleSheet.is_date),
            self._style_test(StyleSheet.is_percent),
            self._style_test(StyleSheet.is_struck),
            decimal_comma=request.decimal_comma,
            brackets_are_notes=request.brackets_are_notes,
            # As programs write them that keep fewer digits: 99.99 may stand as 99.98999999999999.
            missing=frozenset(float(f"{n:.{d}g}") for n in request.missing for d in (15, 16, 17)),
        )
        reading = SheetReading(
            sheet, scan, self._tables(sheet), self._pivots(sheet), rules, request.header_row
        )
        if self._readings is not None:
            self._readings[sheet.part] = reading
        return reading

    def is_protected(self, reading: SheetReading) -> bool:
        """Tell whether a sheet is protected against changes."""
        protection = reading.scan.outline.find("sheetProtection")
        return protection is not None and protection.flag("sheet")

    @functools.cached_property
    def _strings(self) -> SharedStrings | None:
        part = self.map.shared_strings_part
        return None if part is None else SharedStrings(self.archive.read(part), part)

    def _text_of(self, number: int) -> TypedText:
        strings = self._strings
        if strings is None:
            raise Refusal(
                f"{self.label}: a cell shows text number {number}, but the workbook has no list of"
                " texts; open it in its own program, let it repair the file and save it again"
            )
        return strings[number]

    def _style_test(self, test: Callable[[StyleSheet, int], bool]) -> Callable[[int], bool]:
        styles = self.styles
        if styles is None:
            return lambda style: False
        return functools.cache(lambda style: test(styles, style))

    def _tables(self, sheet: Sheet) -> list[Table]:
        return [
            read_table(self.archive.read(part), part) for part in table_parts(self.archive, sheet)
        ]

    def _pivots(self, sheet: Sheet) -> list[Range]:
        """Return the rectangles of pivot tables, which their program rewrites at will."""
        ranges = []
        for relation in relations_of(self.archive, sheet.part):
            if relation.kind == "pivotTable" and relation.part is not None:
                root = parse(self.archive.read(relation.part), relation.part)
                location = root.find("location")
                if location is not None and "ref" in location.attributes:
                    ranges.append(range_in(location.attributes["ref"], relation.part))
        return ranges
