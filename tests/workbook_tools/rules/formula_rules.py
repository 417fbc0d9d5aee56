"""R17 to R19 and R26: formula text, shared formulas, arrays and the calculation chain."""

from __future__ import annotations

import re
from collections.abc import Iterator

from lxml import etree
from openpyxl.utils import FORMULAE

from tests.workbook_tools.rules.package import Package, Problem, children, descendants, local, words
from tests.workbook_tools.rules.sheet_view import Box, SheetView, box, position, worksheets

LONGEST_FORMULA = 8_192
_FORMULA_ELEMENTS = words(
    "f formula formula1 formula2 definedName calculatedColumnFormula totalsRowFormula"
)
_PREFIXES = ("_XLFN.", "_XLL.", "_XLUDF.", "_XLPM.")
_CALL = re.compile(r"([A-Za-z_\\][\w.\\]*)\s*\($")


def r17_formula_text(package: Package) -> Iterator[Problem]:
    """Formulas: at most 8192 characters, no '=' in front, balanced, only known functions."""
    names = {n.get("name", "").upper() for n in descendants(package.workbook, "definedName")}
    tables = [name for part in worksheets(package) for name in package.related(part, "table")]
    for part in [package.workbook_part, *worksheets(package), *tables]:
        root = package.tree(part)
        for element in root.iter(etree.Element) if root is not None else ():
            if local(element) in _FORMULA_ELEMENTS and element.text:
                for what in formula_faults(element.text, names):
                    yield Problem("R17", part, f"{_place(element)}: {what}")


def _place(element: etree._Element) -> str:
    parent = element.getparent()
    name = element.get("name") or parent.get("r") or parent.get("sqref") or parent.get("name")
    return f"<{local(element)}> of {name or local(parent)}"


def formula_faults(text: str, names: set[str]) -> Iterator[str]:
    """What is wrong with a formula as it stands in the file."""
    if len(text) > LONGEST_FORMULA:
        yield "the formula is too long"
    if text.lstrip().startswith("="):
        yield "the formula starts with '='"
    bare, balanced = _without_quotes(text)
    if not balanced:
        yield "quotes, brackets or parentheses do not balance"
    for index, letter in enumerate(bare):
        call = _CALL.search(bare[: index + 1]) if letter == "(" else None
        name = call[1].upper() if call else ""
        if name and not (name in FORMULAE or name in names or name.startswith(_PREFIXES)):
            yield f"there is no function {name} in files"


def _without_quotes(text: str) -> tuple[str, bool]:
    """The formula without strings, quoted sheet names and [..]; and whether all balances."""
    bare: list[str] = []
    closers: list[str] = []
    quote, depth, index = "", 0, 0
    while index < len(text):
        letter = text[index]
        index += 1
        if quote:
            quote = "" if letter == quote else quote  # a doubled quote closes and opens again
        elif depth and letter == "'":
            index += 1  # inside [..] an apostrophe escapes the next character
        elif letter in "[]":
            depth += 1 if letter == "[" else -1
        elif not depth and letter in "\"'":
            quote = letter
        elif not depth:
            bare.append(letter)
            if letter in "({":
                closers.append(")" if letter == "(" else "}")
            elif letter in ")}" and (not closers or closers.pop() != letter):
                return "".join(bare), False
    return "".join(bare), not quote and not depth and not closers


def r18_shared_formulas(package: Package) -> Iterator[Problem]:
    """Each shared index has one master, whose range holds all its children."""
    for part, view in worksheets(package).items():
        masters: dict[str, Box | None] = {}
        shared = [(c, c.formula) for c in view.cells if c.formula is not None]
        shared = [(c, f) for c, f in shared if f.get("t") == "shared"]
        for cell, formula in shared:
            if formula.get("ref"):
                index = formula.get("si", "")
                if index in masters:
                    yield Problem("R18", part, f"{cell.name}: second master of index {index}")
                masters[index] = box(formula.get("ref", ""))
        for cell, formula in shared:
            extent = masters.get(formula.get("si", ""))
            if extent is None:
                yield Problem("R18", part, f"{cell.name} has no master")
            elif not extent.holds(cell.row, cell.column):
                yield Problem("R18", part, f"{cell.name} is outside its master's range")


def r19_nothing_new_inside(before: Package, after: Package) -> Iterator[Problem]:
    """No cell was filled inside an array, its spill, a data table or a merged range."""
    old_views = worksheets(before)
    for part, view in worksheets(after).items():
        old = old_views.get(part)
        if old is None:
            continue
        closed = old.formula_boxes("array", "dataTable")
        merges = old.merges()
        for cell in view.cells:
            if cell.is_empty or not _was_empty(old, cell.row, cell.column):
                continue
            if any(extent.holds(cell.row, cell.column) for extent in closed):
                yield Problem("R19", part, f"{cell.name} is new inside an array or data table")
            for merge in merges:
                corner = (merge.top, merge.left) == (cell.row, cell.column)
                if merge.holds(cell.row, cell.column) and not corner:
                    yield Problem("R19", part, f"{cell.name} is new inside a merged range")


def _was_empty(view: SheetView, row: int, column: int) -> bool:
    cell = view.by_position.get((row, column))
    return cell is None or cell.is_empty


def r26_calculation_chain(package: Package) -> Iterator[Problem]:
    """Each entry of the chain is a formula, or in an array, of a sheet that exists."""
    parts = {sheet.sheet_id: sheet.part for sheet in package.sheets}
    views = worksheets(package)
    arrays = {part: view.formula_boxes("array") for part, view in views.items()}
    sheet_id = "0"
    for entry in children(package.workbook_tree("calcChain"), "c"):
        sheet_id = entry.get("i", sheet_id)
        name = entry.get("r", "")
        part = parts.get(sheet_id, "")
        place = position(name)
        if part and part not in views:
            continue  # a macro sheet
        cell = views[part].by_position.get(place) if part and place else None
        if cell is not None and cell.formula is not None:
            continue
        if not place or not any(extent.holds(*place) for extent in arrays.get(part, ())):
            yield Problem("R26", "calcChain", f"{name} of sheet id {sheet_id} has no formula")
