"""Every difference between two versions of a part, sorted into the closed list of edits.

This is computed from the two versions alone, by walking both side by side; it knows nothing of
what the fill says it did. Whatever is not in the list raises `NotPermittedError`, so a comparison
that ends proves that undoing the listed differences, and nothing else, gives the old bytes.
"""

from __future__ import annotations

from collections.abc import Iterator

from tests.workbook_tools.column_differences import column_differences, introduced_columns
from tests.workbook_tools.tag_differences import Difference, NotPermittedError, tag_differences
from tests.workbook_tools.xml_nodes import Node, read_nodes
from workbook_tools.splice import EditKind

# (parent, child) -> the edit that appends such a child after all others.
_APPENDED = {
    ("cellXfs", "xf"): EditKind.STYLE_APPENDED,
    ("numFmts", "numFmt"): EditKind.NUMBER_FORMAT_APPENDED,
    ("tableColumns", "tableColumn"): EditKind.TABLE_COLUMN_APPENDED,
    # A workbook that had no styles at all gets its first.
    ("Types", "Override"): EditKind.STYLE_APPENDED,
    ("Relationships", "Relationship"): EditKind.STYLE_APPENDED,
}
# (parent, child) -> the edit that puts such a child where there was none.
_INTRODUCED = {
    ("worksheet", "cols"): EditKind.COLUMN_WIDTH_ADDED,
    ("styleSheet", "numFmts"): EditKind.NUMBER_FORMAT_APPENDED,
    ("workbook", "calcPr"): EditKind.RECALCULATE_FLAG_SET,
}


def part_differences(old: bytes, new: bytes) -> list[Difference]:
    """Differences of two versions of a part, in file order.

    Raises:
        NotPermittedError: one is not in the closed list; the text says where.
        ValueError: one of the two is not well-formed.
    """
    found = list(_children(read_nodes(old), read_nodes(new)))
    filled = {column for difference in found for _, column in difference.cells}
    for difference in found:
        if not filled.issuperset(difference.columns):
            raise NotPermittedError(f"the width of columns {difference.where} changed, unfilled")
    return found


def _element(old: Node, new: Node, parent: str) -> Iterator[Difference]:
    if old.raw == new.raw:
        return
    if not old.tag or old.prefix != new.prefix:
        raise NotPermittedError(f"{old.raw[:80]!r} became {new.raw[:80]!r}")
    if old.name == "c":
        yield _replaced(old, new)
        return
    yield from tag_differences(old, new, parent)
    if old.name == "cols":
        yield from column_differences(old, new)
    else:
        yield from _children(old, new)


def _replaced(old: Node, new: Node) -> Difference:
    """An empty cell that got content."""
    plain = {key for key, _ in old.attributes} <= {"r", "s", "t"}
    if old.elements or not plain or not new.elements:
        raise NotPermittedError(f"cell {old.raw[:80]!r} became {new.raw[:80]!r}")
    return Difference(EditKind.EMPTY_CELL_REPLACED, old.get("r"), cells=(new.place,))


def _children(old: Node, new: Node) -> Iterator[Difference]:
    """Walk the children side by side; what is only in `new` must be a permitted insertion."""
    index = 0
    for child in new.children:
        mate = old.children[index] if index < len(old.children) else None
        if mate is not None and (mate.name, mate.place) == (child.name, child.place):
            yield from _element(mate, child, new.name)
            index += 1
        else:
            yield _inserted(old, new, child, old.children[index:])
    if index < len(old.children):
        raise NotPermittedError(f"{old.children[index].raw[:80]!r} is gone or moved")


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
