"""A small XML tree that knows where each of its tags lies in the bytes.

For parts of up to a few megabytes. Only UTF-8 without a document type is let in, so that an edit
of bytes is an edit of text and nothing outside the part can be meant.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from xml.parsers import expat

from workbook_tools.errors import Refusal
from workbook_tools.splice import Edit, EditKind

MAX_DEPTH = 256

_SEPARATOR = "\x1f"  # no XML name or namespace can hold it
_START_TAG = re.compile(rb"""<(?:[^"'>]++|"[^"]*+"|'[^']*+')*+>""")
_ATTRIBUTE = re.compile(rb"""\s([^\s=<>"'/]+)\s*+=\s*+(?:"([^"]*+)"|'([^']*+)')""")
_ROOT = re.compile(
    rb"""(?:[^<]|<\?.*?\?>|<!--.*?-->)*+<(?:([^\s<>/"':]+):)?([^\s<>/"':]+)[\s/>]""", re.DOTALL
)
_REFERENCE = re.compile(r"&(?:#x([0-9A-Fa-f]+)|#([0-9]+)|(amp|lt|gt|quot|apos));")
_NAMED = {"amp": "&", "lt": "<", "gt": ">", "quot": '"', "apos": "'"}
_TEXT_ESCAPES = str.maketrans({"&": "&amp;", "<": "&lt;", ">": "&gt;", "\r": "&#13;"})
_ATTRIBUTE_ESCAPES = str.maketrans(
    {
        "&": "&amp;",
        "<": "&lt;",
        ">": "&gt;",
        '"': "&quot;",
        "'": "&apos;",
        "\t": "&#9;",
        "\n": "&#10;",
        "\r": "&#13;",
    }
)


@dataclass(slots=True, eq=False)
class Element:
    """One element; all offsets are into the bytes of the part.

    Attributes:
        uri, local, prefix: namespace (empty for none), local name and prefix as written.
        attributes: values by name; the name of one with a namespace is `uri|local`.
        children: elements directly inside, in order.
        text: character data directly inside, without that of the children.
        start, start_tag_end: the start tag is `start:start_tag_end`.
        end_tag_start, end: the end tag is `end_tag_start:end`; empty for `<x/>`.
    """

    uri: str
    local: str
    prefix: str
    attributes: dict[str, str]
    start: int
    start_tag_end: int
    end_tag_start: int
    end: int
    source: bytes = field(repr=False)
    children: list[Element] = field(default_factory=list, repr=False)
    text: str = ""

    @property
    def self_closing(self) -> bool:
        """Whether it is written as one tag, `<x/>`."""
        return self.source[self.start_tag_end - 2 : self.start_tag_end] == b"/>"

    def find(self, local: str) -> Element | None:
        """Return the first child of that local name in this element's own namespace."""
        return next(self.find_all(local), None)

    def find_all(self, local: str) -> Iterator[Element]:
        """Yield the children of that local name in this element's own namespace."""
        return (child for child in self.children if (child.local, child.uri) == (local, self.uri))

    def descendants(self, local: str) -> Iterator[Element]:
        """Yield what is of that local name in this element's own namespace, at any depth."""
        waiting = self.children[::-1]
        while waiting:
            element = waiting.pop()
            if (element.local, element.uri) == (local, self.uri):
                yield element
            waiting += element.children[::-1]

    def flag(self, name: str, default: bool = False) -> bool:
        """Return a yes-or-no attribute (ECMA-376 part 1, ST_OnOff and xsd:boolean)."""
        value = self.attributes.get(name)
        return default if value is None else value.strip() in ("1", "true", "on")

    def attribute_span(self, name: str) -> tuple[int, int]:
        """Return where the value of an attribute lies, without its quotes.

        Args:
            name: the name as written, with its prefix if it has one.
        Raises:
            KeyError: there is no such attribute.
        """
        for match in _ATTRIBUTE.finditer(self.source, self.start, self.start_tag_end):
            if match[1] == name.encode():
                return match.span(2) if match[2] is not None else match.span(3)
        raise KeyError(name)


def parse(xml: bytes, part: str, *, skipped: range = range(0)) -> Element:
    """Read a part into a tree.

    Args:
        xml: the whole part, UTF-8 with or without a byte order mark.
        part: its name, for messages.
        skipped: bytes to pass over, such as the rows of a large sheet; what is left must be
            well-formed. Offsets still count from the start of `xml`.
    Raises:
        Refusal: not UTF-8, a document type definition, not well-formed, or nested too deep.
    """
    parser = _guarded_parser(part)
    parser.buffer_text = True
    builder = _Builder(parser, xml, part, skipped)
    parser.StartElementHandler = builder.open
    parser.EndElementHandler = builder.close
    parser.CharacterDataHandler = builder.characters
    view = memoryview(xml)
    _feed(parser, [view[: skipped.start], view[skipped.stop :]] if skipped else [view], part)
    assert builder.root is not None  # expat refuses a document without an element
    return builder.root


def check_well_formed(xml: bytes, part: str) -> None:
    """Check a part of any size without building anything.

    Raises:
        Refusal: not UTF-8, a document type definition, or not well-formed.
    """
    _feed(_guarded_parser(part), [memoryview(xml)], part)


def root_name(xml: bytes) -> tuple[str, str]:
    """Return prefix and local name of the root element of a well-formed part of any size."""
    match = _ROOT.match(xml)
    assert match is not None  # a well-formed part has one
    return (match[1] or b"").decode(), match[2].decode()


def has_hidden_text(xml: bytes) -> bool:
    """Tell whether comments, CDATA sections or instructions could make a plain search go wrong."""
    declarations = xml[:64].count(b"<?xml ")
    return b"<!" in xml or xml.count(b"<?") > declarations


def set_attribute(
    element: Element, name: str, value: str, kind: EditKind = EditKind.ATTRIBUTE_CHANGED
) -> Edit:
    """Return the edit that gives an attribute without a namespace a value.

    Replaces the old value, or writes the attribute at the end of the start tag.
    """
    escaped = escape_attribute(value).encode()
    if name in element.attributes:
        return Edit(kind, *element.attribute_span(name), escaped)
    position = element.start_tag_end - (2 if element.self_closing else 1)
    return Edit(kind, position, position, b' %b="%b"' % (name.encode(), escaped))


def append_child(element: Element, xml: bytes, kind: EditKind) -> Edit:
    """Return the edit that puts `xml` behind the last child, opening `<x/>` where needed."""
    if not element.self_closing:
        return Edit(kind, element.end_tag_start, element.end_tag_start, xml)
    name = qualified(element.prefix, element.local).encode()
    return Edit(kind, element.end - 2, element.end, b">%b</%b>" % (xml, name))


def qualified(prefix: str, local: str) -> str:
    """Return the name of an element as it is written."""
    return f"{prefix}:{local}" if prefix else local


def escape_text(text: str) -> str:
    """Write characters so that they can stand between tags."""
    return text.translate(_TEXT_ESCAPES)


def escape_attribute(text: str) -> str:
    """Write characters so that they can stand between quotes of either kind."""
    return text.translate(_ATTRIBUTE_ESCAPES)


def unescape(text: str) -> str:
    """Resolve the character references of well-formed XML without a document type."""
    return _REFERENCE.sub(_resolved, text) if "&" in text else text


def _resolved(match: re.Match[str]) -> str:
    if match[3]:
        return _NAMED[match[3]]
    return chr(int(match[1], 16) if match[1] else int(match[2]))


class _Builder:
    """Collects the events of one parse."""

    def __init__(self, parser: expat.XMLParserType, xml: bytes, part: str, skipped: range) -> None:
        self.parser = parser
        self.xml = xml
        self.part = part
        self.skipped = skipped
        self.root: Element | None = None
        self.open_elements: list[Element] = []
        self.texts: list[list[str]] = []

    def position(self) -> int:
        index = self.parser.CurrentByteIndex
        return index + len(self.skipped) if index >= self.skipped.start else index

    def open(self, name: str, attributes: dict[str, str]) -> None:
        if len(self.open_elements) >= MAX_DEPTH:
            raise Refusal(
                f"{self.part} nests its elements more than {MAX_DEPTH} deep, which no spreadsheet"
                " program does; open the workbook in its own program and save it again."
            )
        uri, local, prefix = _name_parts(name)
        start = self.position()
        tag = _START_TAG.match(self.xml, start)
        assert tag is not None  # expat has just seen it
        plain = {_attribute_key(key): value for key, value in attributes.items()}
        element = Element(uri, local, prefix, plain, start, tag.end(), 0, 0, self.xml)
        if self.open_elements:
            self.open_elements[-1].children.append(element)
        else:
            self.root = element
        self.open_elements.append(element)
        self.texts.append([])

    def close(self, _name: str) -> None:
        element = self.open_elements.pop()
        element.text = "".join(self.texts.pop())
        # expat reports the end of `<x/>` behind the tag, that of `</x>` at its `<`
        if element.self_closing:
            element.end_tag_start = element.end = element.start_tag_end
        else:
            element.end_tag_start = self.position()
            element.end = self.xml.index(b">", element.end_tag_start) + 1

    def characters(self, data: str) -> None:
        self.texts[-1].append(data)


def _name_parts(name: str) -> tuple[str, str, str]:
    parts = name.split(_SEPARATOR)
    if len(parts) == 1:
        return "", name, ""
    return parts[0], parts[1], parts[2] if len(parts) == 3 else ""


def _attribute_key(name: str) -> str:
    uri, local, _ = _name_parts(name)
    return f"{uri}|{local}" if uri else local


def _guarded_parser(part: str) -> expat.XMLParserType:
    parser = expat.ParserCreate(namespace_separator=_SEPARATOR)
    parser.namespace_prefixes = True

    def refuse_document_type(*_: object) -> None:
        raise Refusal(
            f"{part} holds a document type definition, which no workbook needs and which could draw"
            " in other files; open the workbook in its own program and save it again."
        )

    def check_encoding(_version: str, encoding: str | None, _standalone: int) -> None:
        if encoding is not None and encoding.lower() != "utf-8":
            raise _wrong_encoding(part, encoding)

    parser.StartDoctypeDeclHandler = refuse_document_type
    parser.XmlDeclHandler = check_encoding
    return parser


def _feed(parser: expat.XMLParserType, pieces: list[memoryview], part: str) -> None:
    # UTF-16 is recognised by its mark, or without one by the zero byte next to the first `<`
    if bytes(pieces[0][:2]) in (b"\xff\xfe", b"\xfe\xff", b"<\0", b"\0<"):
        raise _wrong_encoding(part, "UTF-16")
    try:
        for piece in pieces:
            parser.Parse(piece, False)
        parser.Parse(b"", True)
    except expat.ExpatError as error:
        raise Refusal(
            f"{part} is not well-formed XML (line {error.lineno}:"
            f" {expat.ErrorString(error.code)}); open the workbook in its own program and save it"
            " again."
        ) from error


def _wrong_encoding(part: str, encoding: str) -> Refusal:
    return Refusal(
        f"{part} is written in {encoding}, and only UTF-8 can be edited; open the workbook in its"
        " own program and save it again."
    )
