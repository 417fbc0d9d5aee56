"""R6 to R10, R14 to R16 and R30: rows, cells, columns and what the cells hold."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from itertools import pairwise

from tests.workbook_tools.rules.package import (
    Package,
    Problem,
    child,
    children,
    descendants,
    text_of,
    words,
)
from tests.workbook_tools.rules.sheet_view import (
    LAST_COLUMN,
    LAST_ROW,
    Cell,
    Row,
    SheetView,
    box,
    position,
    worksheets,
)

_NUMBER = re.compile(r"\s*[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?\s*$")
_DATE = re.compile(r"\d{4}-\d\d-\d\d(T\d\d:\d\d(:\d\d(\.\d+)?)?Z?)?$|\d\d:\d\d(:\d\d(\.\d+)?)?$")
_NOT_A_NUMBER = re.compile(r"\s*[+-]?(nan|inf|infinity|\d\.#(inf|ind|qnan|snan).*)\s*$", re.I)
_ERRORS = words(
    "#DIV/0! #N/A #NAME? #NULL! #NUM! #REF! #VALUE! #GETTING_DATA "
    "#SPILL! #CALC! #FIELD! #BLOCKED! #UNKNOWN! #BUSY! #CONNECT! #EXTERNAL! #PYTHON!"
)
LONGEST_TEXT = 32_767


def r6_rows_ascend(package: Package) -> Iterator[Problem]:
    """Row numbers ascend, each once, 1 to 1048576."""
    for part, view in worksheets(package).items():
        for before, after in pairwise(view.rows):
            if after.number <= before.number:
                what = f"row {after.number} stands after row {before.number}"
                yield Problem("R6", part, what)
        for row in view.rows:
            if not 1 <= row.number <= LAST_ROW:
                yield Problem("R6", part, f"there is no row {row.number}")


def r7_cells_ascend(package: Package) -> Iterator[Problem]:
    """Cells ascend in their row, each once, up to XFD, and name the row they are in."""
    for part, view in worksheets(package).items():
        for row in view.rows:
            yield from (Problem("R7", part, what) for what in _cell_order(row))


def _cell_order(row: Row) -> Iterator[str]:
    for before, after in pairwise(row.cells):
        if after.column <= before.column:
            yield f"cell {after.name} stands after {before.name}"
    for cell in row.cells:
        written = cell.element.get("r")
        if written is not None and position(written) is None:
            yield f"{written!r} in row {row.number} is no cell address"
        if cell.row != row.number:
            yield f"cell {cell.name} stands in row {row.number}"
        if not 1 <= cell.column <= LAST_COLUMN:
            yield f"there is no column {cell.column}"


def r8_extents(package: Package) -> Iterator[Problem]:
    """The sheet's dimension and the rows' spans cover the cells."""
    for part, view in worksheets(package).items():
        dimension = child(view.root, "dimension")
        extent = box(dimension.get("ref", "")) if dimension is not None else None
        for row in view.rows:
            spans = [span.split(":") for span in row.element.get("spans", "").split()]
            for cell in row.cells:
                if extent and not extent.holds(cell.row, cell.column):
                    yield Problem("R8", part, f"cell {cell.name} is outside the dimension")
                if spans and not any(int(a) <= cell.column <= int(b) for a, b in spans):
                    yield Problem("R8", part, f"cell {cell.name} is outside its row's spans")


def r9_column_elements(package: Package) -> Iterator[Problem]:
    """`<col>` ranges ascend without overlap, 1 to 16384, with widths 0 to 255."""
    for part, view in worksheets(package).items():
        last = 0
        for item in descendants(view.root, "col"):
            first, end = int(item.get("min", 0)), int(item.get("max", 0))
            if not last < first <= end <= LAST_COLUMN:
                yield Problem("R9", part, f"<col> {first} to {end} overlaps or is out of order")
            if not 0 <= float(item.get("width", 0)) <= 255:
                yield Problem("R9", part, f"<col> {first} to {end} has an impossible width")
            last = max(last, end)


def r10_style_indexes(package: Package) -> Iterator[Problem]:
    """The style of every cell, row and column exists."""
    styles = package.workbook_tree("styles")
    number = len(children(child(styles, "cellXfs"), "xf")) or 1
    for part, view in worksheets(package).items():
        for item in descendants(view.root, "c", "row", "col"):
            style = item.get("style" if item.tag.endswith("}col") else "s", "0")
            if not style.isdecimal() or int(style) >= number:
                place = item.get("r") or item.get("min")
                yield Problem("R10", part, f"style {style} at {place} does not exist")


def _cells(package: Package) -> Iterator[tuple[str, SheetView, Cell]]:
    for part, view in worksheets(package).items():
        for cell in view.cells:
            yield part, view, cell


def r14_string_indexes(package: Package) -> Iterator[Problem]:
    """Every shared string that a cell names exists."""
    number = len(package.strings)
    for part, _, cell in _cells(package):
        if cell.kind == "s" and cell.value is not None:
            text = cell.value.strip()
            if not text.isdecimal() or int(text) >= number:
                yield Problem("R14", part, f"{cell.name} names string {text}, which does not exist")


def r15_values_fit_types(package: Package) -> Iterator[Problem]:
    """`<v>` is what the cell's `t` promises; inline strings have `<is>` and nothing else."""
    for part, _, cell in _cells(package):
        what = _misfit(cell)
        if what:
            yield Problem("R15", part, f"{cell.name}: {what}")


def _misfit(cell: Cell) -> str:
    value, inline = cell.value, child(cell.element, "is")
    if (cell.kind == "inlineStr") != (inline is not None):
        return "<is> and t='inlineStr' go together"
    if inline is not None and (value is not None or cell.formula is not None):
        return "an inline string has <is> only"
    if cell.kind not in ("n", "b", "e", "s", "str", "d", "inlineStr"):
        return f"there is no type {cell.kind!r}"
    if not value or cell.kind in ("s", "str", "inlineStr"):
        return ""
    if cell.kind == "n":
        good = bool(_NUMBER.match(value)) and math.isfinite(float(value))
    elif cell.kind == "b":
        good = value in ("0", "1")
    elif cell.kind == "e":
        good = value in _ERRORS
    else:
        good = bool(_DATE.match(value))
    return "" if good else f"{value!r} is no value of type {cell.kind!r}"


def r16_text_lengths(package: Package) -> Iterator[Problem]:
    """No text is longer than 32,767 UTF-16 units."""
    for index, text in enumerate(package.strings):
        if _units(text) > LONGEST_TEXT:
            yield Problem("R16", "shared strings", f"string {index} is too long")
    for part, _, cell in _cells(package):
        inline = child(cell.element, "is")
        text = text_of(inline) if inline is not None else cell.value or ""
        if _units(text) > LONGEST_TEXT:
            yield Problem("R16", part, f"the text of {cell.name} is too long")


def _units(text: str) -> int:
    return len(text) + sum(letter > "\uffff" for letter in text)


def r30_no_infinities(package: Package) -> Iterator[Problem]:
    """No number is written as NaN or infinity."""
    for part, _, cell in _cells(package):
        if cell.kind in ("n", "b", "e", "d") and _NOT_A_NUMBER.match(cell.value or ""):
            yield Problem("R30", part, f"{cell.name} holds {cell.value!r}")
