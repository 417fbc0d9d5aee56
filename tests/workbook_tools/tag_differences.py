"""Differences between two versions of one start tag: named attributes, and opening `<x/>`."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from typing import NamedTuple

from tests.workbook_tools.rules.sheet_view import box
from tests.workbook_tools.xml_nodes import ATTRIBUTE, Node
from workbook_tools.splice import EditKind


class NotPermittedError(AssertionError):
    """A difference that is not in the closed list of edits."""


class Difference(NamedTuple):
    """One permitted difference; `cells` are those that got content by it, `columns` whose width."""

    kind: EditKind
    where: str
    cells: tuple[tuple[int, int], ...] = ()
    columns: tuple[int, ...] = ()


_OPENED = {"row", "sheetData"}


def tag_differences(old: Node, new: Node, parent: str) -> Iterator[Difference]:
    """Differences of the start tags of two elements of the same name.

    Raises:
        NotPermittedError: anything but a permitted attribute or the opening of an empty element.
    """
    if not old.tag:
        return
    old_tag, new_tag = old.tag, new.tag
    if old.closes_itself and not new.closes_itself:
        if old.name not in _OPENED:
            raise NotPermittedError(f"{old.tag!r} was opened")
        old_tag = old_tag[:-2] + b">"
        if old.name == "row":
            yield Difference(EditKind.EMPTY_ROW_OPENED, old.get("r"))
    elif new.closes_itself and not old.closes_itself:
        raise NotPermittedError(f"{old.tag!r} was closed")
    elif old.end_tag != new.end_tag:
        raise NotPermittedError(f"{old.end_tag!r} became {new.end_tag!r}")
    before, after = _pieces(old_tag), _pieces(new_tag)
    for index, (name, value, piece) in enumerate(after):
        if index >= len(before) or name != before[index][0]:
            before.insert(index, (name, "", b""))  # an attribute that was not there
        old_name, old_value, old_piece = before[index]
        if piece == old_piece:
            continue
        rule = _CHANGES.get((old.name, name))
        same_form = piece.replace(value.encode(), old_value.encode(), 1) == old_piece
        if rule is None or old_name != name or (old_piece and not same_form):
            raise NotPermittedError(f"{old.tag!r} became {new.tag!r}")
        kind, is_right = rule
        if not is_right(old, new, old_value, value):
            raise NotPermittedError(f"{name} of {old.tag!r} became {value!r} in <{parent}>")
        yield Difference(kind, f"{old.name} {name}")
    if len(before) != len(after):
        raise NotPermittedError(f"{old.tag!r} became {new.tag!r}")


def _pieces(tag: bytes) -> list[tuple[str, str, bytes]]:
    """(attribute, value, exact bytes) of a start tag; its name and end stand as attributes too."""
    pieces, position = [], 0
    for match in ATTRIBUTE.finditer(tag):
        if match.start() != position and position:
            pieces.append(("", "", tag[position : match.start()]))
        elif not position:
            pieces.append(("<", "", tag[: match.start()]))
        pieces.append((match[1].decode(), match[2][1:-1].decode(), match.group()))
        position = match.end()
    pieces.append((">", "", tag[position:]))
    return pieces


Rule = Callable[[Node, Node, str, str], bool]


def _covers(old: Node, new: Node, before: str, after: str) -> bool:
    """An extent that holds the old one, which is A1 also where a sheet holds nothing."""
    inner, outer = box(before), box(after)
    return before == "A1" or bool(
        inner and outer and outer.holds(inner.top, inner.left) and outer.holds(*inner[2:])
    )


def _covers_span(old: Node, new: Node, before: str, after: str) -> bool:
    inner, outer = _bounds(before), _bounds(after)
    return outer[0] <= inner[0] and inner[1] <= outer[1]


def _bounds(spans: str) -> tuple[int, int]:
    numbers = [int(number) for number in re.findall(r"\d+", spans)]
    return min(numbers), max(numbers)


def _counts(old: Node, new: Node, before: str, after: str) -> bool:
    """The number of children, if the old one was."""
    grown = len(new.elements) - len(old.elements)
    return int(after) == int(before) + grown


def _grows_right(old: Node, new: Node, before: str, after: str) -> bool:
    inner, outer = box(before), box(after)
    return bool(inner and outer and inner[:3] == outer[:3] and inner.right < outer.right)


def _is_one(old: Node, new: Node, before: str, after: str) -> bool:
    return after == "1"


_CHANGES: dict[tuple[str, str], tuple[EditKind, Rule]] = {
    ("dimension", "ref"): (EditKind.ATTRIBUTE_CHANGED, _covers),
    ("row", "spans"): (EditKind.ATTRIBUTE_CHANGED, _covers_span),
    ("cellXfs", "count"): (EditKind.ATTRIBUTE_CHANGED, _counts),
    ("numFmts", "count"): (EditKind.ATTRIBUTE_CHANGED, _counts),
    ("tableColumns", "count"): (EditKind.ATTRIBUTE_CHANGED, _counts),
    ("table", "ref"): (EditKind.ATTRIBUTE_CHANGED, _grows_right),
    ("autoFilter", "ref"): (EditKind.ATTRIBUTE_CHANGED, _grows_right),
    ("calcPr", "fullCalcOnLoad"): (EditKind.RECALCULATE_FLAG_SET, _is_one),
}
