"""R5 and R11: the order of child elements and the count attributes."""

from __future__ import annotations

from collections.abc import Iterator

from lxml import etree

from tests.workbook_tools.rules.package import (
    COMPATIBILITY,
    Package,
    Problem,
    children,
    local,
    words,
)

# ECMA-376 part 1: CT_Worksheet, CT_Workbook, CT_Stylesheet, CT_Table, CT_Cell, CT_Row.
ORDER = {
    "worksheet": words(
        "sheetPr dimension sheetViews sheetFormatPr cols sheetData sheetCalcPr sheetProtection "
        "protectedRanges scenarios autoFilter sortState dataConsolidate customSheetViews "
        "mergeCells phoneticPr conditionalFormatting dataValidations hyperlinks printOptions "
        "pageMargins pageSetup headerFooter rowBreaks colBreaks customProperties cellWatches "
        "ignoredErrors smartTags drawing legacyDrawing legacyDrawingHF drawingHF picture "
        "oleObjects controls webPublishItems tableParts extLst"
    ),
    "workbook": words(
        "fileVersion fileSharing workbookPr workbookProtection bookViews sheets functionGroups "
        "externalReferences definedNames calcPr oleSize customWorkbookViews pivotCaches "
        "smartTagPr smartTagTypes webPublishing fileRecoveryPr webPublishObjects extLst"
    ),
    "styleSheet": words(
        "numFmts fonts fills borders cellStyleXfs cellXfs cellStyles dxfs tableStyles colors extLst"
    ),
    "table": words("autoFilter sortState tableColumns tableStyleInfo extLst"),
    "c": words("f v is extLst"),
    "row": words("c extLst"),
    "xf": words("alignment protection extLst"),
}
_REPEATED = {
    "worksheet": {"cols", "conditionalFormatting"},
    "workbook": {"fileRecoveryPr"},
    "row": {"c"},
}

# Parent -> the child that its count attribute counts.
COUNTED = {
    "numFmts": "numFmt",
    "fonts": "font",
    "fills": "fill",
    "borders": "border",
    "cellStyleXfs": "xf",
    "cellXfs": "xf",
    "cellStyles": "cellStyle",
    "dxfs": "dxf",
    "tableStyles": "tableStyle",
    "tableColumns": "tableColumn",
    "tableParts": "tablePart",
    "mergeCells": "mergeCell",
    "dataValidations": "dataValidation",
}


def r5_child_order(package: Package) -> Iterator[Problem]:
    """Children of worksheet, workbook, styleSheet, table, row, c and xf in schema order."""
    for part in package.parts:
        root = package.tree(part) if package.is_xml(part) else None
        for element in root.iter(etree.Element) if root is not None else ():
            parent = local(element)
            if parent in ORDER and not _is_external(element):
                what = _disorder(parent, [local(item) for item in _flattened(element)])
                if what:
                    place = f" {element.get('r')}" if element.get("r") else ""
                    yield Problem("R5", part, f"<{parent}>{place}: {what}")


def _is_external(element: etree._Element) -> bool:
    """Whether it is a row of a cached external sheet, which has other children."""
    data = element.getparent()
    if data is None or local(data) != "sheetData":
        return False
    return local(data.getparent()) != "worksheet"


def _flattened(element: etree._Element) -> Iterator[etree._Element]:
    """Children, with those of a first alternative in place of AlternateContent."""
    for item in element:
        if item.tag == f"{{{COMPATIBILITY}}}AlternateContent":
            yield from item[0] if len(item) else ()
        else:
            yield item


def _disorder(parent: str, names: list[str]) -> str:
    order, last, seen = ORDER[parent], -1, set()
    for name in names:
        if not name:  # comments and extensions
            continue
        if name not in order:
            return f"<{name}> does not belong there"
        place = order.index(name)
        if place < last:
            return f"<{name}> comes too late"
        if name in seen and name not in _REPEATED.get(parent, ()):
            return f"<{name}> comes twice"
        last = place
        seen.add(name)
    return ""


def r11_counts(package: Package) -> Iterator[Problem]:
    """Count attributes equal the number of children, where they are present."""
    for part in package.parts:
        root = package.tree(part) if package.is_xml(part) else None
        for element in root.iter(etree.Element) if root is not None else ():
            name = local(element)
            if name not in COUNTED and name != "sst":
                continue
            key = "uniqueCount" if name == "sst" else "count"
            number = len(children(element, COUNTED.get(name, "si")))
            if element.get(key, str(number)) != str(number):
                yield Problem("R11", part, f"<{name}> has a wrong {key}")
