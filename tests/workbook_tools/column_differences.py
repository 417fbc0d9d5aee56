"""Differences between two versions of a sheet's column elements."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

from tests.workbook_tools.tag_differences import Difference, NotPermittedError
from tests.workbook_tools.xml_nodes import Node
from workbook_tools.splice import EditKind

_MAY_CHANGE = {"width", "customWidth", "bestFit"}
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
    changed, added = [], []
    for first, last in _steps(old, new):
        before, after = _at(old, first), _at(new, first)
        if before == after:
            continue
        columns = range(first, last + 1)
        if before is None:
            added += columns
        elif after is None or {k for k, _ in before.items() ^ after.items()} - _MAY_CHANGE:
            raise NotPermittedError(f"columns {first} to {last}: {before} became {after}")
        else:
            changed += columns
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


def _steps(old: Node, new: Node) -> Iterator[tuple[int, int]]:
    """Runs of columns in which neither version changes."""
    starts = {1, 16_385}
    for node in (*old.named("col"), *new.named("col")):
        starts |= {int(node.get("min")), int(node.get("max")) + 1}
    ordered = sorted(starts)
    for first, following in pairwise(ordered):
        yield first, following - 1


def _at(cols: Node, column: int) -> Attributes | None:
    for node in cols.named("col"):
        attributes = dict(node.attributes)
        if int(attributes.pop("min")) <= column <= int(attributes.pop("max")):
            return attributes
    return None
