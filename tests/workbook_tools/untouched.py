"""Two versions of a zip file compared member by member, as they are compressed."""

from __future__ import annotations

import struct
import zipfile
from pathlib import Path
from typing import NamedTuple


class Member(NamedTuple):
    """One member as it lies in the file, with what the directory says of it."""

    name: str
    packed: bytes
    method: int
    crc: int
    size: int
    date: tuple[int, ...]
    attributes: tuple[int, int, int]  # made by, internal, external
    comment: bytes


def members(path: Path) -> list[Member]:
    """All members in the order of the directory."""
    data = path.read_bytes()
    found = []
    with zipfile.ZipFile(path) as archive:
        for entry in archive.infolist():
            name_length, extra_length = struct.unpack_from("<2H", data, entry.header_offset + 26)
            start = entry.header_offset + 30 + name_length + extra_length
            found.append(
                Member(
                    entry.filename,
                    data[start : start + entry.compress_size],
                    entry.compress_type,
                    entry.CRC,
                    entry.file_size,
                    entry.date_time,
                    (entry.create_system, entry.internal_attr, entry.external_attr),
                    entry.comment,
                )
            )
    return found


class Comparison(NamedTuple):
    """Names of the members whose content changed, those that are new, and what is wrong."""

    changed: list[str]
    added: list[str]
    faults: list[str]


def compare(before: Path, after: Path) -> Comparison:
    """Compare two versions of a workbook.

    It is a fault when a member is gone or moved, when one with the same content is compressed
    anew or described otherwise, or when a new one stands before an old one.
    """
    old, new = members(before), members(after)
    faults = []
    if [m.name for m in new[: len(old)]] != [m.name for m in old]:
        faults.append("members are gone or in another order")
    changed = []
    for was, now in zip(old, new, strict=False):
        if (was.crc, was.size) != (now.crc, now.size):
            changed.append(was.name)
            if was._replace(packed=b"", method=0, crc=0, size=0, date=()) != now._replace(
                packed=b"", method=0, crc=0, size=0, date=()
            ):
                faults.append(f"{was.name} is described otherwise")
        elif was != now:
            faults.append(f"{was.name} has the same content but not the same bytes")
    with zipfile.ZipFile(before) as first, zipfile.ZipFile(after) as second:
        if first.comment != second.comment:
            faults.append("the comment of the zip changed")
    return Comparison(changed, [m.name for m in new[len(old) :]], faults)
