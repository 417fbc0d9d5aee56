"""Owner files: what spreadsheet programs leave beside a workbook while somebody has it open.

Their forms: Excel writes `~$NAME` (length byte, name in the local code page padded to 55 bytes,
a 16-bit length, name in UTF-16LE); LibreOffice writes `.~lock.NAME#` (fields divided by commas, the
first is the user's name). Source: LibreOffice, svl, msodocumentlockfile.cxx and lockfilecommon.cxx.
"""

from __future__ import annotations

import re
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path

from workbook_tools.errors import Refusal
from workbook_tools.file_system import FileSystem

_UNICODE_LENGTH_AT = 55
_ENOUGH = 1 << 12


@dataclass(frozen=True)
class OwnerFile:
    """A sign that a workbook is open: the file, and the name in it (empty where unreadable)."""

    path: Path
    owner: str


def owner_file(path: Path, files: FileSystem) -> OwnerFile | None:
    """Return the owner file beside a workbook, or None.

    Args:
        path: as the user named it; where it is a link, its target's folder is searched as well.
        files: the calls to the operating system.
    Raises:
        OSError: the workbook is missing or its folder cannot be searched.
    """
    for place in dict.fromkeys((path, files.resolved(path))):
        office = place.with_name(f"~${place.name}")
        if files.exists(office):
            return OwnerFile(office, _office_owner(_content(office, files)))
        libre = place.with_name(f".~lock.{place.name}#")
        if files.exists(libre):
            return OwnerFile(libre, _libre_owner(_content(libre, files)))
    return None


def refuse_open(path: Path, files: FileSystem) -> None:
    """Refuse a workbook that somebody has open.

    Raises:
        Refusal: there is an owner file; the sentence names it, its owner and the way out.
        OSError: as `owner_file`.
    """
    found = owner_file(path, files)
    if found is None:
        return
    by = f" by {found.owner}" if found.owner else ""
    raise Refusal(
        f"{path.name} is open in another program{by} (owner file {found.path.name}): close it there"
        " and run again, or pass --ignore-lock if that file was left behind by a crash."
    )


def _content(path: Path, files: FileSystem) -> bytes:
    # The other program may hold it so that nobody can read it; its presence says enough.
    with suppress(OSError), files.open(path) as file:
        return file.read(_ENOUGH)
    return b""


def _office_owner(content: bytes) -> str:
    name_from = _UNICODE_LENGTH_AT + 2
    length = int.from_bytes(content[_UNICODE_LENGTH_AT:name_from], "little")
    return _plain(content[name_from : name_from + 2 * length].decode("utf-16-le", "replace"))


def _libre_owner(content: bytes) -> str:
    escaped = re.split(r"(?<!\\)[,;]", content.decode("utf-8", "replace"), maxsplit=1)[0]
    return _plain(re.sub(r"\\(.)", r"\1", escaped))


def _plain(name: str) -> str:
    return "".join(letter for letter in name if letter.isprintable()).strip()
