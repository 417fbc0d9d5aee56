"""Sheets written by hand, and what the layers above the bytes make of them."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any
from xml.sax.saxutils import escape

from epochconv.published import history_of
from tests.workbook_tools.loose_parts import MAIN
from workbook_tools.cell_address import Range
from workbook_tools.parts import Sheet, SheetKind, SheetState
from workbook_tools.request import Request
from workbook_tools.shared_strings import TypedText
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.sheet_scan import SheetScan
from workbook_tools.tables import Table
from workbook_tools.typed_cells import CellRules

PART = "xl/worksheets/sheet1.xml"
DATE_STYLE, PERCENT_STYLE, STRUCK_STYLE = 9, 8, 7
Value = float | str | None


def sheet_xml(rows: str, *, head: str = "", tail: str = "", prefix: str = "") -> bytes:
    """A worksheet with these row elements; `head` and `tail` stand around its sheetData."""
    declared, mark = (f":{prefix}", f"{prefix}:") if prefix else ("", "")
    data = f"<{mark}sheetData>{rows}</{mark}sheetData>"
    xml = f'<{mark}worksheet xmlns{declared}="{MAIN}">{head}{data}{tail}</{mark}worksheet>'
    return xml.encode()


def scan_of(rows: str, *, head: str = "", tail: str = "", prefix: str = "") -> SheetScan:
    """Scan such a sheet."""
    return SheetScan(sheet_xml(rows, head=head, tail=tail, prefix=prefix), PART)


def row(number: int, *values: Value) -> str:
    """A row element: numbers, texts as inline strings, None for no cell."""
    cells = "".join(
        cell(f"{chr(65 + index)}{number}", value)
        for index, value in enumerate(values)
        if value is not None
    )
    return f'<row r="{number}">{cells}</row>'


def cell(address: str, value: Value, style: int = 0) -> str:
    """A cell element with a number, a text or (None) nothing."""
    attributes = f'r="{address}"' + (f' s="{style}"' if style else "")
    if value is None:
        return f"<c {attributes}/>"
    if isinstance(value, str):
        return f'<c {attributes} t="inlineStr"><is><t>{escape(value)}</t></is></c>'
    return f"<c {attributes}><v>{value!r}</v></c>"


def grid(*rows: Sequence[Value]) -> str:
    """Row elements from row 1 on."""
    return "".join(row(number, *values) for number, values in enumerate(rows, 1))


def reading_of(
    rows: str | SheetScan,
    *,
    tables: Sequence[Table] = (),
    pivots: Sequence[Range] = (),
    header_row: int | None = None,
    texts: Sequence[str | TypedText] = (),
    **how: Any,
) -> SheetReading:
    """Read a sheet named Log; `texts` are the shared strings, `how` is how cells are read."""
    scan = rows if isinstance(rows, SheetScan) else scan_of(rows)
    sheet = Sheet("Log", 1, SheetState.VISIBLE, SheetKind.WORKSHEET, PART)
    return SheetReading(sheet, scan, tables, pivots, rules(texts, **how), header_row)


def rules(texts: Sequence[str | TypedText] = (), **how: Any) -> CellRules:
    """How cells are read: style 9 is one of dates, 8 of percents, 7 strikes its cells through."""
    return CellRules(
        lambda number: (
            TypedText(texts[number]) if isinstance(texts[number], str) else texts[number]
        ),
        lambda style: style == DATE_STYLE,
        lambda style: style == PERCENT_STYLE,
        lambda style: style == STRUCK_STYLE,
        **how,
    )


def table_at(ref: Range, *columns: str, growable: bool = True, totals: int = 0) -> Table:
    """A table named Objects with a header row."""
    reason = "" if growable else "it shows the result of a query"
    return Table("xl/tables/t.xml", "Objects", 1, ref, 1, totals, columns, growable, reason)


def request(**choices: Any) -> Request:
    """A request under the default parameters."""
    return Request(history=history_of(None), **choices)
