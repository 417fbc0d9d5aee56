"""A worksheet as the checker sees it: rows, cells and ranges, read with lxml."""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import lru_cache
from typing import NamedTuple

from lxml import etree

from tests.workbook_tools.rules.package import Package, child, children, descendants, text_of

LAST_ROW, LAST_COLUMN = 1_048_576, 16_384
_ADDRESS = re.compile(r"\$?([A-Za-z]{1,3})\$?([0-9]{1,7})$")


class Box(NamedTuple):
    """A range of cells, ends included, 1-based."""

    top: int
    left: int
    bottom: int
    right: int

    def holds(self, row: int, column: int) -> bool:
        """Whether the cell is inside."""
        return self.top <= row <= self.bottom and self.left <= column <= self.right

    def meets(self, other: Box) -> bool:
        """Whether the two have a cell in common."""
        return (
            self.top <= other.bottom
            and other.top <= self.bottom
            and self.left <= other.right
            and other.left <= self.right
        )


class Cell(NamedTuple):
    """One `<c>`; row and column as written, or counted where `r` is missing."""

    row: int
    column: int
    element: etree._Element

    @property
    def name(self) -> str:
        """A1 form."""
        return letters(self.column) + str(self.row)

    @property
    def kind(self) -> str:
        """The `t` attribute or its default."""
        return self.element.get("t", "n")

    @property
    def value(self) -> str | None:
        """Text of `<v>`; None where there is no `<v>`."""
        item = child(self.element, "v")
        return None if item is None else item.text or ""

    @property
    def formula(self) -> etree._Element | None:
        """The `<f>`."""
        return child(self.element, "f")

    @property
    def is_empty(self) -> bool:
        """Whether nothing is shown: no formula, no text, no `<v>` with something in it."""
        inline = child(self.element, "is")
        return self.formula is None and inline is None and not self.value


class Row(NamedTuple):
    """One `<row>` with its cells in file order."""

    number: int
    element: etree._Element
    cells: list[Cell]


def letters(column: int) -> str:
    """Column letters of a 1-based number."""
    text = ""
    while column:
        column, rest = divmod(column - 1, 26)
        text = chr(65 + rest) + text
    return text


def position(address: str) -> tuple[int, int] | None:
    """(row, column) of an A1 address, else None."""
    match = _ADDRESS.match(address)
    if not match:
        return None
    column = 0
    for letter in match[1].upper():
        column = column * 26 + ord(letter) - 64
    return int(match[2]), column


def box(reference: str) -> Box | None:
    """Range of `A1` or `A1:B2`, else None."""
    first, _, last = reference.partition(":")
    start, end = position(first), position(last or first)
    if not start or not end:
        return None
    return Box(min(start[0], end[0]), min(start[1], end[1]), *map(max, start, end))


def boxes(references: Iterable[str | None]) -> list[Box]:
    """Those of the references that are ranges."""
    return [found for text in references if text and (found := box(text))]


class SheetView:
    """Rows and cells of one worksheet part."""

    def __init__(self, root: etree._Element) -> None:
        self.root = root
        self.rows: list[Row] = []
        number = 0
        for element in children(child(root, "sheetData"), "row"):
            written = element.get("r", "")
            number = int(written) if written.isdecimal() else number + 1
            self.rows.append(Row(number, element, list(_cells(element, number))))
        self.cells = [cell for row in self.rows for cell in row.cells]
        self.by_position = {(cell.row, cell.column): cell for cell in self.cells}

    def formula_boxes(self, *kinds: str) -> list[Box]:
        """Ranges of formulas of these kinds (array, dataTable, shared)."""
        found = (c.formula for c in self.cells)
        return boxes(f.get("ref") for f in found if f is not None and f.get("t") in kinds)

    def merges(self) -> list[Box]:
        """Merged ranges."""
        return boxes(m.get("ref") for m in descendants(child(self.root, "mergeCells"), "mergeCell"))

    def text(self, package: Package, row: int, column: int) -> str | None:
        """Text of a string cell; None for no cell, a number or an error."""
        cell = self.by_position.get((row, column))
        if cell is None:
            return None
        if cell.kind == "inlineStr":
            inline = child(cell.element, "is")
            return None if inline is None else text_of(inline)
        if cell.kind == "s" and (cell.value or "").isdecimal():
            index = int(cell.value or 0)
            return package.strings[index] if index < len(package.strings) else None
        return cell.value if cell.kind == "str" else None


def _cells(row: etree._Element, number: int) -> Iterable[Cell]:
    column = 0
    for element in children(row, "c"):
        place = position(element.get("r", ""))
        column = place[1] if place else column + 1
        yield Cell(place[0] if place else number, column, element)


@lru_cache(maxsize=4)
def worksheets(package: Package) -> dict[str, SheetView]:
    """Views of all worksheet parts, by part name."""
    found = {}
    for sheet in package.sheets:
        root = package.tree(sheet.part) if sheet.kind == "worksheet" else None
        if root is not None:
            found[sheet.part] = SheetView(root)
    return found
