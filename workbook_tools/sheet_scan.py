"""Where rows and cells lie in the bytes of a sheet; knows no meaning.

A sheet of 50 MB is not turned into objects: its rows are found once, and cells are looked up in
the bytes. The look-up may use plain searches because the part has been checked to be well-formed
and comments and the like are blanked out first (in a copy of equal length).
"""

from __future__ import annotations

import functools
import re
from array import array
from bisect import bisect_left, bisect_right
from collections.abc import Iterator
from typing import NamedTuple

from workbook_tools.cell_address import MAX_COLUMN, MAX_ROW, column_number
from workbook_tools.errors import Refusal
from workbook_tools.shared_strings import TypedText, read_text
from workbook_tools.written_values import whole_number
from workbook_tools.xml_offsets import Element, check_well_formed, parse, unescape

_ATTRIBUTES = rb"""((?:[^"'>]++|"[^"]*+"|'[^']*+')*+)"""
_ATTRIBUTE = re.compile(rb"""(?:^|\s)([^\s=<>"'/]+)\s*+=\s*+(?:"([^"]*+)"|'([^']*+)')""")
_SHEET_DATA = re.compile(rb"<(?:[\w.\-]+:)?sheetData(?=[\s/>])" + _ATTRIBUTES + rb">")
_HIDDEN = re.compile(rb"<!--.*?-->|<\?.*?\?>|<!\[CDATA\[(.*?)\]\]>", re.DOTALL)
_ADDRESS = re.compile(rb"\$?([A-Za-z]{1,3})\$?([0-9]{1,7})")
_DECLARATION = re.compile(rb"(?:\xef\xbb\xbf)?<\?xml\s.*?\?>", re.DOTALL)

# What stands in the blanked copy for the markup of a CDATA section and for the signs inside it.
# XML has no such characters of its own.
_FILLER = b"\x00"
_CDATA_SIGNS = bytes.maketrans(b"<&>", b"\x01\x02\x03")
_CDATA_BACK = {1: "<", 2: "&", 3: ">"}


class CellSpan(NamedTuple):
    """One cell element.

    Attributes:
        column: counted from 1.
        start, tag_end, end: the element is `start:end`, its start tag `start:tag_end`.
        style: number of its format; 0 where it has none.
        type: the `t` attribute; "n" where it has none.
    """

    column: int
    start: int
    tag_end: int
    end: int
    style: int
    type: str


class PlainCell(NamedTuple):
    """A cell as a plain search finds it.

    Attributes:
        row, start: number of its row, and offset of the element.
        style: number of its format; 0 where it has none.
        number: of a plain number; infinite where it is larger than any to be reckoned with.
        text: the number of a shared text.
    """

    row: int
    start: int
    style: int
    number: float | None
    text: int | None


class SheetScan:
    """The rows of a sheet and what surrounds them.

    Attributes:
        xml: the part.
        part: its name.
        outline: the tree of the sheet without its rows; offsets count in `xml`.
        data: the sheetData element of the outline.
        numbers: row numbers, ascending.
        starts, tag_ends, content_ends, ends: offsets of each row element, its start tag, and the
            place before its end tag (the end of the start tag where the row is `<row/>`).
        rows_explicit: whether every row says its own number.
        cells_regular: whether every cell starts with its address, so that cells can be searched.
    """

    def __init__(self, xml: bytes, part: str) -> None:
        """Scan a sheet.

        Raises:
            Refusal: not UTF-8, not well-formed, a document type definition, or rows that are out of
                order or written in a way that is not known here.
        """
        check_well_formed(xml, part)
        self.xml = xml
        self.part = part
        declaration = _DECLARATION.match(xml)
        self.plain = _blanked(xml, 0 if declaration is None else declaration.end())
        self._find_data()
        prefix = self.data.prefix.encode() + b":" if self.data.prefix else b""
        self._prefix = prefix
        self._row_tag = re.compile(b"<" + prefix + rb"row(?=[\s/>])" + _ATTRIBUTES + b">")
        self._cell_tag = re.compile(b"<" + prefix + rb"c(?=[\s/>])" + _ATTRIBUTES + b">")
        self._cell_close = re.compile(b"</" + prefix + rb"c\s*>")
        self._value = re.compile(
            b"<" + prefix + rb"v(?:\s" + _ATTRIBUTES + rb")?>([^<]*+)</" + prefix + rb"v\s*>"
        )
        self._no_value = re.compile(
            b"<" + prefix + rb"v(?=[\s/>])" + _ATTRIBUTES + rb">(?:\s*+</" + prefix + rb"v\s*>)?"
        )
        self._inline = re.compile(
            b"<" + prefix + rb"is(?=[\s>]).*?</" + prefix + rb"is\s*>", re.DOTALL
        )
        self.formula_tag = re.compile(b"<" + prefix + rb"f(?=[\s/>])" + _ATTRIBUTES + b">")
        self._opening = b"<" + prefix + b'c r="'
        self._closing = b"</" + prefix + b"c>"
        self._start = re.compile(re.escape(self._opening) + rb"([A-Z]+)")
        self._find_rows()
        self.cells_regular = self.rows_explicit and self._cells_are_regular()

    def __len__(self) -> int:
        """Return the number of row elements."""
        return len(self.numbers)

    def cells(self, index: int) -> list[CellSpan]:
        """Return the cells of the row element with that index, left to right.

        Raises:
            Refusal: the cells are out of order.
        """
        plain, position, limit = self.plain, self.tag_ends[index], self.content_ends[index]
        spans: list[CellSpan] = []
        column = 0
        while (match := self._cell_tag.search(plain, position, limit)) is not None:
            attributes = attributes_of(match[1])
            address = attributes.get("r")
            following = column + 1 if address is None else self._column_of(address, index)
            if not column < following <= MAX_COLUMN:
                raise self.disordered(f"row {self.numbers[index]}")
            column = following
            position = match.end()
            if not match[0].endswith(b"/>"):
                close = self._cell_close.search(plain, position, limit)
                if close is None:
                    raise self.disordered(f"row {self.numbers[index]}")
                position = close.end()
            spans.append(
                CellSpan(
                    column,
                    match.start(),
                    match.end(),
                    position,
                    whole_number(attributes.get("s", b"0"), self.part),
                    attributes.get("t", b"n").decode(),
                )
            )
        return spans

    def find_cell(self, index: int, letters: bytes) -> CellSpan | None:
        """Return the cell in that column of the row, by plain search; for regular cells only."""
        address = b"%b%d" % (letters, self.numbers[index])
        start = self.plain.find(
            self._opening + address + b'"', self.tag_ends[index], self.content_ends[index]
        )
        if start < 0:
            return None
        match = self._cell_tag.match(self.plain, start)
        assert match is not None
        attributes = attributes_of(match[1])
        end = match.end()
        if not match[0].endswith(b"/>"):
            close = self._cell_close.search(self.plain, end, self.content_ends[index])
            if close is None:
                raise self.disordered(address.decode())
            end = close.end()
        return CellSpan(
            column_number(letters.decode()),
            start,
            match.end(),
            end,
            whole_number(attributes.get("s", b"0"), self.part),
            attributes.get("t", b"n").decode(),
        )

    @functools.cached_property
    def last_columns(self) -> array[int]:
        """The column of each row's last cell element, 0 for a row without cells."""
        last = array("q")
        numbers = {b"": 0}
        for index in range(len(self)):
            if not self.cells_regular:
                last.append(max((cell.column for cell in self.cells(index)), default=0))
                continue
            letters = self._last_letters(index)
            number = numbers.get(letters)
            if number is None:
                address = b"%b%d" % (letters, self.numbers[index])
                number = numbers[letters] = self._column_of(address, index)
            last.append(number)
        return last

    def end_of_cells(self, index: int) -> int:
        """Return where the last cell of a row ends; what may follow it is an extension list."""
        end = self.content_ends[index]
        if self.plain.startswith(self._closing, end - len(self._closing)):
            return end
        cells = self.cells(index)
        return cells[-1].end if cells else self.tag_ends[index]

    def plain_cells(self, letters: bytes) -> Iterator[PlainCell]:
        """Yield each cell of a column, top down; for regular cells only.

        What is neither a plain number nor a shared text, as a formula, needs a closer look.
        """
        v, close = self._prefix + b"v", re.escape(self._closing)
        number = rb'(?: t="n")?><%b>(-?\d+(?:\.\d+)?(?:[eE][-+]?\d+)?)' % v
        text = rb' t="s"><%b>(\d{1,9})' % v
        pattern = re.compile(
            re.escape(self._opening + letters)
            + rb'(\d+)"(?:(?: s="(\d{1,9})")?'
            + rb"(?:%b|%b)</%b>%b)?" % (number, text, v, close)
        )
        data = self.data
        for match in pattern.finditer(self.plain, data.start_tag_end, data.end_tag_start):
            row, style, found, shared = match.groups()
            yield PlainCell(
                int(row),
                match.start(),
                0 if style is None else int(style),
                None if found is None else float(found),
                None if shared is None else int(shared),
            )

    def rows_between(self, first: int, last: int) -> range:
        """Return the indices of the row elements with numbers from `first` to `last`."""
        return range(bisect_left(self.numbers, first), bisect_right(self.numbers, last))

    def is_empty(self, cell: CellSpan) -> bool:
        """Tell whether a cell element holds nothing: no value, no formula, no text."""
        if cell.end == cell.tag_end:
            return True
        content = self.plain[cell.tag_end : cell.end]
        close = content.rindex(b"</")
        inner = content[:close].replace(_FILLER, b"").strip()
        return not inner or self._no_value.fullmatch(inner) is not None

    def value_text(self, cell: CellSpan) -> str | None:
        """Return the text of the cell's `v` element, None where it has none."""
        match = self._value.search(self.plain, cell.tag_end, cell.end)
        return None if match is None else _decoded(match[2])

    def inline_text(self, cell: CellSpan) -> TypedText:
        """Return the text of an inline string, its runs joined and phonetic hints left out."""
        match = self._inline.search(self.plain, cell.tag_end, cell.end)
        return TypedText("") if match is None else read_text(self.xml[match.start() : match.end()])

    def formula(self, cell: CellSpan) -> str | None:
        """Return the formula text of a cell, None for none.

        Where the cell shares a formula, it is the text that stands in the first of its cells.
        """
        match = self.formula_tag.search(self.plain, cell.tag_end, cell.end)
        if match is None:
            return None
        text, attributes = self._formula_text(match), attributes_of(match[1])
        if text or attributes.get("t") != b"shared":
            return text
        return self._shared_formulas.get(attributes.get("si", b""), "")

    @functools.cached_property
    def _shared_formulas(self) -> dict[bytes, str]:
        found: dict[bytes, str] = {}
        for match in self.formula_tag.finditer(self.plain):
            attributes, text = attributes_of(match[1]), self._formula_text(match)
            if text and attributes.get("t") == b"shared":
                found.setdefault(attributes.get("si", b""), text)
        return found

    def _formula_text(self, match: re.Match[bytes]) -> str:
        if match[0].endswith(b"/>"):
            return ""
        return _decoded(self.plain[match.end() : self.plain.index(b"<", match.end())])

    def row_attribute_span(self, index: int, name: bytes) -> tuple[int, int] | None:
        """Return where the value of a row's attribute lies, None where the row has none."""
        for match in _ATTRIBUTE.finditer(self.xml, self.starts[index], self.tag_ends[index]):
            if match[1] == name:
                return match.span(2) if match[2] is not None else match.span(3)
        return None

    def disordered(self, where: str) -> Refusal:
        """Return the refusal of a sheet whose rows or cells do not follow each other."""
        return Refusal(
            f"{self.part} has rows or cells out of order ({where}); open the workbook in its own"
            " program, let it repair the file and save it again."
        )

    def _column_of(self, address: bytes, index: int) -> int:
        """Return the column of an address that must lie in the row with that index."""
        parts = _ADDRESS.fullmatch(address)
        if parts is not None and int(parts[2]) == self.numbers[index]:
            number = 0
            for letter in parts[1].upper():
                number = number * 26 + letter - ord("A") + 1
            if number <= MAX_COLUMN:
                return number
        raise self.disordered(f"row {self.numbers[index]}")

    def _last_letters(self, index: int) -> bytes:
        start = self.plain.rfind(self._opening, self.tag_ends[index], self.content_ends[index])
        if start < 0:
            return b""
        match = self._start.match(self.plain, start)
        if match is None or not self.plain.startswith(b'%d"' % self.numbers[index], match.end()):
            raise self.disordered(f"row {self.numbers[index]}")
        return match[1]

    def _find_data(self) -> None:
        opening = _SHEET_DATA.search(self.plain)
        name = opening[0][1:].split(b"sheetData")[0] if opening is not None else b""
        closing = self.plain.rfind(b"</" + name + b"sheetData") if opening is not None else -1
        skipped = range(0)
        if opening is not None and not opening[0].endswith(b"/>"):
            skipped = range(opening.end(), closing)
        self.outline = parse(self.xml, self.part, skipped=skipped)
        data = self.outline.find("sheetData")
        if data is None or opening is None or data.start != opening.start():
            raise Refusal(
                f"{self.part} is written in a way that is not known here (its rows are not found);"
                " open the workbook in its own program, save it and try again."
            )
        self.data: Element = data

    def _find_rows(self) -> None:
        self.numbers, self.starts, self.tag_ends = array("q"), array("q"), array("q")
        self.content_ends, self.ends = array("q"), array("q")
        self.rows_explicit = True
        plain, limit = self.plain, self.data.end_tag_start
        position, number = self.data.start_tag_end, 0
        find_tag, closing = self._row_tag.search, b"</" + self._prefix + b"row"
        row_number = re.compile(rb"""(?:^|\s)r\s*=\s*["']\s*(\d+)""")
        while (match := find_tag(plain, position, limit)) is not None:
            said = row_number.search(match[1])
            following = int(said[1][:8]) if said is not None else number + 1
            self.rows_explicit &= said is not None
            if not number < following <= MAX_ROW:
                raise self.disordered(f"row {following}")
            number = following
            tag_end = content_end = position = match.end()
            if plain[tag_end - 2 : tag_end] != b"/>":
                content_end = plain.find(closing, tag_end, limit)
                position = plain.find(b">", content_end, limit) + 1
                if content_end < 0 or position == 0:
                    raise self.disordered(f"row {number}")
            self.numbers.append(number)
            self.starts.append(match.start())
            self.tag_ends.append(tag_end)
            self.content_ends.append(content_end)
            self.ends.append(position)
        if not len(self.numbers) and plain[self.data.start_tag_end : limit].strip(
            _FILLER + b" \r\n\t"
        ):
            raise self.disordered("its rows")

    def _cells_are_regular(self) -> bool:
        """Tell whether every `<c` is followed by its address, in capitals."""
        odd = re.compile(re.escape(self._opening[:-4]) + rb'(?! r="[A-Z]{1,3}[1-9]\d{0,6}")[\s/>]')
        return odd.search(self.plain, self.data.start_tag_end, self.data.end_tag_start) is None


def attributes_of(raw: bytes) -> dict[str, bytes]:
    """Return the attributes that stand in the inside of a start tag, as they are written."""
    return {
        match[1].decode(): match[2] if match[2] is not None else match[3]
        for match in _ATTRIBUTE.finditer(raw)
    }


def _decoded(raw: bytes) -> str:
    """Turn the bytes between two tags into text."""
    text = raw.replace(_FILLER, b"")
    return unescape(text.decode()).translate(_CDATA_BACK)


def _blanked(xml: bytes, start: int) -> bytes:
    """Return the part with comments, processing instructions and CDATA marks from `start` on
    blanked out, every other byte in its place; the part itself where there are none.
    """
    if all(xml.find(sign, start) < 0 for sign in (b"<!", b"<?")):
        return xml
    pieces, position = [xml[:start]], start
    for match in _HIDDEN.finditer(xml, start):
        pieces.append(xml[position : match.start()])
        body = match[1]
        if body is None:
            pieces.append(_FILLER * len(match[0]))
        else:
            pieces += [_FILLER * 9, body.translate(_CDATA_SIGNS), _FILLER * 3]
        position = match.end()
    return b"".join([*pieces, xml[position:]])
