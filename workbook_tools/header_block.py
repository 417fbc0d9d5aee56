"""Where a sheet's headings stand: the row of names, the units below it, the groups above it."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass

from epochconv.typed_outcomes import Unread
from epochconv.typed_text import read_typed
from workbook_tools.cell_address import Range
from workbook_tools.column_meanings import Role
from workbook_tools.header_rows import holds_units
from workbook_tools.heading_units import is_like_a_unit, read_unit
from workbook_tools.heading_words import plain_line
from workbook_tools.headings import lacks_unit, meaning_of
from workbook_tools.sheet_scan import SheetScan

# A header row stands near the top: above it are titles, contacts, remarks.
_ROWS_SEARCHED = 200

RowTexts = Callable[[int], dict[int, str]]


@dataclass(frozen=True)
class HeaderBlock:
    """The rows of headings, by index in the scan.

    Attributes:
        names: the row of names.
        units: the row of units below it, None where there is none.
        rows: texts by column of groups, names and units, as far as there are such rows; the text
            of a merged cell stands in each of its columns.
        texts: what stands over each column: its name, or its group where it has no name.
    """

    names: int
    units: int | None
    rows: tuple[Mapping[int, str], ...]
    texts: Mapping[int, str]

    @property
    def last(self) -> int:
        """The lowest row of the block."""
        return self.names if self.units is None else self.units


class HeaderFinder:
    """Finds the header block of a sheet."""

    def __init__(self, scan: SheetScan, row_texts: RowTexts, merged: Sequence[Range]) -> None:
        """Prepare for a sheet.

        Args:
            row_texts: the texts of a row by column, given its index in the scan.
            merged: the merged cells.
        """
        self._scan = scan
        self._row_texts = row_texts
        self._merged = merged

    def find(self) -> HeaderBlock | None:
        """Return the block around the row that holds most headings, None where no row does."""
        best, most = None, 0
        for index in range(min(len(self._scan), _ROWS_SEARCHED)):
            found = sum(map(likeness, self._row_texts(index).values()))
            if found > most:
                best, most = index, found
        return None if best is None else self.at(best)

    def at(self, index: int) -> HeaderBlock:
        """Return the block to which a row of headings belongs."""
        names = self._row_of_names(index)
        texts = self._row_texts(names)
        rows: list[Mapping[int, str]] = [texts]
        units = names + 1 if self._follows(names) and self._holds_units(names + 1) else None
        if units is not None:
            rows.append(self._row_texts(units))
        above = self._groups(names - 1, texts) if names and self._follows(names - 1) else {}
        if above:
            rows.insert(0, above)
        return HeaderBlock(names, units, tuple(rows), above | texts)

    def _follows(self, index: int) -> bool:
        """Tell whether the row after that index is the very next one of the sheet."""
        numbers = self._scan.numbers
        return index + 1 < len(numbers) and numbers[index + 1] == numbers[index] + 1

    def _holds_units(self, index: int) -> bool:
        """Tell whether a row is one of units, and not the first of a log that holds some too."""
        texts = self._row_texts(index)
        if not texts or not holds_units(texts):
            return False
        starts_with_digit = any(text.strip()[0].isdigit() for text in texts.values())
        if starts_with_digit and not all(is_like_a_unit(plain_line(t)) for t in texts.values()):
            return False
        scan = self._scan
        numbers = (scan.value_text(cell) for cell in scan.cells(index) if cell.type == "n")
        # A pure number may have the unit 1.
        return all(number is None or number.strip() in ("", "1") for number in numbers)

    def _row_of_names(self, index: int) -> int:
        """Return the row of names where the row with most headings is that of groups above it."""
        if not self._follows(index):
            return index
        row, texts, below = (
            self._scan.numbers[index],
            self._row_texts(index),
            self._row_texts(index + 1),
        )
        if not below or self._holds_units(index + 1):
            return index
        areas = [a for a in map(self._area_in(row), texts) if a is not None]
        if any(area.last_row > row for area in areas):
            return index + 1
        wide = [area for area in areas if area.width > 1]
        return index + 1 if wide and all(_has_names(area, below) for area in wide) else index

    def _groups(self, index: int, names: Mapping[int, str]) -> dict[int, str]:
        """Return the texts of a row of groups over their columns; titles are no groups."""
        row = self._scan.numbers[index]
        texts = self._row_texts(index)
        area_of = self._area_in(row)
        areas = {column: area for column in texts if (area := area_of(column)) is not None}
        upright = [column for column, area in areas.items() if area.last_row > row]
        wide = [
            column
            for column, area in areas.items()
            if column not in upright and 1 < area.width < max(len(names), 3)
        ]
        if len(wide) == 1 and not upright and _is_title(wide[0], texts[wide[0]], names):
            return {}
        return {
            column: texts[first] for first in (*upright, *wide) for column in _columns(areas[first])
        }

    def _area_in(self, row: int) -> Callable[[int], Range | None]:
        """Return a look-up of the merged cells that hold the cell of a column in that row."""
        here = [area for area in self._merged if area.first_row <= row <= area.last_row]
        return lambda column: next((a for a in here if a.contains(row, column)), None)


def likeness(text: str) -> int:
    """Return how much a text speaks for a row of headings."""
    if meaning_of(text).role is Role.VALUE:
        return 2
    return 1 if lacks_unit(text) is not None else 0


def _has_names(area: Range, below: Mapping[int, str]) -> bool:
    """Tell whether names stand below a group, and not the first cells of a log."""
    under = [below[column] for column in _columns(area) if column in below]
    return bool(under) and not any(
        any(map(str.isdigit, text)) or not isinstance(read_typed(text), Unread) for text in under
    )


def _is_title(column: int, text: str, names: Mapping[int, str]) -> bool:
    """Tell whether the only merged cell above the names is a title of the log."""
    if column > min(names, default=column):
        return False
    return likeness(text) == 0 and read_unit(plain_line(text)) is None


def _columns(area: Range) -> range:
    return range(area.first_column, area.last_column + 1)
