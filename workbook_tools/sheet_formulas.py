"""The formulas of a sheet and where they stand, found without building a tree.

Most sheets of a log hold none, and one that is copied down holds a hundred thousand; both must be
quick. So a formula that stands in many cells, relative references moved along, is given once with
the area it stands in, whether the file shares it or writes it out in every cell.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import NamedTuple

from workbook_tools.cell_address import CellAddress, Range, parse_cell, parse_range
from workbook_tools.errors import UsageError
from workbook_tools.xml_offsets import escape_text, has_hidden_text, qualified, root_name, unescape

_ATTRIBUTE = re.compile(rb"""\s([^\s=<>"'/]+)\s*=\s*(?:"([^"]*)"|'([^']*)')""")
_HIDDEN = re.compile(rb"<!--.*?-->|<\?.*?\?>|<!\[CDATA\[(.*?)\]\]>", re.DOTALL)
_REFERENCE = re.compile(rb"""\sr\s*=\s*["']([A-Za-z0-9]+)["']""")
_GROUP = re.compile(rb"""\ssi\s*=\s*["'](\d+)["']""")
# texts and quoted names of sheets are passed over whole
_ROW_NUMBER = re.compile(
    r""""(?:[^"]|"")*"|'(?:[^']|'')*'|(?<![\w$.])(\$?[A-Z]{1,3})([0-9]+)(?![\w.(!\[])"""
)


class SheetFormula(NamedTuple):
    """A formula.

    Attributes:
        text: as the file holds it; references are those of the cell `origin`.
        origin: the cell it is written in.
        area: the cells that show its results.
        copied: whether each cell of the area has it, relative references moved along; otherwise
            the area is the result of one formula.
    """

    text: str
    origin: CellAddress
    area: Range
    copied: bool


def formulas_of(xml: bytes) -> Iterator[SheetFormula]:
    """Yield the formulas of a well-formed sheet, in no particular order."""
    if xml[:2] in (b"\xff\xfe", b"\xfe\xff"):
        xml = xml.decode("utf-16").encode()
    prefix, _ = root_name(xml)
    row, cell, formula = (qualified(prefix, local).encode() for local in ("row", "c", "f"))
    if re.search(rb"<%b[\s/>]" % re.escape(formula), xml) is None:
        return
    xml = _without_hidden(xml)
    pattern = re.compile(rb"<%b((?:\s[^<>]*)?)(?:(?<=/)>|(?<!/)>([^<]*)<)" % re.escape(formula))
    counted: dict[int, CellAddress] = {}
    shared = _Shared()
    columns: dict[int, _Column] = {}
    for match in pattern.finditer(xml):
        if not match[2] and shared.covers(match[1]):
            continue
        start = xml.rfind(b"<" + cell, 0, match.start())
        origin = _address(xml[start : match.start()])
        if origin is None:
            counted = counted or _counted_addresses(xml, row, cell)
            origin = counted.get(start)
            if origin is None:
                continue  # no formula of a cell
        attributes = _attributes(match[1]) if match[1] else {}
        text = unescape((match[2] or b"").decode("utf-8", "replace"))
        kind = attributes.get("t", "normal")
        if kind == "shared":
            shared.add(text, origin, attributes)
        elif kind == "normal":
            yield from columns.setdefault(origin.column, _Column()).add(text, origin)
        else:
            yield _with_area(text, origin, attributes)
    for column in columns.values():
        yield from column.rest()
    yield from shared.formulas()


class _Column:
    """Joins the formulas of a column that are copies of the one above."""

    def __init__(self) -> None:
        self.pattern = ""
        self.current: SheetFormula | None = None

    def add(self, text: str, origin: CellAddress) -> Iterator[SheetFormula]:
        pattern = _relative(text, origin.row)
        if self.current is not None:
            area = self.current.area
            if pattern == self.pattern and origin.row == area.last_row + 1:
                self.current = self.current._replace(area=area._replace(last_row=origin.row))
                return
            yield self.current
        self.pattern = pattern
        self.current = SheetFormula(text, origin, Range(*origin, *origin), copied=True)

    def rest(self) -> Iterator[SheetFormula]:
        if self.current is not None:
            yield self.current


class _Shared:
    """Collects the formulas that the file itself shares."""

    def __init__(self) -> None:
        self.masters: dict[str, tuple[str, CellAddress]] = {}
        self.areas: dict[str, Range] = {}
        self.complete: set[bytes] = set()

    def covers(self, raw: bytes) -> bool:
        """Tell whether a cell is one of an area that its formula has stated already."""
        match = _GROUP.search(raw)
        return match is not None and match[1] in self.complete

    def add(self, text: str, origin: CellAddress, attributes: dict[str, str]) -> None:
        group = attributes.get("si", "")
        if text:
            self.masters.setdefault(group, (text, origin))
            if "ref" in attributes:
                self.complete.add(group.encode())
        own = _area(attributes.get("ref"), origin)
        area = self.areas.get(group, own)
        self.areas[group] = Range(
            min(area.first_row, own.first_row),
            min(area.first_column, own.first_column),
            max(area.last_row, own.last_row),
            max(area.last_column, own.last_column),
        )

    def formulas(self) -> Iterator[SheetFormula]:
        for group, (text, origin) in self.masters.items():
            yield SheetFormula(text, origin, self.areas[group], copied=True)


def _with_area(text: str, origin: CellAddress, attributes: dict[str, str]) -> SheetFormula:
    area = _area(attributes.get("ref"), origin)
    if attributes.get("t") == "dataTable":
        # a what-if table puts the values beside it into its input cells and shows what comes out
        beside = area._replace(
            first_row=max(area.first_row - 1, 1), first_column=max(area.first_column - 1, 1)
        )
        inputs = [attributes.get("r1", ""), attributes.get("r2", ""), beside.a1]
        text = ",".join(part for part in inputs if part)
    return SheetFormula(text, origin, area, copied=False)


def _area(ref: str | None, origin: CellAddress) -> Range:
    own = Range(origin.row, origin.column, origin.row, origin.column)
    try:
        return own if ref is None else parse_range(ref)
    except UsageError:
        return own


def _relative(text: str, row: int) -> str:
    """Return the formula with its relative row numbers counted from the row it stands in."""

    def counted(match: re.Match[str]) -> str:
        return f"{match[1]}[{int(match[2]) - row}]" if match[1] else match[0]

    return _ROW_NUMBER.sub(counted, text)


def _attributes(raw: bytes) -> dict[str, str]:
    return {
        match[1].decode(): unescape((match[2] or match[3] or b"").decode("utf-8", "replace"))
        for match in _ATTRIBUTE.finditer(raw)
    }


def _address(raw: bytes) -> CellAddress | None:
    match = _REFERENCE.search(raw)
    if match is None:
        return None
    try:
        return parse_cell(match[1].decode())
    except UsageError:
        return None


def _counted_addresses(xml: bytes, row: bytes, cell: bytes) -> dict[int, CellAddress]:
    """Return the address of each cell by its offset, for sheets whose cells do not say it.

    A row or cell without `r` follows the one before ([MS-OI29500] 2.1.587 and 2.1.590, from
    memory).
    """
    addresses: dict[int, CellAddress] = {}
    at_row = at_column = 0
    tags = re.compile(rb"<(?:(%b)|%b)(?=[\s/>])([^<>]*)>" % (re.escape(row), re.escape(cell)))
    for match in tags.finditer(xml):
        if match[1]:
            number = _attributes(match[2]).get("r", "")
            at_row, at_column = (int(number) if number.isdecimal() else at_row + 1), 0
        else:
            own = _address(match[2])
            at_column = own.column if own is not None else at_column + 1
            addresses[match.start()] = CellAddress(at_row, at_column)
    return addresses


def _without_hidden(xml: bytes) -> bytes:
    """Return the sheet without comments and instructions, its CDATA sections as plain text."""
    if not has_hidden_text(xml):
        return xml
    return _HIDDEN.sub(
        lambda match: escape_text((match[1] or b"").decode("utf-8", "replace")).encode(), xml
    )
