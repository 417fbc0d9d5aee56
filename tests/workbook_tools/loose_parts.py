"""A package made of loose parts, for tests of what lies above the zip file."""

from __future__ import annotations

from collections.abc import Mapping
from typing import NamedTuple

from workbook_tools.splice import Edit, spliced

MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
STRICT_MAIN = "http://purl.oclc.org/ooxml/spreadsheetml/main"
DOCUMENT = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
STRICT_DOCUMENT = "http://purl.oclc.org/ooxml/officeDocument/relationships"
PACKAGE = "http://schemas.openxmlformats.org/package/2006"
SHEET_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml"


class Entry(NamedTuple):
    name: str


class LooseParts:
    """Parts by name; finds a name in any case, as the zip reader does."""

    def __init__(self, parts: Mapping[str, str | bytes], label: str = "log.xlsx") -> None:
        self.label = label
        self.parts = {
            name: content.encode() if isinstance(content, str) else content
            for name, content in parts.items()
        }

    def find(self, name: str) -> Entry | None:
        return next((Entry(own) for own in self.parts if own.lower() == name.lower()), None)

    def read(self, name: str) -> bytes:
        return self.parts[name]


def relations(*lines: tuple[str, str, str]) -> str:
    """Return a relations part of (id, type, target); a type without a colon is a document one."""
    inside = "".join(
        f'<Relationship Id="{name}" Type="{kind if ":" in kind else f"{DOCUMENT}/{kind}"}"'
        f' Target="{target}"/>'
        for name, kind, target in lines
    )
    return f'<Relationships xmlns="{PACKAGE}/relationships">{inside}</Relationships>'


def content_types(main: str = SHEET_TYPE, part: str = "/xl/workbook.xml") -> str:
    return (
        f'<Types xmlns="{PACKAGE}/content-types"><Default Extension="xml" ContentType="text/xml"/>'
        f'<Override PartName="{part}" ContentType="{main}"/></Types>'
    )


def workbook(inside: str, family: str = MAIN, document: str = DOCUMENT) -> str:
    return f'<workbook xmlns="{family}" xmlns:r="{document}">{inside}</workbook>'


def small_book(**changed: str) -> dict[str, str]:
    """Return the parts of a workbook of one sheet; `changed` replaces what stands in its parts.

    Keys: `types`, `root` (relations of the package), `inside` (of the workbook element), `links`
    (relations of the workbook).
    """
    return {
        "[Content_Types].xml": changed.get("types", content_types()),
        "_rels/.rels": changed.get(
            "root", relations(("rId1", "officeDocument", "xl/workbook.xml"))
        ),
        "xl/workbook.xml": workbook(
            changed.get("inside", '<sheets><sheet name="Log" sheetId="1" r:id="rId1"/></sheets>')
        ),
        "xl/_rels/workbook.xml.rels": changed.get(
            "links", relations(("rId1", "worksheet", "worksheets/sheet1.xml"))
        ),
        "xl/worksheets/sheet1.xml": f'<worksheet xmlns="{MAIN}"><sheetData/></worksheet>',
    }


def applied(xml: bytes, edits: list[Edit]) -> bytes:
    """Return the part with the edits carried out."""
    return b"".join(spliced(xml, edits))
