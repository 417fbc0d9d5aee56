"""Every difference between two versions of a part, sorted into the closed list of edits.

This is computed from the two versions alone, by walking both side by side; it knows nothing of
what the fill says it did. Whatever is not in the list raises `NotPermittedError`.
"""

from __future__ import annotations

from typing import NamedTuple

from tests.workbook_tools.column_differences import column_differences, introduced_columns
from tests.workbook_tools.tag_differences import Difference, NotPermittedError, tag_differences
from tests.workbook_tools.xml_nodes import Node, read_nodes
from workbook_tools.splice import EditKind

# (parent, child) -> the edit that appends such a child after all others.
_APPENDED = {
    ("cellXfs", "xf"): EditKind.STYLE_APPENDED,
    ("numFmts", "numFmt"): EditKind.NUMBER_FORMAT_APPENDED,
    ("tableColumns", "tableColumn"): EditKind.TABLE_COLUMN_APPENDED,
}
# (parent, child) -> the edit that puts such a child where there was none.
_INTRODUCED = {
    ("worksheet", "cols"): EditKind.COLUMN_WIDTH_ADDED,
    ("styleSheet", "numFmts"): EditKind.NUMBER_FORMAT_APPENDED,
    ("workbook", "calcPr"): EditKind.RECALCULATE_FLAG_SET,
}


class PartChange(NamedTuple):
    """What a part went through, and what it is when exactly that is undone."""

    differences: list[Difference]
    undone: bytes


def part_change(old: bytes, new: bytes) -> PartChange:
    """Differences of two versions of a part, in file order; and the new one with them undone.

    Undoing takes every byte from the new version but for the differences themselves.

    Raises:
        NotPermittedError: one is not in the closed list; the text says where.
        ValueError: one of the two is not well-formed.
    """
    walk = _Walk()
    walk.children(read_nodes(old), read_nodes(new))
    filled = {column for difference in walk.found for _, column in difference.cells}
    for difference in walk.found:
        if not filled.issuperset(difference.columns):
            raise NotPermittedError(f"the width of columns {difference.where} changed, unfilled")
    return PartChange(walk.found, b"".join(walk.undone))


class _Walk:
    """Walks two versions side by side."""

    def __init__(self) -> None:
        self.found: list[Difference] = []
        self.undone: list[bytes] = []

    def children(self, old: Node, new: Node) -> None:
        """Compare the children; what is only in `new` must be a permitted insertion."""
        index = 0
        for child in new.children:
            mate = old.children[index] if index < len(old.children) else None
            if mate is not None and (mate.name, mate.place) == (child.name, child.place):
                self.element(mate, child, new.name)
                index += 1
            else:
                self.found.append(_inserted(old, new, child, old.children[index:]))
        if index < len(old.children):
            raise NotPermittedError(f"{old.children[index].raw[:80]!r} is gone or moved")

    def element(self, old: Node, new: Node, parent: str) -> None:
        """Compare two versions of one element, or of one piece of text."""
        if old.raw == new.raw:
            self.undone.append(new.raw)
        elif not old.tag or old.prefix != new.prefix:
            raise NotPermittedError(f"{old.raw[:80]!r} became {new.raw[:80]!r}")
        elif old.name == "c":
            self.found.append(_replaced(old, new))
            self.undone.append(old.raw)
        elif old.name == "cols":
            self.found += [*tag_differences(old, new, parent), *column_differences(old, new)]
            self.undone.append(old.raw)
        else:
            self.found += tag_differences(old, new, parent)
            self.undone.append(old.tag)
            self.children(old, new)
            self.undone.append(b"" if old.closes_itself else new.end_tag)


def _replaced(old: Node, new: Node) -> Difference:
    """An empty cell that got content."""
    plain = {key for key, _ in old.attributes} <= {"r", "s", "t"}
    if old.elements or not plain or not new.elements:
        raise NotPermittedError(f"cell {old.raw[:80]!r} became {new.raw[:80]!r}")
    return Difference(EditKind.EMPTY_CELL_REPLACED, old.get("r"), cells=(new.place,))


def _inserted(old: Node, new: Node, child: Node, following: list[Node]) -> Difference:
    """The edit by which `child` of `new` came to stand before `following` of `old`."""
    pair = (old.name, child.name)
    siblings = old.named(child.name)
    where = child.get("r") or child.get("name") or child.name
    if child.prefix == old.prefix:
        if pair == ("sheetData", "row") and child.place not in {row.place for row in siblings}:
            cells = tuple(cell.place for cell in child.named("c") if cell.elements)
            return Difference(EditKind.ROW_INSERTED, where, cells=cells)
        if pair == ("row", "c") and child.place not in {cell.place for cell in siblings}:
            return Difference(EditKind.CELL_INSERTED, where, cells=(child.place,))
        if pair in _APPENDED and not any(node.tag for node in following):
            return Difference(_APPENDED[pair], where)
        if pair in _INTRODUCED and not siblings and len(new.named(child.name)) == 1:
            columns = introduced_columns(child) if child.name == "cols" else ()
            return Difference(_INTRODUCED[pair], where, columns=columns)
    raise NotPermittedError(f"{child.raw[:80]!r} was put into <{old.name}>")
