"""Differences between two versions of a sheet's column elements."""

from __future__ import annotations

from collections.abc import Iterator

from tests.workbook_tools.tag_differences import Difference, NotPermittedError
from tests.workbook_tools.xml_nodes import Node
from workbook_tools.splice import EditKind

_MAY_CHANGE = {"width", "customWidth", "bestFit", "hidden"}  # a new column is shown
_OFF = {("hidden", "0"), ("hidden", "false")}  # the same as no attribute
Attributes = dict[str, str]


def column_differences(old: Node, new: Node) -> Iterator[Difference]:
    """What was split or added; every column must keep its attributes but for a filled one's width.

    Raises:
        NotPermittedError: an element went, moved or changed otherwise.
    """
    if [c.raw for c in old.children if not c.tag] != [c.raw for c in new.children if not c.tag]:
        raise NotPermittedError("text between column elements changed")
    kept = {node.raw for node in new.elements}
    split = [node for node in old.elements if node.raw not in kept]
    before, after = _by_column(old), _by_column(new)
    if set(before) - set(after):
        raise NotPermittedError(f"columns {sorted(set(before) - set(after))} lost their element")
    added = sorted(set(after) - set(before))
    changed = [column for column in before if before[column] != after[column]]
    for column in changed:
        if {key for key, _ in before[column].items() ^ after[column].items()} - _MAY_CHANGE:
            what = f"column {column}: {before[column]} became {after[column]}"
            raise NotPermittedError(what)
    for node in split:
        place = f"{node.get('min')} to {node.get('max')}"
        yield Difference(EditKind.COLUMN_WIDTH_SPLIT, place, columns=tuple(changed))
    if added:
        place = f"{added[0]} to {added[-1]}"
        yield Difference(EditKind.COLUMN_WIDTH_ADDED, place, columns=tuple(added))
    if changed and not split:
        raise NotPermittedError(f"columns {changed} changed without a split")


def introduced_columns(new: Node) -> tuple[int, ...]:
    """The columns of a `<cols>` that was not there before."""
    return tuple(
        number
        for node in new.named("col")
        for number in range(int(node.get("min")), int(node.get("max")) + 1)
    )


def _by_column(cols: Node) -> dict[int, Attributes]:
    """Attributes of every column that has an element, without the range and what is off."""
    found = {}
    for node in cols.named("col"):
        attributes = {k: v for k, v in node.attributes if (k, v) not in _OFF}
        columns = range(int(attributes.pop("min")), int(attributes.pop("max")) + 1)
        found.update(dict.fromkeys(columns, attributes))
    return found
