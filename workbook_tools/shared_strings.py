"""The texts that cells share, read one by one when they are asked for (ECMA-376 part 1, 18.4).

A log of a hundred thousand rows holds half a million texts and a fill looks at few of them, so
only their places are kept.
"""

from __future__ import annotations

import re
from array import array
from collections.abc import Iterator
from typing import NamedTuple
from xml.parsers import expat

from workbook_tools.errors import Refusal
from workbook_tools.hex_escapes import decoded
from workbook_tools.xml_offsets import (
    check_well_formed,
    has_hidden_text,
    qualified,
    root_name,
    unescape,
)

_PLAIN = re.compile(
    rb"""<[^\s<>"']++>\s*+<(?:[^\s<>"':]+:)?t(?: xml:space="preserve")?>"""
    rb"""([^<\r]*+)</[^<]*+</[^<]*+\Z"""
)


class TypedText(NamedTuple):
    """A text as somebody typed it.

    Attributes:
        text: all its runs joined, without reading aids for Asian scripts.
        rich: whether it is made of runs, each of which may have a look of its own.
        shifted: whether a run is raised or lowered, as the 2 of km².
        struck: whether a run is struck through.
        partly_struck: whether some of its digits are struck through and others are not.
    """

    text: str
    rich: bool = False
    shifted: bool = False
    struck: bool = False
    partly_struck: bool = False


class SharedStrings:
    """The shared texts of a workbook, numbered from 0."""

    def __init__(self, xml: bytes, part: str) -> None:
        """Find the texts.

        Args:
            xml: the whole part.
            part: its name, for messages.
        Raises:
            Refusal: the part cannot be read.
        """
        check_well_formed(xml, part)
        prefix, local = root_name(xml)
        if local != "sst":
            raise Refusal(
                f"{part} should list the texts of the workbook and does not; open the workbook in"
                " its own program, let it repair the file and save it again."
            )
        self._xml = xml
        self._part = part
        self._starts = array("Q", _starts(xml, qualified(prefix, "si")))
        self._starts.append(xml.rindex(b"</") if self._starts else 0)

    def __len__(self) -> int:
        """Return the number of texts, counted, since the file's own count is often wrong."""
        return len(self._starts) - 1

    def __getitem__(self, number: int) -> TypedText:
        """Return one text.

        Raises:
            Refusal: there is none of that number.
        """
        if not 0 <= number < len(self):
            raise Refusal(
                f"{self._part} holds {len(self):,} texts but a cell asks for number {number}; open"
                " the workbook in its own program, let it repair the file and save it again."
            )
        return read_text(self._xml[self._starts[number] : self._starts[number + 1]])


def read_text(xml: bytes) -> TypedText:
    """Read one text element: `si` of the shared texts or `is` of a cell.

    Args:
        xml: the bytes of the element, out of a well-formed part in UTF-8.
    """
    plain = _PLAIN.match(xml)
    if plain is not None:
        return TypedText(decoded(unescape(plain[1].decode())))
    runs = _Runs()
    parser = expat.ParserCreate("utf-8")  # without namespaces, whose declarations lie outside
    parser.buffer_text = True
    parser.StartElementHandler = runs.open
    parser.EndElementHandler = runs.close
    parser.CharacterDataHandler = runs.characters
    parser.Parse(xml, True)
    partly = len(runs.digits_struck) > 1
    return TypedText("".join(runs.texts), runs.rich, runs.shifted, runs.struck, partly)


class _Runs:
    """Collects the runs of one text."""

    def __init__(self) -> None:
        self.texts: list[str] = []
        self.pieces: list[str] = []
        self.path: list[str] = []
        self.rich = self.shifted = self.struck = False
        self.run_struck = False
        # Whether the runs that hold digits are struck through.
        self.digits_struck: set[bool] = set()

    def open(self, name: str, attributes: dict[str, str]) -> None:
        local = name.rpartition(":")[2]
        value = attributes.get("val", "1")
        self.path.append(local)
        self.pieces.clear()
        if local == "r":
            self.rich, self.run_struck = True, False
        if "rPr" in self.path:
            self.shifted |= local == "vertAlign" and value in ("superscript", "subscript")
            self.run_struck |= local == "strike" and value in ("1", "true", "on")
            self.struck |= self.run_struck

    def close(self, _name: str) -> None:
        # `rPh` holds how the text is pronounced, which is no part of it
        if self.path.pop() == "t" and "rPh" not in self.path:
            text = decoded("".join(self.pieces))
            self.texts.append(text)
            if any(letter.isdigit() for letter in text):
                self.digits_struck.add(self.run_struck)

    def characters(self, data: str) -> None:
        self.pieces.append(data)


def _starts(xml: bytes, name: str) -> Iterator[int]:
    if not has_hidden_text(xml):
        pattern = re.compile(b"<%b[\\s/>]" % re.escape(name.encode()))
        return (match.start() for match in pattern.finditer(xml))
    starts: list[int] = []
    parser = expat.ParserCreate()

    def note(element: str, _attributes: dict[str, str]) -> None:
        if element == name:
            starts.append(parser.CurrentByteIndex)

    parser.StartElementHandler = note
    parser.Parse(xml, True)
    return iter(starts)
