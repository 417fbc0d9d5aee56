"""The cells behind the references of a formula: through names, tables and runs of sheets."""

from __future__ import annotations

from collections.abc import Iterable
from typing import NamedTuple

from workbook_tools.cell_address import MAX_COLUMN, MAX_ROW, CellAddress, Range
from workbook_tools.cell_set import CellSet
from workbook_tools.formula_references import Area, NameUse, TableUse, references
from workbook_tools.parts import DefinedName, SheetKind, WorkbookMap, table_parts
from workbook_tools.relations import Package
from workbook_tools.tables import Table, read_table


class Targets(NamedTuple):
    """The cells that a formula reads, as (sheet, cells), and whether it may read others too."""

    areas: tuple[tuple[str, Range], ...]
    uncertain: bool

    def meets(self, cells: CellSet) -> bool:
        """Tell whether the formula reads one of the cells, or may do so."""
        return self.uncertain or any(cells.meets(sheet, area) for sheet, area in self.areas)


_NONE = Targets((), False)
_UNKNOWN = Targets((), True)


class TargetFinder:
    """Knows the sheets, names and tables of a workbook."""

    def __init__(self, package: Package, workbook: WorkbookMap) -> None:
        """Read the tables of a workbook.

        Raises:
            Refusal: a table cannot be read.
        """
        self._order = [sheet.name for sheet in workbook.sheets]
        self._places = {name.casefold(): place for place, name in enumerate(self._order)}
        self._names = {(_key(name.sheet), name.name.casefold()): name for name in workbook.names}
        self._known: dict[DefinedName, Targets] = {}
        self._tables: dict[str, tuple[str, Table]] = {}
        for sheet in workbook.sheets:
            if sheet.kind is SheetKind.WORKSHEET:
                for part in table_parts(package, sheet):
                    table = read_table(package.read(part), part)
                    self._tables[table.name.casefold()] = sheet.name, table

    def of_formula(
        self, text: str, sheet: str | None, origin: CellAddress, copied_to: Range
    ) -> Targets:
        """Return what a formula reads.

        Args:
            text: the formula.
            sheet: the sheet it stands on; None where it stands on none.
            origin: the cell whose view its references give.
            copied_to: all cells that have it, relative references moved along.
        """
        found = references(text)
        shift = Range(
            copied_to.first_row - origin.row,
            copied_to.first_column - origin.column,
            copied_to.last_row - origin.row,
            copied_to.last_column - origin.column,
        )
        pieces = [self._area(area, sheet, shift) for area in found.areas]
        pieces += [self._use_of_name(use, sheet) for use in found.names]
        pieces += [self._use_of_table(use) for use in found.tables]
        return _together(pieces, found.uncertain)

    def of_name(self, name: DefinedName) -> Targets:
        """Return what a name reads."""
        if name not in self._known:
            self._known[name] = _NONE  # while it is looked up: a name that leads to itself
            corner = CellAddress(1, 1)
            targets = self.of_formula(name.formula, name.sheet, corner, Range(1, 1, 1, 1))
            # relative references of a name depend on the cell that uses it
            moving = any(any(area.moves) for area in references(name.formula).areas)
            self._known[name] = targets._replace(uncertain=targets.uncertain or moving)
        return self._known[name]

    def _area(self, area: Area, sheet: str | None, shift: Range) -> Targets:
        first, last = area.first_sheet or sheet, area.last_sheet or sheet
        if first is None or last is None:
            return _UNKNOWN
        places = [self._places.get(name.casefold()) for name in (first, last)]
        if places[0] is None or places[1] is None:
            # a single sheet that is gone gives an error; of a run, some sheets may be left
            return _NONE if first == last else _UNKNOWN
        cells = _moved(area, shift)
        begin, end = sorted((places[0], places[1]))
        return Targets(tuple((name, cells) for name in self._order[begin : end + 1]), False)

    def _use_of_name(self, use: NameUse, sheet: str | None) -> Targets:
        key = use.name.casefold()
        for scope in (_key(use.sheet or sheet), ""):
            name = self._names.get((scope, key))
            if name is not None:
                return self.of_name(name)
        return self._use_of_table(TableUse(use.name, ())) if key in self._tables else _NONE

    def _use_of_table(self, use: TableUse) -> Targets:
        sheet, table = self._tables.get(use.table.casefold(), ("", None))
        if table is None:
            return _UNKNOWN
        order = [column.casefold() for column in table.columns]
        wanted = [column.casefold() for column in use.columns]
        if not wanted or any(column not in order for column in wanted):
            # a whole table takes in the columns that it will have grown by
            return Targets(((sheet, table.ref._replace(last_column=MAX_COLUMN)),), False)
        places = sorted(table.ref.first_column + order.index(column) for column in wanted)
        cells = table.ref._replace(first_column=places[0], last_column=places[-1])
        return Targets(((sheet, cells),), False)


def _key(sheet: str | None) -> str:
    return (sheet or "").casefold()


def _together(pieces: Iterable[Targets], uncertain: bool) -> Targets:
    areas: list[tuple[str, Range]] = []
    for piece in pieces:
        areas += piece.areas
        uncertain |= piece.uncertain
    return Targets(tuple(areas), uncertain)


def _moved(area: Area, shift: Range) -> Range:
    """Return all cells that the copies of a reference reach together."""
    top, left, bottom, right = area.cells
    top_moves, left_moves, bottom_moves, right_moves = area.moves
    up, west, down, east = shift
    return Range(
        max(min(top + up * top_moves, bottom + up * bottom_moves), 1),
        max(min(left + west * left_moves, right + west * right_moves), 1),
        min(max(top + down * top_moves, bottom + down * bottom_moves), MAX_ROW),
        min(max(left + east * left_moves, right + east * right_moves), MAX_COLUMN),
    )
