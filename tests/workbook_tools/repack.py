"""Making one workbook out of another by changing the bytes of some of its parts."""

from __future__ import annotations

import zipfile
from collections.abc import Mapping
from pathlib import Path

_DATE = (1980, 1, 1, 0, 0, 0)


def repack(source: Path, target: Path, changes: Mapping[str, bytes | None]) -> Path:
    """Write `target` as `source` with parts replaced, added (new names) or left out (None).

    The result has fixed dates and depends on nothing but the input, so it is the same everywhere.
    """
    with zipfile.ZipFile(source) as old:
        contents: dict[str, bytes | None] = {name: old.read(name) for name in old.namelist()}
    contents.update(changes)
    with zipfile.ZipFile(target, "w", zipfile.ZIP_DEFLATED) as new:
        for name, data in contents.items():
            if data is not None:
                entry = zipfile.ZipInfo(name, _DATE)
                entry.compress_type = zipfile.ZIP_DEFLATED
                entry.create_system = 0  # the same bytes on every operating system
                new.writestr(entry, data)
    return target


def part(path: Path, name: str) -> bytes:
    """Content of one part."""
    with zipfile.ZipFile(path) as archive:
        return archive.read(name)


def swapped(data: bytes, old: str, new: str) -> bytes:
    """`data` with the one occurrence of `old` replaced; anything but one is a mistake."""
    count = data.count(old.encode())
    if count != 1:
        raise ValueError(f"{old!r} occurs {count} times")
    return data.replace(old.encode(), new.encode())
