"""Small random sheets, written as the XML standard allows and hardly any program does.

What they hold is read back with lxml (`rules.sheet_view`), so nothing here says what should be
found in them.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from hypothesis import strategies as st
from lxml import etree

from tests.workbook_tools.loose_parts import MAIN
from tests.workbook_tools.rules.sheet_view import SheetView, letters

LAST_ROW, LAST_COLUMN = 9, 6
Draw = Callable[[st.SearchStrategy[Any]], Any]

# What stands between elements and looks like something that it is not.
_BETWEEN = (
    "",
    "\n  ",
    "<!-- <row r='99'><c r='Z99'><v>7</v></c></row> -->",
    "<?log <c r='A1'/> ?>",
    "<!-- </sheetData> -->",
)
_TEXTS = ("r=&quot;A1&quot;", '<![CDATA[<c r="B2"><v>3</v></c>]]>', "a &lt;v&gt;5&lt;/v&gt;", "")
_NUMBERS = ("0", "1.5", "-0.25", "2e-3", "6.02E+23", "12345678901234567", " 7.5 ")


def view_of(xml: bytes) -> SheetView:
    """The sheet as lxml reads it."""
    return SheetView(etree.fromstring(xml, etree.XMLParser(remove_comments=True, remove_pis=True)))


@st.composite
def odd_sheets(draw: Draw, implicit: bool = True) -> bytes:
    """A worksheet part.

    Args:
        implicit: whether rows and cells may leave out where they are.
    """
    prefix = draw(st.sampled_from(("", "", "x:")))
    pen = _Pen(draw, prefix, implicit)
    declared = f'xmlns{":x" if prefix else ""}="{MAIN}"'
    head = draw(st.sampled_from(("", f'<{prefix}dimension ref="A1"/>', pen.columns())))
    tail = draw(st.sampled_from(("", f"<{prefix}pageMargins/>", _BETWEEN[4])))
    body = draw(st.sampled_from(("<?xml version='1.0' encoding='utf-8'?>", "\ufeff", "")))
    body += f'<{prefix}worksheet {declared} xmlns:e="urn:invented">{pen.between()}{head}'
    rows = "".join(pen.rows())
    if rows or draw(st.booleans()):
        body += f"<{prefix}sheetData{pen.blank()}>{rows}</{prefix}sheetData{pen.blank()}>"
    else:
        body += f"<{prefix}sheetData{pen.blank()}/>"
    return f"{body}{tail}</{prefix}worksheet>".encode()


class _Pen:
    """Writes elements in a random hand."""

    def __init__(self, draw: Draw, prefix: str, implicit: bool) -> None:
        self.draw = draw
        self.prefix = prefix
        self.implicit = implicit
        # Half of the sheets are written as programs do, so that cells are found by plain search.
        self.plain = draw(st.booleans())

    def rarely(self) -> bool:
        return not self.plain and self.draw(st.integers(0, 3)) == 0

    def between(self) -> str:
        return self.draw(st.sampled_from(_BETWEEN)) if self.rarely() else ""

    def blank(self) -> str:
        return self.draw(st.sampled_from((" ", "\n", "\t "))) if self.rarely() else ""

    def columns(self) -> str:
        p = self.prefix
        return f'<{p}cols><{p}col min="2" max="3" width="9"/></{p}cols>'

    def tag(self, name: str, attributes: dict[str, str]) -> str:
        """A start tag without its end, in any order and with either kind of quotes."""
        pairs = list(attributes.items())
        if self.rarely():
            pairs = self.draw(st.permutations(pairs))
        text = f"<{self.prefix}{name}"
        for key, value in pairs:
            quote = "'" if self.rarely() else '"'
            gap, around = self.blank() or " ", self.blank()
            text += f"{gap}{key}{around}={around}{quote}{value}{quote}"
        return text + self.blank()

    def rows(self) -> list[str]:
        rows, number = [], 0
        while number < LAST_ROW and self.draw(st.integers(0, 7)):
            said = not (self.implicit and self.rarely())
            number += self.draw(st.integers(1, 3)) if said else 1
            attributes = {"r": str(number)} if said else {}
            if self.draw(st.booleans()):
                attributes["spans"] = "1:3"
            if self.rarely():
                attributes["e:remark"] = "a > b, r='1'".replace("'", "&apos;")
            tag, cells = self.tag("row", attributes), self.cells(number)
            closing = f"</{self.prefix}row{self.blank()}>"
            empty = not cells and self.draw(st.booleans())
            rows.append(self.between() + (f"{tag}/>" if empty else f"{tag}>{cells}{closing}"))
        return [*rows, self.between()]

    def cells(self, row: int) -> str:
        text, column = "", 0
        while column < LAST_COLUMN and self.draw(st.integers(0, 3)):
            said = not (self.implicit and self.rarely())
            column += self.draw(st.integers(1, 2)) if said else 1
            attributes = {"r": f"{letters(column)}{row}"} if said else {}
            if self.draw(st.booleans()):
                attributes["s"] = str(self.draw(st.integers(0, 3)))
            text += self.between() + self.cell(attributes)
        return text

    def cell(self, attributes: dict[str, str]) -> str:
        kind, content = self.draw(st.sampled_from(_CONTENTS))(self)
        if kind:
            attributes["t"] = kind
        tag = self.tag("c", attributes)
        if not content and self.draw(st.booleans()):
            return f"{tag}/>"
        return f"{tag}>{content}</{self.prefix}c{self.blank()}>"

    def value(self, text: str) -> str:
        p = self.prefix
        if self.rarely():
            text = f"<![CDATA[{text}]]>"
        if self.rarely():
            text = f"<!-- 9 -->{text}<?keep 8?>"
        return f"{self.blank()}<{p}v{self.blank()}>{text}</{p}v{self.blank()}>"

    def number(self) -> tuple[str, str]:
        return self.draw(st.sampled_from(("", "n"))), self.value(
            self.draw(st.sampled_from(_NUMBERS))
        )

    def nothing(self) -> tuple[str, str]:
        p = self.prefix
        return "", self.draw(st.sampled_from(("", "", f"<{p}v/>", f"<{p}v></{p}v>", "<!-- -->")))

    def formula(self) -> tuple[str, str]:
        p = self.prefix
        text = self.draw(st.sampled_from(("A1&lt;2", '<![CDATA["<f>"]]>', "SUM(B2:B3)")))
        return "str", f"<{p}f>{text}</{p}f>{self.value('yes')}"

    def inline(self) -> tuple[str, str]:
        p, text = self.prefix, self.draw(st.sampled_from(_TEXTS))
        plain = f"<{p}t>{text}</{p}t>"
        rich = f'<{p}r><{p}rPr><{p}color rgb="FF0000"/></{p}rPr>{plain}</{p}r><{p}r>{plain}</{p}r>'
        spoken = f'<{p}rPh sb="0" eb="1"><{p}t>not shown</{p}t></{p}rPh>'
        inside = self.draw(st.sampled_from((plain, rich, rich + spoken)))
        return "inlineStr", f"<{p}is>{inside}</{p}is>"

    def sign(self) -> tuple[str, str]:
        return self.draw(st.sampled_from((("b", self.value("1")), ("e", self.value("#N/A")))))

    def extended(self) -> tuple[str, str]:
        p = self.prefix
        inside = '<e:c r="A1"><e:v>4</e:v></e:c>'
        return "", f'{self.value("3")}<{p}extLst><{p}ext uri="u">{inside}</{p}ext></{p}extLst>'


_CONTENTS: tuple[Callable[[_Pen], tuple[str, str]], ...] = (
    _Pen.number,
    _Pen.number,
    _Pen.nothing,
    _Pen.formula,
    _Pen.inline,
    _Pen.sign,
    _Pen.extended,
)
