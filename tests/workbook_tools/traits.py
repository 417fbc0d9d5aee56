"""What a workbook holds that a fill might disturb, read from the file by the checker's own eyes."""

from __future__ import annotations

import zipfile
from collections.abc import Callable

from lxml import etree

from tests.workbook_tools.rules.package import MAIN, Package, child, descendants
from tests.workbook_tools.rules.sheet_view import LAST_COLUMN, SheetView, worksheets
from tests.workbook_tools.rules.table_rules import tables


def workbook_traits(package: Package, sheet_part: str) -> set[str]:
    """Traits of a workbook and of the one sheet that is filled.

    Args:
        package: the workbook before the fill.
        sheet_part: the part of the sheet that is filled.
    """
    view = worksheets(package)[sheet_part]
    data = package.contents[sheet_part]
    found = {name for name, test in _BOOK.items() if test(package)}
    found |= {name for name, test in _SHEET.items() if test(view)}
    found |= {name for name, text in _TEXT.items() if text in data}
    here = [table for table in tables(package) if table.sheet_part == sheet_part]
    if here:
        found.add("table on the sheet")
    if any(table.totals_rows for table in here):
        found.add("table with totals")
    if any(not table.header_rows for table in here):
        found.add("table without header")
    kinds = {relation.kind for relation in package.relations(sheet_part)}
    found |= {name for name, kind in _RELATED.items() if kind in kinds}
    return found


def _root_has(package: Package, name: str) -> bool:
    return child(package.workbook, name) is not None


def _is_protected(view: SheetView) -> bool:
    item = child(view.root, "sheetProtection")
    return item is not None and item.get("sheet") in ("1", "true")


def _any(view: SheetView, name: str, **attributes: str) -> bool:
    return any(
        all(item.get(key) == value for key, value in attributes.items())
        for item in descendants(view.root, name)
    )


_BOOK: dict[str, Callable[[Package], bool]] = {
    "strict": lambda p: _uri(p) == MAIN[1],
    "dates from 1904": lambda p: any(
        item.get("date1904") in ("1", "true") for item in descendants(p.workbook, "workbookPr")
    ),
    "macros": lambda p: any("vbaProject" in name for name in p.contents),
    "template": lambda p: "template" in (p.content_type(p.workbook_part) or ""),
    "no styles": lambda p: p.workbook_tree("styles") is None,
    "no shared strings": lambda p: p.workbook_tree("sharedStrings") is None,
    "calculation chain": lambda p: p.workbook_tree("calcChain") is not None,
    "defined names": lambda p: _root_has(p, "definedNames"),
    "external links": lambda p: _root_has(p, "externalReferences"),
    "pivot table": lambda p: any("/pivotTables/" in name for name in p.contents),
    "no calculation element": lambda p: not _root_has(p, "calcPr"),
    "hidden sheet": lambda p: any(sheet.state != "visible" for sheet in p.sheets),
    "locked structure": lambda p: _root_has(p, "workbookProtection"),
    "stored or described after the data": lambda p: any(e.flag_bits & 8 for e in p.entries),
    "stored without compression": lambda p: any(
        e.compress_type == zipfile.ZIP_STORED and e.file_size for e in p.entries
    ),
}


def _uri(package: Package) -> str:
    return "" if package.workbook is None else etree.QName(package.workbook).namespace or ""


_SHEET: dict[str, Callable[[SheetView], bool]] = {
    "prefixed": lambda v: v.root.prefix is not None,
    "no addresses": lambda v: any(cell.element.get("r") is None for cell in v.cells),
    "no dimension": lambda v: child(v.root, "dimension") is None,
    "no column elements": lambda v: child(v.root, "cols") is None,
    "empty sheet": lambda v: not v.rows,
    "empty row elements": lambda v: any(not row.cells for row in v.rows),
    "gaps between rows": lambda v: any(
        row.number != v.rows[0].number + index for index, row in enumerate(v.rows)
    ),
    "row style": lambda v: _any(v, "row", customFormat="1"),
    "columns to the last": lambda v: _any(v, "col", max=str(LAST_COLUMN)),
    "hidden columns": lambda v: _any(v, "col", hidden="1"),
    "outlined columns": lambda v: any(i.get("outlineLevel") for i in descendants(v.root, "col")),
    "styled columns": lambda v: any(item.get("style") for item in descendants(v.root, "col")),
    "protected": _is_protected,
    "merged cells": lambda v: bool(v.merges()),
    "shared formulas": lambda v: _any(v, "f", t="shared"),
    "array formula": lambda v: _any(v, "f", t="array"),
    "dynamic array": lambda v: any(cell.element.get("cm") for cell in v.cells),
    "rich values": lambda v: any(cell.element.get("vm") for cell in v.cells),
    "inline strings": lambda v: _any(v, "c", t="inlineStr"),
    "filter outside a table": lambda v: child(v.root, "autoFilter") is not None,
    "frozen panes": lambda v: any(
        "frozen" in item.get("state", "") for item in descendants(v.root, "pane")
    ),
    "validation": lambda v: child(v.root, "dataValidations") is not None,
    "conditional formats": lambda v: child(v.root, "conditionalFormatting") is not None,
    "extensions": lambda v: child(v.root, "extLst") is not None,
    "hyperlinks": lambda v: child(v.root, "hyperlinks") is not None,
}
_TEXT = {
    "byte order mark": b"\xef\xbb\xbf",
    "comments among the rows": b"<!--",
    "CDATA": b"<![CDATA[",
    "single quotes": b"='",
    "compatibility alternatives": b"AlternateContent",
}
_RELATED = {
    "drawing or chart": "drawing",
    "comments": "comments",
    "printer settings": "printerSettings",
}

# What only the workbooks of real programs show; all else is in the made ones too.
SEEN_IN_REAL = {
    "calculation chain",
    "external links",
    "hidden sheet",
    "locked structure",
    "stored or described after the data",
    "stored without compression",
    "rich values",
    "compatibility alternatives",
    "pivot table",
    "printer settings",
    "outlined columns",
}
SEEN_IN_MADE = {
    *_BOOK,
    *_SHEET,
    *_TEXT,
    *_RELATED,
    "table on the sheet",
    "table with totals",
    "table without header",
    "table grown",
    "table with totals grown",
    "table left as it was",
} - SEEN_IN_REAL
