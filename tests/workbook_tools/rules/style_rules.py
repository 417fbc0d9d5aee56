"""R12, R13 and R29: what styles, differential formats and metadata refer to."""

from __future__ import annotations

from collections.abc import Iterator

from lxml import etree

from tests.workbook_tools.rules.package import (
    Package,
    Problem,
    child,
    children,
    descendants,
    local,
    words,
)
from tests.workbook_tools.rules.sheet_view import worksheets

MOST_FORMATS = 64_000  # Excel's documented limit of cell formats
_FIRST_OWN_FORMAT = 164  # lower ids are built in
_DXF_KEYS = frozenset(
    words(
        "dxfId headerRowDxfId dataDxfId totalsRowDxfId headerRowBorderDxfId tableBorderDxfId "
        "totalsRowBorderDxfId"
    )
)


def r12_style_parts(package: Package) -> Iterator[Problem]:
    """Each xf names a font, fill, border, base style and number format that exist."""
    styles = package.workbook_tree("styles")
    if styles is None:
        return
    part = package.related(package.workbook_part, "styles")[0]
    formats = {
        f.get("numFmtId", ""): f.get("formatCode", "") for f in descendants(styles, "numFmt")
    }
    for number, code in formats.items():
        if len(code) > 255:
            yield Problem("R12", part, f"the code of number format {number} is too long")
    totals = {
        key: len(children(child(styles, group), item))
        for key, group, item in (
            ("fontId", "fonts", "font"),
            ("fillId", "fills", "fill"),
            ("borderId", "borders", "border"),
            ("xfId", "cellStyleXfs", "xf"),
        )
    }
    for group in ("cellStyleXfs", "cellXfs"):
        for index, xf in enumerate(children(child(styles, group), "xf")):
            for what in _missing(xf, totals, formats):
                yield Problem("R12", part, f"{group} {index} names {what}, which does not exist")
    for style in children(child(styles, "cellStyles"), "cellStyle"):
        if int(style.get("xfId", 0)) >= totals["xfId"]:
            yield Problem("R12", part, f"cell style {style.get('name')!r} has no xf")


def _missing(xf: etree._Element, totals: dict[str, int], formats: dict[str, str]) -> Iterator[str]:
    for key, number in totals.items():
        if key == "xfId" and xf.getparent().tag.endswith("}cellStyleXfs"):
            continue
        if int(xf.get(key, 0)) >= max(number, 1):
            yield f"{key} {xf.get(key)}"
    format_id = xf.get("numFmtId", "0")
    if int(format_id) >= _FIRST_OWN_FORMAT and format_id not in formats:
        yield f"number format {format_id}"


def r13_format_limit(package: Package) -> Iterator[Problem]:
    """There are at most 64,000 cell formats."""
    styles = package.workbook_tree("styles")
    if len(children(child(styles, "cellXfs"), "xf")) > MOST_FORMATS:
        yield Problem("R13", "styles", "has more cell formats than Excel takes")


def r29_differential_and_metadata(package: Package) -> Iterator[Problem]:
    """Differential formats and cell metadata that are named exist."""
    dxfs = len(children(child(package.workbook_tree("styles"), "dxfs"), "dxf"))
    metadata = package.workbook_tree("sheetMetadata")
    blocks = {
        "cm": len(children(child(metadata, "cellMetadata"), "bk")),
        "vm": len(children(child(metadata, "valueMetadata"), "bk")),
    }
    tables = [name for part in worksheets(package) for name in package.related(part, "table")]
    for part in [*worksheets(package), *tables]:
        root = package.tree(part)
        for element in root.iter(etree.Element) if root is not None else ():
            for key in _DXF_KEYS & set(element.keys()):
                if int(element.get(key, -1)) >= dxfs:
                    what = f"<{local(element)}> names a {key} that does not exist"
                    yield Problem("R29", part, what)
    for part, view in worksheets(package).items():
        for cell in view.cells:
            for key, number in blocks.items():
                if int(cell.element.get(key, 0)) > number:
                    yield Problem("R29", part, f"{cell.name} names {key} that does not exist")
