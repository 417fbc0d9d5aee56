"""Legal XML that other programs write and XlsxWriter does not.

Each function takes the parts of a workbook and returns those that change; what it makes is allowed
by ECMA-376 and was seen in workbooks of real programs unless its sentence says otherwise.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping

from tests.workbook_tools.repack import swapped
from tests.workbook_tools.strict_names import to_strict

Parts = Mapping[str, bytes]
Changes = dict[str, bytes | None]

MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
SHEET = "xl/worksheets/sheet1.xml"
STYLES = "xl/styles.xml"
WORKBOOK = "xl/workbook.xml"
TYPES = "[Content_Types].xml"
WORKBOOK_RELATIONS = "xl/_rels/workbook.xml.rels"


def cells_of(change: Callable[[str], str]) -> Callable[[Parts], Changes]:
    """A change of the first sheet's text."""
    return lambda parts: {SHEET: change(parts[SHEET].decode()).encode()}


def quiet(parts: Parts) -> Changes:
    """No order to recalculate on load, which XlsxWriter always gives."""
    return {WORKBOOK: parts[WORKBOOK].replace(b' fullCalcOnLoad="1"', b"")}


def prefixed(parts: Parts) -> Changes:
    """Every spreadsheet element under the prefix x."""
    changes: Changes = {}
    for name, data in parts.items():
        default = f'xmlns="{MAIN}"'.encode()
        if default in data:
            data = data.replace(default, f'xmlns:x="{MAIN}"'.encode())
            changes[name] = re.sub(rb"<(/?)(?=[A-Za-z]\w*[\s/>])", rb"<\1x:", data)
    return changes


def without_addresses(text: str) -> str:
    """Neither rows nor cells say where they are, and the sheet has no dimension."""
    text = re.sub(r'<(row|c) r="[A-Z]*\d+"', r"<\1", text)
    text = re.sub(r' spans="[\d:]+"', "", text)
    return re.sub(r"<dimension [^>]*/>", "", text)


def strict(parts: Parts) -> Changes:
    """The namespaces of ISO/IEC 29500 strict."""
    changes: Changes = {}
    for name, data in parts.items():
        renamed = to_strict(data)
        if name == WORKBOOK:
            renamed = renamed.replace(b"<workbook ", b'<workbook conformance="strict" ', 1)
        if renamed != data:
            changes[name] = renamed
    return changes


def without_styles(parts: Parts) -> Changes:
    """No style part, no relation and no content type for it; and no theme."""
    relations = re.sub(
        rb'<Relationship [^>]*"(styles|theme/\w+)\.xml"/>', b"", parts[WORKBOOK_RELATIONS]
    )
    types = re.sub(rb'<Override PartName="/xl/(styles|theme/\w+)\.xml"[^>]*/>', b"", parts[TYPES])
    return {
        STYLES: None,
        "xl/theme/theme1.xml": None,
        WORKBOOK_RELATIONS: relations,
        TYPES: types,
    }


def without_calculation(parts: Parts) -> Changes:
    """A workbook part without calcPr."""
    return {WORKBOOK: re.sub(rb"<calcPr [^>]*/>", b"", parts[WORKBOOK])}


def oddly_written(text: str) -> str:
    """One sheet as a careful but unusual program might write it.

    Byte order mark, single quotes, blanks and line ends between elements and in tags, comments,
    a processing instruction and CDATA in the middle of the rows, '>' in an attribute.
    """
    head, data, tail = re.split("(<sheetData>.*</sheetData>)", text, maxsplit=1, flags=re.S)
    data = data.replace('"', "'").replace("</row>", "</row>\r\n  ").replace("<c ", "\n <c  ")
    data = re.sub(r"<v>([\d.]+)</v>", r"<v ><![CDATA[\1]]></v >", data)
    data = data.replace(
        "<row r='3'", "<!-- <row r='3'> the \"header\" --><?log keep='3>2'?><row r='3'"
    )
    head = head.replace("<sheetView ", "<sheetView rightToLeft = '0' ")
    return "\ufeff" + head + data + "<!-- end of rows -->" + tail


def with_empty_elements(text: str) -> str:
    """Empty rows, gaps between rows, bare styled cells, a pair of tags with nothing in it."""
    text = re.sub(r'<row r="(6|7)"([^>]*)>.*?</row>', r'<row r="\1"\2/>', text)
    text = re.sub(r'<row r="8"[^>]*>.*?</row>', "", text)
    text = re.sub(r'<row r="9"([^>]*)>.*?</row>', r'<row r="9"\1></row>', text)
    return re.sub(r'(<c r="E1[0-2]" s="\d+")/>', r"\1></c>", text)


def with_shared_formulas(text: str) -> str:
    """The doubled redshifts of column E as one shared formula."""
    first, *others = re.findall(r"<f>(B\d+\*2)</f>", text)
    rows = [int(formula[1:-2]) for formula in (first, *others)]
    master = f'<f t="shared" ref="E{rows[0]}:E{rows[-1]}" si="0">{first}</f>'
    text = text.replace(f"<f>{first}</f>", master)
    for formula in others:
        text = text.replace(f"<f>{formula}</f>", '<f t="shared" si="0"/>')
    return text


def as_template(parts: Parts) -> Changes:
    """A template instead of a workbook."""
    kind = "officedocument.spreadsheetml.{}.main+xml"
    return {TYPES: swapped(parts[TYPES], kind.format("sheet"), kind.format("template"))}
