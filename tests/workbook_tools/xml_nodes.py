"""XML as nodes that remember their exact bytes, for comparing two versions of a part.

A regular expression cuts the text into tokens; no XML library takes part, so nothing is
normalised on the way. The part must be well-formed (another check sees to that).
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from functools import cached_property

from tests.workbook_tools.rules.sheet_view import position

_TOKEN = re.compile(
    rb"<!--.*?-->|<!\[CDATA\[.*?\]\]>|<\?.*?\?>|<(?:[^<>\"']|\"[^\"]*\"|'[^']*')*>|[^<]+", re.S
)
_NAME = re.compile(rb"[^\s/>]+")
ATTRIBUTE = re.compile(rb"\s+([^\s=]+)\s*=\s*(\"[^\"]*\"|'[^']*')")


@dataclass
class Node:
    """An element, or (with `tag` empty) a piece of text, comment or instruction.

    Attributes:
        raw: the exact bytes, children and end tag included.
        tag: the start tag.
        place: (row, column) of a cell, (row, 0) of a row, else (0, 0).
    """

    raw: bytes
    tag: bytes = b""
    children: list[Node] = field(default_factory=list)
    place: tuple[int, int] = (0, 0)
    end_tag: bytes = b""

    @cached_property
    def prefix(self) -> str:
        """Namespace prefix of the element as written."""
        return _qualified(self.tag).rpartition(":")[0]

    @cached_property
    def name(self) -> str:
        """Name of the element without prefix; '' for text."""
        return _qualified(self.tag).rpartition(":")[2] if self.tag else ""

    @property
    def attributes(self) -> list[tuple[str, str]]:
        """(name, value as written) in file order."""
        rest = self.tag[1 + len(_qualified(self.tag).encode()) :]
        found = ATTRIBUTE.findall(rest)
        return [(name.decode(), value[1:-1].decode()) for name, value in found]

    def get(self, name: str, default: str = "") -> str:
        """Value of an attribute as written."""
        return dict(self.attributes).get(name, default)

    @property
    def closes_itself(self) -> bool:
        """Whether it is written `<x/>`."""
        return self.tag.endswith(b"/>")

    @property
    def elements(self) -> list[Node]:
        """Children that are elements."""
        return [child for child in self.children if child.tag]

    def named(self, name: str) -> list[Node]:
        """Child elements of a name."""
        return [child for child in self.elements if child.name == name]


def _qualified(tag: bytes) -> str:
    match = _NAME.match(tag, 1)
    return match.group().decode() if match else ""


def read_nodes(data: bytes) -> Node:
    """The document as a node without tag, whose children are what stands in the file.

    Raises:
        ValueError: tags do not nest, or something is no token of XML.
    """
    document = Node(data)
    open_nodes: list[tuple[Node, int]] = [(document, 0)]
    end = 0
    for token, start in _tokens(data):
        end = start + len(token)
        if token.startswith(b"</"):
            node, begun = open_nodes.pop()
            if _qualified(token[1:]) != _qualified(node.tag):
                raise ValueError(f"tags do not nest at byte {start}")
            node.raw, node.end_tag = data[begun:end], token
        elif token.startswith((b"<!", b"<?")) or not token.startswith(b"<"):
            open_nodes[-1][0].children.append(Node(token))
        else:
            node = Node(token, token)
            open_nodes[-1][0].children.append(node)
            if not token.endswith(b"/>"):
                open_nodes.append((node, start))
    if end != len(data) or len(open_nodes) != 1:
        raise ValueError("the part ends inside a tag or an element")
    for root in document.named("worksheet"):
        _place_cells(root)
    return document


def _place_cells(worksheet: Node) -> None:
    """Say of rows and cells where they are; without `r` each follows the one before."""
    for data in worksheet.named("sheetData"):
        row = 0
        for row_node in data.named("row"):
            row = int(row_node.get("r") or row + 1)
            row_node.place = (row, 0)
            column = 0
            for cell in row_node.named("c"):
                written = position(cell.get("r"))
                column = written[1] if written else column + 1
                cell.place = (row, column)


def _tokens(data: bytes) -> Iterator[tuple[bytes, int]]:
    position = 0
    for match in _TOKEN.finditer(data):
        if match.start() != position:
            raise ValueError(f"no token at byte {position}")
        position = match.end()
        yield match.group(), match.start()
