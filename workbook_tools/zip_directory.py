"""Reading the directory of a zip file, strictly: what could be understood in two ways is refused.

Source: PKWARE, .ZIP File Format Specification (APPNOTE) 6.3, sections 4.3 to 4.5.
"""

from __future__ import annotations

from dataclasses import replace
from typing import NamedTuple

from workbook_tools.errors import Refusal
from workbook_tools.member_rules import refuse_members
from workbook_tools.zip_records import (
    CENTRAL,
    CENTRAL_SIGNATURE,
    DESCRIPTOR_FLAG,
    END,
    END_SIGNATURE,
    LOCAL,
    LOCAL_SIGNATURE,
    UTF8_FLAG,
    Member,
)
from workbook_tools.zip_refusals import damaged, to_save_again

_FULL_16, _FULL_32 = 0xFFFF, 0xFFFFFFFF  # "see the zip64 record"
_ZIP64_EXTRA = 0x0001
_ZIP64_LOCATOR = b"PK\x06\x07"
_ZIP64_LOCATOR_SIZE = 20


class _End(NamedTuple):
    """The end record: where the directory lies and what it counts."""

    position: int
    directory_offset: int
    entry_count: int
    comment: bytes


class _Entry(NamedTuple):
    """A directory entry and where its local header begins."""

    member: Member
    local_offset: int


def read_directory(data: bytes, label: str) -> tuple[tuple[Member, ...], bytes]:
    """Return the members in directory order, and the comment of the zip file.

    Args:
        data: the whole file.
        label: how messages call the file.
    Raises:
        Refusal: cut short, inconsistent, overlapping, encrypted, zip64, split over several files,
            packed with another method, with names that are unsafe or clash, or a zip bomb.
    """
    end = _end_of_directory(data, label)
    entries = _entries(data, end, label)
    refuse_members([entry.member for entry in entries], label)
    located = [_located(data, entry, label) for entry in entries]
    _refuse_overlaps(located, end.directory_offset, label)
    return tuple(entry.member for entry in located), end.comment


def _end_of_directory(data: bytes, label: str) -> _End:
    # The comment may hold the signature too, so its length must reach the end of the file.
    lowest = max(0, len(data) - END.size - _FULL_16)
    position = data.rfind(END_SIGNATURE, lowest)
    while position >= 0:
        if len(data) >= position + END.size:
            fields = END.unpack_from(data, position)
            if position + END.size + fields[-1] == len(data):
                break
        position = data.rfind(END_SIGNATURE, lowest, position)
    else:
        raise damaged(label, "it is cut short, or has foreign bytes after its end")
    _, disk, directory_disk, count_here, count, size, offset, _ = fields
    locator = data[max(0, position - _ZIP64_LOCATOR_SIZE) : position]
    if _FULL_16 in (count_here, count) or _FULL_32 in (size, offset):
        raise _zip64(label)
    if locator.startswith(_ZIP64_LOCATOR):
        raise _zip64(label)
    if disk or directory_disk or count_here != count:
        raise _split(label)
    if offset + size != position:
        raise damaged(label, "its zip directory is not where its last record says")
    if count == 0:
        raise Refusal(f"{label} is an empty zip file, not a workbook; restore an older copy of it.")
    return _End(position, offset, count, data[position + END.size :])


def _entries(data: bytes, end: _End, label: str) -> list[_Entry]:
    entries = []
    position = end.directory_offset
    for _ in range(end.entry_count):
        if data[position : position + 4] != CENTRAL_SIGNATURE:
            break
        if position + CENTRAL.size > end.position:
            break
        fields = CENTRAL.unpack_from(data, position)
        _, made_by, needed, flags, method, dos_time, dos_date, crc, compressed_size, size = fields[
            :10
        ]
        name_size, extra_size, comment_size, disk, internal, external, local_offset = fields[10:]
        extra_from = position + CENTRAL.size + name_size
        comment_from = extra_from + extra_size
        name_bytes = data[position + CENTRAL.size : extra_from]
        extra = data[extra_from:comment_from]
        position = comment_from + comment_size
        if _FULL_32 in (compressed_size, size, local_offset) or _has_zip64(extra):
            raise _zip64(label)
        if disk:
            raise _split(label)
        member = Member(
            name=_decoded(name_bytes, flags, label),
            name_bytes=name_bytes,
            made_by=made_by,
            needed=needed,
            flags=flags,
            method=method,
            dos_time=dos_time,
            dos_date=dos_date,
            crc=crc,
            compressed_size=compressed_size,
            size=size,
            internal_attributes=internal,
            external_attributes=external,
            extra=extra,
            comment=data[comment_from:position],
            data_offset=0,
        )
        entries.append(_Entry(member, local_offset))
    if len(entries) != end.entry_count or position != end.position:
        raise damaged(label, "its zip directory does not hold what its last record counts")
    return entries


def _decoded(name: bytes, flags: int, label: str) -> str:
    try:
        return name.decode("utf-8" if flags & UTF8_FLAG else "cp437")
    except UnicodeDecodeError as error:
        raise damaged(label, f"the name of a part cannot be read ({name!r})") from error


def _has_zip64(extra: bytes) -> bool:
    position = 0
    while position + 4 <= len(extra):
        if int.from_bytes(extra[position : position + 2], "little") == _ZIP64_EXTRA:
            return True
        position += 4 + int.from_bytes(extra[position + 2 : position + 4], "little")
    return False


def _zip64(label: str) -> Refusal:
    return to_save_again(label, "is a zip file with 64-bit sizes, which spreadsheet programs avoid")


def _split(label: str) -> Refusal:
    return to_save_again(label, "is one piece of a zip file split over several files")


def _located(data: bytes, entry: _Entry, label: str) -> _Entry:
    """Return the entry with the offset of its data, after comparing both of its headers."""
    member, start = entry
    if data[start : start + 4] != LOCAL_SIGNATURE or start + LOCAL.size > len(data):
        raise damaged(label, f"{member.name} is not where the zip directory says")
    _, _, flags, method, _, _, crc, compressed_size, size, name_length, extra_length = (
        LOCAL.unpack_from(data, start)
    )
    name_from = start + LOCAL.size
    extra_from = name_from + name_length
    data_offset = extra_from + extra_length
    if _FULL_32 in (compressed_size, size) or _has_zip64(data[extra_from:data_offset]):
        raise _zip64(label)
    sizes = (crc, compressed_size, size)
    agrees = sizes == (member.crc, member.compressed_size, member.size) or (
        flags & DESCRIPTOR_FLAG and sizes == (0, 0, 0)
    )
    name_bytes = data[name_from:extra_from]
    if not agrees or (flags, method, name_bytes) != (
        member.flags,
        member.method,
        member.name_bytes,
    ):
        raise damaged(label, f"the two headers of {member.name} disagree")
    return entry._replace(member=replace(member, data_offset=data_offset))


def _refuse_overlaps(entries: list[_Entry], limit: int, label: str) -> None:
    previous_end = 0
    for member, start in sorted(entries, key=lambda entry: entry.local_offset):
        if start < previous_end:
            raise damaged(label, f"{member.name} overlaps another part")
        previous_end = member.data_offset + member.compressed_size
        if previous_end > limit:
            raise damaged(label, f"{member.name} runs beyond its place")
