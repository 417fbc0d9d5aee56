"""R20 to R25: merged ranges and tables."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator
from itertools import combinations
from typing import NamedTuple

from lxml import etree

from tests.workbook_tools.rules.package import (
    Package,
    Problem,
    child,
    children,
    descendants,
    relation_id,
)
from tests.workbook_tools.rules.sheet_view import Box, SheetView, box, letters, worksheets

_ESCAPED = re.compile("_x([0-9A-Fa-f]{4})_")


class Table(NamedTuple):
    """One table part with the sheet that holds it."""

    part: str
    sheet_part: str
    root: etree._Element
    extent: Box
    columns: list[etree._Element]
    header_rows: int
    totals_rows: int


def tables(package: Package) -> Iterator[Table]:
    """All tables of all worksheets."""
    for sheet_part in worksheets(package):
        for part in package.related(sheet_part, "table"):
            root = package.tree(part)
            extent = box(root.get("ref", "")) if root is not None else None
            if extent is not None:
                columns = children(child(root, "tableColumns"), "tableColumn")
                header = int(root.get("headerRowCount", 1))
                totals = int(root.get("totalsRowCount", 0))
                yield Table(part, sheet_part, root, extent, columns, header, totals)


def r20_merges(package: Package) -> Iterator[Problem]:
    """Merged ranges do not meet each other or a table."""
    extents = [(table.sheet_part, table.extent) for table in tables(package)]
    for part, view in worksheets(package).items():
        merges = view.merges()
        ordered = sorted(merges)
        for index, first in enumerate(ordered):
            for second in ordered[index + 1 :]:
                if second.top > first.bottom:
                    break
                if first.meets(second):
                    yield Problem("R20", part, f"merged ranges meet at {_corner(second)}")
        for sheet_part, extent in extents:
            if sheet_part == part and any(merge.meets(extent) for merge in merges):
                yield Problem("R20", part, "a merged range meets a table")


def _corner(extent: Box) -> str:
    return f"{letters(extent.left)}{extent.top}"


def r21_table_columns(package: Package) -> Iterator[Problem]:
    """Columns fill the table's width; headers are strings equal to names; names, ids unique."""
    views = worksheets(package)
    for table in tables(package):
        width = table.extent.right - table.extent.left + 1
        if width != len(table.columns):
            yield Problem("R21", table.part, "its range is not as wide as its columns are many")
        names = [column.get("name", "") for column in table.columns]
        ids = [column.get("id", "") for column in table.columns]
        for name, count in Counter(name.casefold() for name in names).items():
            if count > 1 or not name or len(name) > 255:
                yield Problem("R21", table.part, f"column name {name!r} is not unique or no name")
        for number, count in Counter(ids).items():
            if count > 1 or not number.isdecimal() or number == "0":
                yield Problem("R21", table.part, f"column id {number!r} is not unique or no id")
        if table.header_rows:
            for offset, name in enumerate(names):
                column = table.extent.left + offset
                shown = views[table.sheet_part].text(package, table.extent.top, column)
                if shown is None or _lines(shown) != _lines(_unescaped(name)):
                    what = f"header {letters(column)}{table.extent.top} is not the text {name!r}"
                    yield Problem("R21", table.part, what)


def _unescaped(name: str) -> str:
    return _ESCAPED.sub(lambda match: chr(int(match[1], 16)), name)


def _lines(text: str) -> str:
    return _unescaped(text).replace("\r\n", "\n")


def r22_table_names(package: Package) -> Iterator[Problem]:
    """Table ids and display names are unique in the workbook, also among defined names."""
    found = list(tables(package))
    defined = Counter(
        name.get("name", "").casefold()
        for name in descendants(package.workbook, "definedName")
        if name.get("localSheetId") is None
    )
    for key in ("id", "displayName", "name"):
        counts = Counter(table.root.get(key, "").casefold() for table in found)
        for table in found:
            value = table.root.get(key, "")
            other = defined[value.casefold()] if key == "displayName" else 0
            if key != "name" and not value:
                yield Problem("R22", table.part, f"has no {key}")
            elif counts[value.casefold()] + other > 1 and value:
                yield Problem("R22", table.part, f"{key} {value!r} is not unique")


def r23_table_filters(package: Package) -> Iterator[Problem]:
    """A table's filter is its range without totals; a table without header has none."""
    for table in tables(package):
        item = child(table.root, "autoFilter")
        if item is None:
            continue
        expected = table.extent._replace(bottom=table.extent.bottom - table.totals_rows)
        if not table.header_rows:
            yield Problem("R23", table.part, "has a filter but no header row")
        elif box(item.get("ref", "")) != expected:
            yield Problem("R23", table.part, "its filter is not its range without totals")


def r24_table_totals(package: Package) -> Iterator[Problem]:
    """Each cell of a totals row is what its column promises: a label, a formula or nothing."""
    views = worksheets(package)
    for table in tables(package):
        for offset, column in enumerate(table.columns if table.totals_rows else ()):
            place = (table.extent.bottom, table.extent.left + offset)
            what = _totals_fault(package, views[table.sheet_part], place, column)
            if what:
                cell = f"{letters(place[1])}{place[0]}"
                yield Problem("R24", table.part, f"totals cell {cell} {what}")


def _totals_fault(
    package: Package, view: SheetView, place: tuple[int, int], column: etree._Element
) -> str:
    cell = view.by_position.get(place)
    label = column.get("totalsRowLabel")
    function = column.get("totalsRowFunction", "none")
    formula = cell.formula if cell is not None else None
    text = (formula.text or "") if formula is not None else ""
    if label is not None:
        return "" if view.text(package, *place) == _unescaped(label) else "is not its label"
    if function == "none":
        return "" if cell is None or cell.is_empty else "should be empty"
    if function == "custom":
        return "" if text else "has no formula"
    return "" if text.upper().startswith("SUBTOTAL(") else "has no SUBTOTAL formula"


def r25_table_places(package: Package) -> Iterator[Problem]:
    """Tables of a sheet do not meet; its table parts are its table relations."""
    for part, view in worksheets(package).items():
        mine = [table for table in tables(package) if table.sheet_part == part]
        for first, second in combinations(mine, 2):
            if first.extent.meets(second.extent):
                yield Problem("R25", second.part, f"meets {first.part}")
        named = sorted(relation_id(p) or "" for p in descendants(view.root, "tablePart"))
        if named != sorted(r.id for r in package.relations(part) if r.kind == "table"):
            yield Problem("R25", part, "table parts and table relations differ")
