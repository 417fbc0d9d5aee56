"""The cell formats of a workbook, and how to get one that differs in its number format only.

Formats are only ever appended, so that the numbers which cells already carry keep their meaning.
"""

from __future__ import annotations

from openpyxl.styles.numbers import BUILTIN_FORMATS, is_date_format

from workbook_tools.errors import Refusal
from workbook_tools.splice import Edit, EditKind, spliced
from workbook_tools.xml_offsets import (
    Element,
    append_child,
    escape_attribute,
    parse,
    qualified,
    set_attribute,
)

MAX_STYLES = 64_000
"""Cell formats that Excel documents as its limit."""

MAX_CODE = 255
"""Characters of a number format."""

GENERAL = "General"

_FIRST_OWN_FORMAT = 164  # smaller ids are built in (ECMA-376 part 1, 18.8.30)
# built-in dates of East Asian languages, whose codes depend on the language (18.8.30)
_REGIONAL_DATES = frozenset((*range(27, 37), *range(50, 59)))
# A new cell takes over neither the quote sign that somebody typed before a text nor the button of
# a pivot table, and no extension: that is how a cell is turned into a check box.
_FLAGS_LEFT_OUT = ("quotePrefix", "pivotButton")
_CHILD_LEFT_OUT = "extLst"

_Look = tuple[tuple[tuple[str, str], ...], bytes]


class StyleSheet:
    """The style sheet of a workbook.

    A style is the number that the `s` attribute of a cell gives, counted from 0.
    """

    def __init__(self, xml: bytes, part: str) -> None:
        """Read a style sheet.

        Args:
            xml: the whole part.
            part: its name, for messages.
        Raises:
            Refusal: the part cannot be read.
        """
        self._part = part
        self._root = parse(xml, part)
        self._formats = self._root.find("numFmts")
        self._list = self._root.find("cellXfs")
        self._styles = list(self._list.find_all("xf")) if self._list is not None else []
        self._appended: list[Element] = []
        self._new_formats: list[bytes] = []
        # at any depth, because Excel wraps some formats in a choice between two spellings
        own = self._formats.descendants("numFmt") if self._formats is not None else ()
        self._codes = {_format_id(one): one.attributes.get("formatCode", GENERAL) for one in own}
        # those of conditional formats count among the ids in use
        self._ids = {_format_id(one) for one in self._root.descendants("numFmt")}
        self._looks: dict[_Look, int] = {}
        for number, style in enumerate(self._styles):
            self._looks.setdefault(_look(style), number)

    def __len__(self) -> int:
        """Return the number of styles, those appended included."""
        return len(self._styles) + len(self._appended)

    def format_code(self, style: int) -> str:
        """Return the code of the number format of a style, such as `0.00`.

        Raises:
            Refusal: there is no such style.
        """
        return self._code(self._format_of(style))

    def is_date(self, style: int) -> bool:
        """Tell whether a style shows numbers as dates or times.

        Raises:
            Refusal: there is no such style.
        """
        number = self._format_of(style)
        if number in _REGIONAL_DATES and number not in self._codes:
            return True
        return bool(is_date_format(self._code(number)))

    def is_percent(self, style: int) -> bool:
        """Tell whether a style shows numbers in percent.

        Raises:
            Refusal: there is no such style.
        """
        return "%" in self.format_code(style)

    def is_struck(self, style: int) -> bool:
        """Tell whether a style strikes its letters through.

        Raises:
            Refusal: there is no such style.
        """
        fonts = self._root.find("fonts")
        if fonts is None or len(self) == 0:
            return False
        number = self._style(style).attributes.get("fontId", "0")
        listed = list(fonts.find_all("font"))
        if not number.isdecimal() or int(number) >= len(listed):
            return False
        strike = listed[int(number)].find("strike")
        return strike is not None and strike.flag("val", default=True)

    def wraps(self, style: int) -> bool:
        """Tell whether a style breaks long texts into lines.

        Raises:
            Refusal: there is no such style.
        """
        if style == 0 and len(self) == 0:
            return False
        alignment = self._style(style).find("alignment")
        return alignment is not None and alignment.flag("wrapText")

    def with_format(self, style: int, code: str) -> int:
        """Return the style that looks like `style` but has the number format `code`.

        One that exists is used; otherwise one is appended, which `edits` then tells.

        Args:
            style: the style of a neighbour.
            code: number format in the notation of the file (English, dot for decimals).
        Raises:
            Refusal: there is no such style, the code is too long, or the sheet is full.
        """
        model = self._style(style)
        if self._code(_format_id(model)) == code and not _has_what_is_left_out(model):
            return style
        changed = self._changed(model, self._id_of(code))
        look = _look(changed)
        if look not in self._looks:
            if len(self) >= MAX_STYLES:
                raise Refusal(
                    f"{self._part} holds {len(self):,} cell formats and Excel allows no more than"
                    f" {MAX_STYLES:,}; clear unused cell formats in its own program first."
                )
            self._looks[look] = len(self)
            self._appended.append(changed)
        return self._looks[look]

    def edits(self) -> list[Edit]:
        """Return the edits of the part that append what `with_format` needed, in order."""
        edits: list[Edit] = []
        if self._new_formats:
            edits += self._format_edits()
        if self._appended and self._list is not None:
            new = b"".join(_bytes_of(style) for style in self._appended)
            edits += _count_edit(self._list, len(self))
            edits.append(append_child(self._list, new, EditKind.STYLE_APPENDED))
        return sorted(edits, key=lambda edit: (edit.start, edit.end))

    def _format_edits(self) -> list[Edit]:
        kind = EditKind.NUMBER_FORMAT_APPENDED
        new = b"".join(self._new_formats)
        if self._formats is not None:
            # added to the old count, since a wrapped format stands there in two spellings
            old = self._formats.attributes.get("count", "")
            count = int(old) + len(self._new_formats) if old.isdecimal() else 0
            counted = _count_edit(self._formats, count) if count else []
            return [*counted, append_child(self._formats, new, kind)]
        name = qualified(self._root.prefix, "numFmts").encode()
        listed = b'<%b count="%d">%b</%b>' % (name, len(self._new_formats), new, name)
        position = self._root.start_tag_end  # number formats come first (CT_Stylesheet)
        return [Edit(kind, position, position, listed)]

    def _style(self, style: int) -> Element:
        if not 0 <= style < len(self):
            raise Refusal(
                f"{self._part} has no cell format number {style}, although a cell needs it; open"
                " the workbook in its own program, let it repair the file and save it again."
            )
        known = len(self._styles)
        return self._styles[style] if style < known else self._appended[style - known]

    def _format_of(self, style: int) -> int:
        if style == 0 and len(self) == 0:
            return 0  # a style sheet without any list of cell formats still has the plain one
        return _format_id(self._style(style))

    def _code(self, number: int) -> str:
        # a file may give a built-in id a code of its own, which then counts
        code: str = self._codes.get(number, BUILTIN_FORMATS.get(number, GENERAL))
        return code

    def _id_of(self, code: str) -> int:
        for number in (*self._codes, *BUILTIN_FORMATS):
            if self._code(number) == code:
                return int(number)
        if len(code) > MAX_CODE:
            raise Refusal(
                f"The number format {code[:40]}... has {len(code)} characters and Excel takes no"
                f" more than {MAX_CODE}; choose a shorter one."
            )
        number = max({_FIRST_OWN_FORMAT - 1} | self._ids) + 1
        self._codes[number] = code
        self._ids.add(number)
        name = qualified(self._root.prefix, "numFmt")
        tag = f'<{name} numFmtId="{number}" formatCode="{escape_attribute(code)}"/>'
        self._new_formats.append(tag.encode())
        return number

    def _changed(self, model: Element, number: int) -> Element:
        edits = [
            set_attribute(model, "numFmtId", str(number)),
            set_attribute(model, "applyNumberFormat", "1"),
        ]
        edits += [
            set_attribute(model, name, "0") for name in _FLAGS_LEFT_OUT if name in model.attributes
        ]
        edits += [
            Edit(EditKind.STYLE_APPENDED, child.start, child.end, b"")
            for child in model.find_all(_CHILD_LEFT_OUT)
        ]
        edits.sort(key=lambda edit: (edit.start, edit.end))
        shifted = [
            edit._replace(start=edit.start - model.start, end=edit.end - model.start)
            for edit in edits
        ]
        assert self._list is not None  # it holds the model
        # read it again within the same tags, whose prefixes it may use
        around = self._root, self._list
        pieces: list[bytes | memoryview] = [_start_tag(element) for element in around]
        pieces += spliced(_bytes_of(model), shifted)
        pieces += [_end_tag(element) for element in reversed(around)]
        return parse(b"".join(pieces), self._part).children[0].children[0]


def _bytes_of(element: Element) -> bytes:
    return element.source[element.start : element.end]


def _start_tag(element: Element) -> bytes:
    return element.source[element.start : element.start_tag_end]


def _end_tag(element: Element) -> bytes:
    return element.source[element.end_tag_start : element.end]


def _format_id(element: Element) -> int:
    number = element.attributes.get("numFmtId", "")
    return int(number) if number.isdecimal() else 0


def _has_what_is_left_out(style: Element) -> bool:
    flags = any(style.flag(name) for name in _FLAGS_LEFT_OUT)
    return flags or style.find(_CHILD_LEFT_OUT) is not None


def _look(style: Element) -> _Look:
    """Return what makes two styles equal, whatever the order of their attributes."""
    attributes = {
        name: value
        for name, value in style.attributes.items()
        if name not in _FLAGS_LEFT_OUT or style.flag(name)
    }
    inside = style.source[style.start_tag_end : style.end_tag_start]
    return tuple(sorted(attributes.items())), inside.strip()


def _count_edit(element: Element, count: int) -> list[Edit]:
    return [set_attribute(element, "count", str(count))] if "count" in element.attributes else []
