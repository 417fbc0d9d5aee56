"""Why a workbook may be refused, found without the fill's help."""

from __future__ import annotations

import zipfile
from collections import Counter
from pathlib import Path

from tests.workbook_tools.rules.package import Package
from tests.workbook_tools.rules.sheet_view import worksheets

_OLE = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"


def true_reasons(path: Path) -> list[str]:
    """All reasons, in words of our own; empty for a workbook that has to be filled."""
    if path.read_bytes().startswith(_OLE):
        return ["encrypted, or of the old binary kind"]
    if not zipfile.is_zipfile(path):
        return ["no zip"]
    with zipfile.ZipFile(path) as archive:
        names = [entry.orig_filename for entry in archive.infolist()]
        entries = archive.infolist()
    folded = Counter(name.casefold() for name in names)
    found = []
    if not names:
        found.append("an empty zip")
    elif "[content_types].xml" not in folded:
        found.append("no list of content types")
    if any("\\" in name for name in names):
        found.append("part names with backslashes")
    if any(count > 1 for count in folded.values()):
        found.append("two parts of one name")
    if any(name.startswith("_xmlsignatures/") for name in names):
        found.append("digitally signed")
    if any("/revisions/" in name for name in names):
        found.append("shared with a log of changes")
    if any(entry.flag_bits & 1 for entry in entries):
        found.append("zip encryption")
    return found or _inner_reasons(path)


def _inner_reasons(path: Path) -> list[str]:
    package = Package(path)
    dangling = [
        relation.target
        for relation in package.relations(package.workbook_part)
        if not relation.external and not package.find(relation.target)
    ]
    if dangling:
        return [f"a relation to {dangling[0]}, which is not there"]
    if not worksheets(package):
        return ["no worksheet"]
    return []
