"""The map of a workbook: which part holds which sheet, the styles, the texts and the names."""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum
from pathlib import PurePath
from typing import NamedTuple

from workbook_tools.content_types import read_content_types
from workbook_tools.errors import Refusal
from workbook_tools.relations import (
    Package,
    Relation,
    relations_of,
)
from workbook_tools.splice import Edit, EditKind
from workbook_tools.xml_offsets import Element, parse, qualified, set_attribute

TRANSITIONAL = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
STRICT = "http://purl.oclc.org/ooxml/spreadsheetml/main"

_RELATIONS = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_STRICT_RELATIONS = "http://purl.oclc.org/ooxml/officeDocument/relationships"
_EXTENSIONS = {
    "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet.main+xml": ".xlsx",
    "application/vnd.ms-excel.sheet.macroenabled.main+xml": ".xlsm",
    "application/vnd.openxmlformats-officedocument.spreadsheetml.template.main+xml": ".xltx",
    "application/vnd.ms-excel.template.macroenabled.main+xml": ".xltm",
}
_BINARY_TYPE = "application/vnd.ms-excel.sheet.binary.macroenabled.main"
_BEFORE_CALCULATION = (
    "fileVersion",
    "fileSharing",
    "workbookPr",
    "workbookProtection",
    "bookViews",
    "sheets",
    "functionGroups",
    "externalReferences",
    "definedNames",
)


class SheetKind(StrEnum):
    """What a sheet is; only worksheets hold cells to fill."""

    WORKSHEET = "worksheet"
    CHART = "chartsheet"
    MACRO = "xlMacrosheet"
    INTERNATIONAL_MACRO = "xlIntlMacrosheet"
    DIALOG = "dialogsheet"


class SheetState(StrEnum):
    """Whether a sheet is shown; VERY_HIDDEN is out of reach of the program's own menu."""

    VISIBLE = "visible"
    HIDDEN = "hidden"
    VERY_HIDDEN = "veryHidden"


class Sheet(NamedTuple):
    """One sheet; `part` is the part that holds it."""

    name: str
    sheet_id: int
    state: SheetState
    kind: SheetKind
    part: str


class DefinedName(NamedTuple):
    """A name for a formula; `sheet` is the sheet it is local to, None for the whole workbook."""

    name: str
    formula: str
    sheet: str | None
    hidden: bool


@dataclass(frozen=True)
class WorkbookMap:
    """Where everything is.

    Attributes:
        part: the workbook part.
        sheets: in the order of their tabs.
        styles_part, shared_strings_part: None where the workbook has none.
        content_types_part: the list of content types.
        names: the defined names, in the order of the file.
        strict: whether it is of the strict family of namespaces.
        date1904: whether days count from 1904.
        structure_locked: whether sheets may not be added.
        warnings: sentences for the person at the keyboard.
    """

    part: str
    sheets: tuple[Sheet, ...]
    styles_part: str | None
    shared_strings_part: str | None
    content_types_part: str
    names: tuple[DefinedName, ...]
    strict: bool
    date1904: bool
    structure_locked: bool
    warnings: tuple[str, ...]


def read_workbook(package: Package) -> WorkbookMap:
    """Read the map of a workbook.

    Args:
        package: the opened file; the extension of its label is compared with the content.
    Raises:
        Refusal: no workbook, a binary or signed one, one shared with a log of changes, or one
            whose relations lead nowhere.
    """
    content_types = read_content_types(package)
    part = _workbook_part(package)
    content_type = content_types.of(part)
    _check_content_type(content_type, package.label)
    relations = relations_of(package, part)
    if any(relation.kind == "revisionHeaders" for relation in relations):
        raise Refusal(
            f"{package.label} is shared with a log of everybody's changes, which would no longer"
            " fit; stop sharing it in its own program, save it and try again."
        )
    root = parse(package.read(part), part)
    if root.local != "workbook" or root.uri not in (TRANSITIONAL, STRICT):
        raise Refusal(
            f"{package.label}: its main part {part} is no workbook; save it as .xlsx in the program"
            " that made it."
        )
    sheets = _sheets(root, relations, package.label)
    properties = root.find("workbookPr")
    protection = root.find("workbookProtection")
    return WorkbookMap(
        part=part,
        sheets=sheets,
        styles_part=_only_part(relations, "styles", part),
        shared_strings_part=_only_part(relations, "sharedStrings", part),
        content_types_part=content_types.part,
        names=_defined_names(root, sheets),
        strict=root.uri == STRICT,
        date1904=properties is not None and properties.flag("date1904"),
        structure_locked=protection is not None and protection.flag("lockStructure"),
        warnings=tuple(_warnings(root, sheets, content_type, package.label)),
    )


def table_parts(package: Package, sheet: Sheet) -> tuple[str, ...]:
    """Return the parts of the tables that lie on a sheet.

    Raises:
        Refusal: a table that the sheet names is absent.
    """
    tables = [
        relation for relation in relations_of(package, sheet.part) if relation.kind == "table"
    ]
    return tuple(_reached(table, f"sheet {sheet.name!r}") for table in tables)


def recalculate_on_load(xml: bytes, part: str) -> list[Edit]:
    """Return the edits of the workbook part that make Excel recalculate when it opens the file.

    None where the file asks for that already.
    """
    root = parse(xml, part)
    calculation = root.find("calcPr")
    kind = EditKind.RECALCULATE_FLAG_SET
    if calculation is None:
        before = [child for name in _BEFORE_CALCULATION for child in root.find_all(name)]
        position = max((child.end for child in before), default=root.start_tag_end)
        tag = f'<{qualified(root.prefix, "calcPr")} fullCalcOnLoad="1"/>'
        return [Edit(kind, position, position, tag.encode())]
    if calculation.flag("fullCalcOnLoad"):
        return []
    return [set_attribute(calculation, "fullCalcOnLoad", "1", kind)]


def _workbook_part(package: Package) -> str:
    relations = relations_of(package, "")
    if any("/digital-signature/" in relation.type for relation in relations):
        raise Refusal(
            f"{package.label} is digitally signed, and any change would void the signature;"
            " remove the signature in a spreadsheet program, or fill an unsigned copy."
        )
    for relation in relations:
        if relation.kind == "officeDocument" and relation.part is not None:
            return relation.part
    raise Refusal(
        f"{package.label} holds no workbook; save it as .xlsx in the program that made it."
    )


def _check_content_type(content_type: str | None, label: str) -> None:
    if content_type == _BINARY_TYPE:
        raise Refusal(
            f"{label} is a binary workbook (.xlsb); save it as .xlsx in its own program and"
            " fill that."
        )
    if content_type not in _EXTENSIONS:
        raise Refusal(
            f"{label} is no workbook but of the type {content_type or 'unknown'}; save it as"
            " .xlsx in the program that made it."
        )


def _reached(relation: Relation, source: str) -> str:
    if relation.part is None:
        raise Refusal(
            f"{source} points to {relation.target!r}, which is not in the file; open the workbook"
            " in its own program, let it repair the file and save it again."
        )
    return relation.part


def _only_part(relations: tuple[Relation, ...], kind: str, source: str) -> str | None:
    relation = next((relation for relation in relations if relation.kind == kind), None)
    return None if relation is None else _reached(relation, source)


def _sheets(root: Element, relations: tuple[Relation, ...], label: str) -> tuple[Sheet, ...]:
    by_id = {relation.id: relation for relation in relations}
    listed = root.find("sheets")
    sheets = []
    for sheet in listed.find_all("sheet") if listed is not None else ():
        attributes = sheet.attributes
        name = attributes.get("name", "")
        reference = attributes.get(f"{_RELATIONS}|id", attributes.get(f"{_STRICT_RELATIONS}|id"))
        relation = by_id.get(reference or "")
        if relation is None or relation.kind not in list(SheetKind):
            raise Refusal(
                f"sheet {name!r} leads to no part of the file; open the workbook in its own"
                " program, let it repair the file and save it again."
            )
        state, number = attributes.get("state", ""), attributes.get("sheetId", "")
        sheets.append(
            Sheet(
                name=name,
                sheet_id=int(number) if number.isdecimal() else 0,
                state=SheetState(state) if state in list(SheetState) else SheetState.VISIBLE,
                kind=SheetKind(relation.kind),
                part=_reached(relation, f"sheet {name!r}"),
            )
        )
    if not sheets:
        raise Refusal(f"{label} holds no sheets; there is nothing to fill.")
    return tuple(sheets)


def _defined_names(root: Element, sheets: tuple[Sheet, ...]) -> tuple[DefinedName, ...]:
    names = []
    listed = root.find("definedNames")
    for name in listed.find_all("definedName") if listed is not None else ():
        # localSheetId counts the sheets from 0 and knows nothing of sheetId
        index = name.attributes.get("localSheetId")
        local = index is not None and index.isdecimal() and int(index) < len(sheets)
        names.append(
            DefinedName(
                name=name.attributes.get("name", ""),
                formula=name.text,
                sheet=sheets[int(index)].name if index is not None and local else None,
                hidden=name.flag("hidden"),
            )
        )
    return tuple(names)


def _warnings(
    root: Element, sheets: tuple[Sheet, ...], content_type: str | None, label: str
) -> list[str]:
    warnings = []
    fitting = _EXTENSIONS.get(content_type or "")
    extension = PurePath(label).suffix
    if extension.lower() != fitting:
        warnings.append(
            f"The content is that of a {fitting} file, but the name ends in"
            f" {extension or 'nothing'}; Excel may refuse to open it."
        )
    sharing = root.find("fileSharing")
    if sharing is not None and sharing.flag("readOnlyRecommended"):
        warnings.append("Its owner recommends opening it read-only.")
    calculation = root.find("calcPr")
    if calculation is not None and calculation.attributes.get("calcMode") == "manual":
        warnings.append(
            "Calculation is set to manual, so formulas show old results until someone recalculates."
        )
    if calculation is not None and not calculation.flag("fullPrecision", default=True):
        warnings.append(
            "The workbook is set to compute with the digits shown (precision as displayed),"
            " so Excel will cut the new values to their number format."
        )
    if any(sheet.kind in (SheetKind.MACRO, SheetKind.INTERNATIONAL_MACRO) for sheet in sheets):
        warnings.append("It has sheets of macros; what those read cannot be checked.")
    return warnings
