"""Reading a workbook package for the checker: zip directory, parts, relations, content types.

Written apart from `workbook_tools` on purpose: a checker that shares code with the fill would
share its mistakes.
"""

from __future__ import annotations

import posixpath
import zipfile
from collections.abc import Iterator
from functools import cached_property, lru_cache
from pathlib import Path
from typing import NamedTuple
from urllib.parse import unquote

from lxml import etree

MAIN = (
    "http://schemas.openxmlformats.org/spreadsheetml/2006/main",
    "http://purl.oclc.org/ooxml/spreadsheetml/main",
)
OFFICE_RELATIONS = (
    "http://schemas.openxmlformats.org/officeDocument/2006/relationships",
    "http://purl.oclc.org/ooxml/officeDocument/relationships",
)
COMPATIBILITY = "http://schemas.openxmlformats.org/markup-compatibility/2006"
CONTENT_TYPES = "[Content_Types].xml"


class Problem(NamedTuple):
    """One breach of a rule; the text never quotes a total that a harmless edit changes."""

    rule: str
    part: str
    what: str

    def __str__(self) -> str:
        return f"{self.rule} {self.part}: {self.what}"


class Relation(NamedTuple):
    """One relationship of a part; `target` is a part name, or the raw text where external."""

    id: str
    kind: str  # the last step of the Type
    target: str
    external: bool


class SheetEntry(NamedTuple):
    """One `<sheet>` of the workbook part."""

    name: str
    sheet_id: str
    state: str
    part: str
    kind: str


def words(text: str) -> list[str]:
    """The blank-separated words of a table in this checker."""
    return text.split()


def local(element: etree._Element) -> str:
    """Local name of an element of the spreadsheet namespaces, else '' (comments, extensions)."""
    return _local_of_tag(element.tag) if isinstance(element.tag, str) else ""


@lru_cache(maxsize=4096)
def _local_of_tag(tag: str) -> str:
    uri, name = namespace_and_name(tag)
    return name if uri in MAIN else ""


@lru_cache(maxsize=4096)
def namespace_and_name(tag: str) -> tuple[str, str]:
    """The two halves of lxml's `{uri}name`; uri is '' where there is none."""
    uri, _, name = tag.rpartition("}")
    return uri[1:], name


def children(element: etree._Element | None, name: str) -> list[etree._Element]:
    """Direct children of that spreadsheet name."""
    return [] if element is None else [child for child in element if local(child) == name]


def child(element: etree._Element | None, name: str) -> etree._Element | None:
    """First direct child of that spreadsheet name."""
    return next(iter(children(element, name)), None)


def descendants(element: etree._Element | None, *names: str) -> Iterator[etree._Element]:
    """All spreadsheet elements of these names, below and including `element`."""
    if element is not None:
        for item in element.iter():
            if local(item) in names:
                yield item


def relation_id(element: etree._Element, name: str = "id") -> str | None:
    """The `r:id` (or `r:embed` ...) of an element."""
    values = (element.get(f"{{{uri}}}{name}") for uri in OFFICE_RELATIONS)
    return next((value for value in values if value is not None), None)


class Package:
    """A workbook opened for checking; trees are parsed once."""

    def __init__(self, path: Path) -> None:
        self.path = path
        self.bytes = path.read_bytes()
        self.unreadable: dict[str, str] = {}  # member -> the zip library's reason
        with zipfile.ZipFile(path) as archive:
            self.entries = archive.infolist()
            self.contents: dict[str, bytes] = {}
            for entry in self.entries:
                try:
                    self.contents[entry.filename] = archive.read(entry)
                except (zipfile.BadZipFile, NotImplementedError, RuntimeError) as error:
                    self.contents[entry.filename] = b""
                    self.unreadable[entry.filename] = str(error)
        self._folded = {name.casefold(): name for name in self.contents}
        self._trees: dict[str, etree._Element | None] = {}

    @property
    def parts(self) -> list[str]:
        """Names of all members but folders and the content types."""
        return [n for n in self.contents if not n.endswith("/") and n != CONTENT_TYPES]

    def find(self, name: str) -> str | None:
        """The member of that name, whatever its case."""
        return self._folded.get(name.casefold())

    def is_xml(self, name: str) -> bool:
        """Whether the part is XML by its name or its content type."""
        kind = self.content_type(name) or ""
        return name.endswith((".xml", ".rels")) or kind.endswith(("+xml", "/xml"))

    def tree(self, name: str | None) -> etree._Element | None:
        """Root of an XML part; None where it is missing or not well-formed."""
        real = self.find(name) if name else None
        if real is None:
            return None
        if real not in self._trees:
            parser = etree.XMLParser(resolve_entities=False, no_network=True, huge_tree=True)
            try:
                self._trees[real] = etree.fromstring(self.contents[real], parser)
            except etree.XMLSyntaxError:
                self._trees[real] = None
        return self._trees[real]

    @cached_property
    def type_entries(self) -> tuple[dict[str, str], dict[str, str]]:
        """Defaults by extension and overrides by part name, both case-folded."""
        defaults: dict[str, str] = {}
        overrides: dict[str, str] = {}
        root = self.tree(CONTENT_TYPES)
        for item in root if root is not None else ():
            name = namespace_and_name(item.tag)[1] if isinstance(item.tag, str) else ""
            if name == "Default":
                defaults[item.get("Extension", "").casefold()] = item.get("ContentType", "")
            elif name == "Override":
                key = item.get("PartName", "").lstrip("/").casefold()
                overrides[key] = item.get("ContentType", "")
        return defaults, overrides

    def content_type(self, name: str) -> str | None:
        """Content type of a part: its override, else the default of its extension."""
        defaults, overrides = self.type_entries
        extension = name.rpartition(".")[2].casefold()
        return overrides.get(name.casefold(), defaults.get(extension))

    def relations(self, part: str) -> list[Relation]:
        """Relationships of a part ('' for the package)."""
        folder, _, base = part.rpartition("/")
        root = self.tree(posixpath.join(folder, "_rels", f"{base}.rels"))
        found = []
        for item in root if root is not None else ():
            if isinstance(item.tag, str):
                external = item.get("TargetMode") == "External"
                target = item.get("Target", "")
                if not external:
                    target = resolved(folder, target)
                kind = item.get("Type", "").rpartition("/")[2]
                found.append(Relation(item.get("Id", ""), kind, target, external))
        return found

    def related(self, part: str, kind: str) -> list[str]:
        """Targets of one kind of relation, as the names that the zip holds."""
        targets = (r.target for r in self.relations(part) if r.kind == kind and not r.external)
        return [name for target in targets if (name := self.find(target))]

    @cached_property
    def workbook_part(self) -> str:
        """Name of the workbook part ('' where none)."""
        return next(iter(self.related("", "officeDocument")), "")

    @cached_property
    def workbook(self) -> etree._Element | None:
        """Root of the workbook part."""
        return self.tree(self.workbook_part)

    def workbook_tree(self, kind: str) -> etree._Element | None:
        """Root of the workbook's styles, sharedStrings, calcChain, sheetMetadata ..."""
        return self.tree(next(iter(self.related(self.workbook_part, kind)), None))

    @cached_property
    def sheets(self) -> list[SheetEntry]:
        """The sheets in the order of the workbook part."""
        relations = {r.id: r for r in self.relations(self.workbook_part)}
        found = []
        for item in children(child(self.workbook, "sheets"), "sheet"):
            relation = relations.get(relation_id(item) or "")
            part = (self.find(relation.target) if relation else None) or ""
            kind = relation.kind if relation else ""
            state = item.get("state", "visible")
            found.append(
                SheetEntry(item.get("name", ""), item.get("sheetId", ""), state, part, kind)
            )
        return found

    @cached_property
    def strings(self) -> list[str]:
        """Texts of the shared strings."""
        return [text_of(item) for item in children(self.workbook_tree("sharedStrings"), "si")]


def resolved(folder: str, target: str) -> str:
    """Part name of an internal target as written in a relation of a part in `folder`."""
    target = unquote(target.partition("#")[0])
    if not target:
        return ""
    return posixpath.normpath(posixpath.join("/", folder, target)).lstrip("/")


def text_of(item: etree._Element) -> str:
    """Text of an `<si>` or `<is>`: all runs, without phonetic hints."""
    pieces = []
    for part in item:
        if local(part) == "t":
            pieces.append(part.text or "")
        elif local(part) == "r":
            pieces += [run.text or "" for run in children(part, "t")]
    return "".join(pieces)
