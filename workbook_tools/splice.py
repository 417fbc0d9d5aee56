"""Sorted, non-overlapping replacements of byte spans; nothing else ever changes a part."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator
from enum import StrEnum
from typing import NamedTuple

_BLOCK = 1 << 17


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


def spliced(
    original: bytes, edits: Iterable[Edit], counts: Counter[EditKind] | None = None
) -> Iterator[bytes]:
    """Yield the edited part in blocks, without a second copy of the original.

    Args:
        original: the whole part.
        edits: sorted by `start`, not overlapping.
        counts: gets the number of edits of each kind.
    Raises:
        ValueError: edits out of order, overlapping or beyond the part (a bug of ours).
    """
    view = memoryview(original)
    pieces: list[bytes | memoryview] = []
    position = held = 0
    length = len(original)
    kinds: list[EditKind] = []
    for kind, start, end, new in edits:
        if not position <= start <= end <= length:
            raise ValueError(f"{kind} at {start}:{end} overlaps or runs outside")
        pieces += (view[position:start], new)
        held += start - position + len(new)
        kinds.append(kind)
        position = end
        if held > _BLOCK:
            yield b"".join(pieces)
            pieces, held = [], 0
    yield b"".join(pieces)
    for start in range(position, length, _BLOCK):
        yield original[start : start + _BLOCK]
    if counts is not None:
        counts.update(kinds)


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
