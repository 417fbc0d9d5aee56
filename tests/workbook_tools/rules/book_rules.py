"""R27 and R28: defined names and the list of sheets."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterator

from tests.workbook_tools.rules.package import Package, Problem, descendants

_NAME = re.compile(r"[^\W\d]|[_\\]")
_REST = re.compile(r"[\w.?\\]*$")
_LIKE_A_CELL = re.compile(r"([A-Za-z]{1,3}[0-9]+|[RrCc]|[Rr][0-9]*[Cc][0-9]*|true|false)$", re.I)
_FORBIDDEN = set("[]:*?/\\")


def r27_defined_names(package: Package) -> Iterator[Problem]:
    """Defined names are legal and unique in their scope, which exists."""
    part, sheets = package.workbook_part, len(package.sheets)
    keys: Counter[tuple[str, str]] = Counter()
    for item in descendants(package.workbook, "definedName"):
        name, scope = item.get("name", ""), item.get("localSheetId", "")
        keys[name.casefold(), scope] += 1
        if not _is_legal(name):
            yield Problem("R27", part, f"{name!r} is no legal name")
        if scope and not (scope.isdecimal() and int(scope) < sheets):
            yield Problem("R27", part, f"name {name!r} belongs to a sheet that does not exist")
    for (name, scope), count in keys.items():
        if count > 1:
            yield Problem("R27", part, f"name {name!r} occurs twice in scope {scope or 'workbook'}")


def _is_legal(name: str) -> bool:
    if not 0 < len(name) <= 255 or not _NAME.match(name) or not _REST.match(name[1:]):
        return False
    return not _LIKE_A_CELL.match(name)


def r28_sheet_list(package: Package) -> Iterator[Problem]:
    """Sheet names and ids are legal and unique; the active sheet exists; one is visible."""
    part, sheets = package.workbook_part, package.sheets
    for name, count in Counter(sheet.name.casefold() for sheet in sheets).items():
        if count > 1:
            yield Problem("R28", part, f"sheet name {name!r} occurs twice")
    for number, count in Counter(sheet.sheet_id for sheet in sheets).items():
        if count > 1 or not number.isdecimal() or not 1 <= int(number) <= 65_534:
            yield Problem("R28", part, f"sheet id {number!r} is not unique or out of range")
    for sheet in sheets:
        name = sheet.name
        quoted = name.startswith("'") or name.endswith("'")
        if not 1 <= len(name) <= 31 or quoted or _FORBIDDEN & set(name):
            yield Problem("R28", part, f"{name!r} is no legal sheet name")
    for view in descendants(package.workbook, "workbookView"):
        if int(view.get("activeTab", 0)) >= len(sheets):
            yield Problem("R28", part, "the active sheet does not exist")
    if not any(sheet.state == "visible" for sheet in sheets):
        yield Problem("R28", part, "no sheet is visible")
