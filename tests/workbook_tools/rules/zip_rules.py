"""R1 to R4: the zip directory, content types, relations and the XML of each part."""

from __future__ import annotations

import struct
import zipfile
from collections import Counter
from collections.abc import Iterator

from lxml import etree

from tests.workbook_tools.rules.package import (
    CONTENT_TYPES,
    OFFICE_RELATIONS,
    Package,
    Problem,
    local,
    namespace_and_name,
)

_LOCAL = struct.Struct("<4s5H3I2H")
_STRICT = "http://purl.oclc.org/ooxml/"
_TRANSITIONAL = "http://schemas.openxmlformats.org/"
# Families are mixed only where these meet; package-level namespaces have no strict form.
_SHARED = ("/package/2006/", "/markup-compatibility/2006")

# Element -> kinds of relation that its r:id may name (ECMA-376 part 1, clauses 18.2 and 18.3).
_RELATION_OF = {
    "sheet": {"worksheet", "chartsheet", "dialogsheet", "xlMacrosheet", "xlIntlMacrosheet"},
    "tablePart": {"table"},
    "drawing": {"drawing"},
    "drawingHF": {"drawing"},
    "legacyDrawing": {"vmlDrawing"},
    "legacyDrawingHF": {"vmlDrawing"},
    "picture": {"image"},
    "oleObject": {"oleObject", "package"},
    "control": {"control", "ctrlProp"},
    "hyperlink": {"hyperlink"},
    "pageSetup": {"printerSettings"},
    "externalReference": {"externalLink", "xlExternalLinkPath"},
    "pivotCache": {"pivotCacheDefinition"},
    "customPr": {"customProperty"},
}


def r1_zip_directory(package: Package) -> Iterator[Problem]:
    """Names unique in any case and with '/'; local header = directory; CRC good; no gaps."""
    counts = Counter(entry.filename.casefold() for entry in package.entries)
    position = 0
    for entry in sorted(package.entries, key=lambda e: e.header_offset):
        name = entry.filename
        if counts[name.casefold()] > 1:
            yield Problem("R1", name, "name occurs twice in the zip")
        if "\\" in getattr(entry, "orig_filename", name):
            yield Problem("R1", name, "name has a backslash")
        if entry.header_offset != position:
            yield Problem("R1", name, "bytes that belong to no member stand before it")
        what, position = _local_header(package.bytes, entry)
        if what:
            yield Problem("R1", name, what)
        if name in package.unreadable:
            yield Problem("R1", name, f"cannot be read ({package.unreadable[name]})")
    end = package.bytes.rfind(b"PK\5\6")
    size, start, comment = struct.unpack_from("<2IH", package.bytes, end + 12)
    if start != position or start + size != end:
        yield Problem("R1", "", "bytes that belong to nothing stand around the directory")
    if end + 22 + comment != len(package.bytes):
        yield Problem("R1", "", "the file goes on after the end of the zip")


def _local_header(data: bytes, entry: zipfile.ZipInfo) -> tuple[str, int]:
    """What disagrees between the local header and the directory, and where the member ends."""
    start = entry.header_offset
    fields = _LOCAL.unpack_from(data, start)
    signature, _, flags, method, _, _, crc, packed, size, name_length, extra_length = fields
    body = start + _LOCAL.size + name_length + extra_length
    name = data[start + _LOCAL.size : body - extra_length]
    end = body + entry.compress_size
    written = (crc, packed, size)
    listed = (entry.CRC, entry.compress_size, entry.file_size)
    if flags & 8:
        signed = data[end : end + 4] == b"PK\7\10"
        descriptor = struct.unpack_from("<3I", data, end + 4 * signed)
        end += 12 + 4 * signed
        if descriptor != listed:
            return "data descriptor disagrees with the directory", end
        written = listed if not any(written) else written
    encoding = "utf-8" if flags & 0x800 else "cp437"
    if signature != b"PK\3\4":
        return "no local header where the directory says", end
    if name.decode(encoding, "replace") != getattr(entry, "orig_filename", entry.filename):
        return "local header has another name than the directory", end
    if flags != entry.flag_bits or method != entry.compress_type:
        return "local header has other flags or another method than the directory", end
    if written != listed:
        return "local header has other sizes or another CRC than the directory", end
    if method not in (0, 8):
        return "method is neither stored nor deflated", end
    return "", end


def r2_types_and_targets(package: Package) -> Iterator[Problem]:
    """Every part has a content type; every override and internal target exists."""
    for name in package.parts:
        if package.content_type(name) is None:
            yield Problem("R2", name, "has no content type")
    for name in package.type_entries[1]:
        if package.find(name) is None:
            yield Problem("R2", CONTENT_TYPES, f"names /{name}, which is not there")
    for part in ["", *package.parts]:
        for relation in package.relations(part):
            if relation.target and not relation.external and not package.find(relation.target):
                what = f"relation {relation.id} leads to /{relation.target}, which is not there"
                yield Problem("R2", part, what)


def r3_relation_ids(package: Package) -> Iterator[Problem]:
    """Ids unique in each relations part; every r:id leads to a relation of the right kind."""
    for part in ["", *package.parts]:
        relations = package.relations(part)
        for name, count in Counter(r.id for r in relations).items():
            if count > 1 or not name:
                yield Problem("R3", part, f"relation id {name!r} occurs {count} times")
        kinds = {relation.id: relation.kind for relation in relations}
        root = package.tree(part) if part and package.is_xml(part) else None
        for element in root.iter(etree.Element) if root is not None else ():
            yield from _wrong_relations(part, element, kinds)


def _wrong_relations(
    part: str, element: etree._Element, kinds: dict[str, str]
) -> Iterator[Problem]:
    for key, value in element.attrib.items():
        if not value or namespace_and_name(key)[0] not in OFFICE_RELATIONS:
            continue
        name = namespace_and_name(element.tag)[1]
        allowed = _RELATION_OF.get(local(element))
        if value not in kinds:
            yield Problem("R3", part, f"<{name}> names relation {value}, which is missing")
        elif allowed and kinds[value] not in allowed:
            what = f"<{name}> names relation {value} of kind {kinds[value]}"
            yield Problem("R3", part, what)


def r4_well_formed(package: Package) -> Iterator[Problem]:
    """XML well-formed with legal characters, no document type, one family of namespaces."""
    for name in [CONTENT_TYPES, *package.parts]:
        if name not in package.contents or not package.is_xml(name):
            continue
        root = package.tree(name)
        if root is None:
            yield Problem("R4", name, "is not well-formed XML")
            continue
        if root.getroottree().docinfo.doctype:
            yield Problem("R4", name, "has a document type definition")
        families = {_family(uri) for uri in _namespaces(root)} - {""}
        if len(families) > 1:
            yield Problem("R4", name, "mixes strict and transitional namespaces")


def _namespaces(root: etree._Element) -> set[str]:
    names = {element.tag for element in root.iter(etree.Element)}
    names |= {key for element in root.iter(etree.Element) for key in element.attrib}
    return {namespace_and_name(name)[0] for name in names}


def _family(uri: str) -> str:
    if any(piece in uri for piece in _SHARED):
        return ""
    return next((family for family in (_STRICT, _TRANSITIONAL) if uri.startswith(family)), "")


def changed_encodings(before: Package, after: Package) -> Iterator[Problem]:
    """R4 for an edit: each part keeps its byte order mark, declared encoding and root name."""
    for name, data in after.contents.items():
        old, new = before.tree(name), after.tree(name)
        if old is None or new is None:
            continue
        same_mark = before.contents[name][:3] == data[:3]
        encodings = [tree.getroottree().docinfo.encoding for tree in (old, new)]
        if not same_mark or encodings[0] != encodings[1] or old.tag != new.tag:
            yield Problem("R4", name, "encoding or root element is not what it was")
