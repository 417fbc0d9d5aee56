"""Sorted, non-overlapping replacements of byte spans; nothing else ever changes a part."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from enum import StrEnum
from typing import NamedTuple


class EditKind(StrEnum):
    """The closed list of edits that a fill may make to a part."""

    CELL_INSERTED = "cell inserted"
    EMPTY_CELL_REPLACED = "empty cell replaced"
    EMPTY_ROW_OPENED = "empty row opened"
    ROW_INSERTED = "row inserted"
    COLUMN_WIDTH_SPLIT = "column width split"
    COLUMN_WIDTH_ADDED = "column width added"
    ATTRIBUTE_CHANGED = "attribute changed"
    STYLE_APPENDED = "style appended"
    NUMBER_FORMAT_APPENDED = "number format appended"
    TABLE_COLUMN_APPENDED = "table column appended"
    RECALCULATE_FLAG_SET = "recalculate flag set"


class Edit(NamedTuple):
    """Replace the bytes `start:end` of the original part by `new`."""

    kind: EditKind
    start: int
    end: int
    new: bytes


def spliced(original: bytes, edits: Iterable[Edit]) -> Iterator[bytes | memoryview]:
    """Yield the pieces of the edited part in order, without a second copy of the original.

    Args:
        original: the whole part.
        edits: sorted by `start`, not overlapping.
    Raises:
        ValueError: edits out of order, overlapping or beyond the part (a bug of ours).
    """
    view = memoryview(original)
    position = 0
    for edit in edits:
        if not position <= edit.start <= edit.end <= len(original):
            raise ValueError(f"{edit.kind} at {edit.start}:{edit.end} overlaps or runs outside")
        if edit.start > position:
            yield view[position : edit.start]
        if edit.new:
            yield edit.new
        position = edit.end
    if position < len(original):
        yield view[position:]


def undone(edited: bytes, edits: Iterable[Edit], removed: Iterable[bytes]) -> bytes:
    """Return the original part, given the edited one, its edits and the bytes that each removed."""
    pieces: list[bytes] = []
    shift = 0
    position = 0
    for edit, old in zip(edits, removed, strict=True):
        start = edit.start + shift
        pieces += [edited[position:start], old]
        position = start + len(edit.new)
        shift += len(edit.new) - (edit.end - edit.start)
    pieces.append(edited[position:])
    return b"".join(pieces)
