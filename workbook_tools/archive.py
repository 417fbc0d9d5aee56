"""A zip file read and rewritten member by member; what stays is copied as it is compressed."""

from __future__ import annotations

import zlib
from collections import deque
from collections.abc import Iterable, Iterator, Mapping
from concurrent.futures import Future, ThreadPoolExecutor
from dataclasses import replace
from io import BytesIO
from pathlib import Path
from typing import BinaryIO, Self

from workbook_tools.errors import Refusal
from workbook_tools.foreign_files import refuse_foreign_file, refuse_foreign_package
from workbook_tools.member_rules import MAX_PART
from workbook_tools.zip_directory import read_directory
from workbook_tools.zip_records import (
    DEFLATED,
    DESCRIPTOR_FLAG,
    STORED,
    Member,
    end_record,
)
from workbook_tools.zip_refusals import damaged, too_large

Pieces = Iterable[bytes | memoryview]

MAX_FILE = 2**31 - 1  # what every reader of 32-bit zip files accepts

# Measured on 56 MB of sheet XML (zlib 1.2.13): 0.97 times the size and 0.63 times the time of
# level 6, and 1.09 times its size on the worst of 112 real workbooks; Z_FILTERED leaves out the
# short matches that cost much in columns of digits.
_LEVEL, _STRATEGY = 5, zlib.Z_FILTERED
_RAW = -zlib.MAX_WBITS
_BLOCK = 1 << 17
_BLOCKS_AHEAD = 8


class Archive:
    """The members of one zip file, held in memory as they are compressed.

    Attributes:
        label: how messages call the file.
        members: in directory order.
    """

    def __init__(
        self, data: bytes, label: str, members: tuple[Member, ...], comment: bytes
    ) -> None:
        """Keep what was checked; made by `open` and `from_bytes`."""
        self.label = label
        self.members = members
        self._data = data
        self._comment = comment
        self._by_name = {member.name.lower(): member for member in members}

    @classmethod
    def open(cls, path: Path) -> Self:
        """Read a file once, as a whole.

        Raises:
            Refusal: missing, unreadable or over 2 GB, or as `from_bytes`.
        """
        try:
            if path.is_dir():
                raise Refusal(f"{path} is a folder; name a workbook.")
            size = path.stat().st_size
            if size > MAX_FILE:
                raise too_large(path.name, f"it has {size / 10**9:.3g} GB (limit 2 GB)")
            data = path.read_bytes()
        except FileNotFoundError as error:
            raise Refusal(f"There is no file {path}; check its name and folder.") from error
        except OSError as error:
            raise Refusal(
                f"{path} cannot be read ({error.strerror});"
                " close it in other programs or ask for permission."
            ) from error
        return cls.from_bytes(data, path.name)

    @classmethod
    def from_bytes(cls, data: bytes, label: str) -> Self:
        """Check the directory of a zip file and all its local headers.

        Args:
            data: the whole file.
            label: how messages call the file.
        Raises:
            Refusal: no zip file, encrypted, an old or OpenDocument workbook, signed, damaged,
                ambiguous or a zip bomb; one sentence says which and what to do.
        """
        refuse_foreign_file(data, label)
        archive = cls(data, label, *read_directory(data, label))
        mimetype = archive.read("mimetype") if "mimetype" in archive else b""
        refuse_foreign_package(archive.names(), mimetype, label)
        return archive

    def names(self) -> tuple[str, ...]:
        """Return the names of all members, in directory order."""
        return tuple(member.name for member in self.members)

    def find(self, name: str) -> Member | None:
        """Return the member of that name, whatever its case; None where there is none."""
        return self._by_name.get(name.lower())

    def __contains__(self, name: str) -> bool:
        return self.find(name) is not None

    def read(self, name: str) -> bytes:
        """Return the inflated bytes of a member.

        Args:
            name: in any case.
        Raises:
            KeyError: there is no such member.
            Refusal: the member does not inflate to the size and CRC that the directory states.
        """
        content = BytesIO()
        for block in self._unpacked(name):
            content.write(block)
        return content.getvalue()

    def check(self, name: str) -> None:
        """Unpack a member as `read` does, without keeping it.

        Raises:
            KeyError, Refusal: as `read`.
        """
        for _ in self._unpacked(name):
            pass

    def rewrite(
        self,
        sink: BinaryIO,
        changed: Mapping[str, Pieces],
    ) -> None:
        """Write the zip file anew: changed members from their pieces, all others as they are.

        Order, names, flags, methods, dates, attributes and comments stay. Memory does not grow
        with the size of a changed member.

        Args:
            sink: empty, open for writing, seekable.
            changed: name of a member, in any case, to its new content; each is used up once.
        Raises:
            KeyError: `changed` names no member (a bug of ours).
            Refusal: the result or a member in it would be too large.
        """
        replaced = {self._by_name[name.lower()].name: pieces for name, pieces in changed.items()}
        directory: list[bytes] = []
        for member in self.members:
            offset = sink.tell()
            pieces = replaced.get(member.name)
            written = replace(member, flags=member.flags & ~DESCRIPTOR_FLAG)
            if pieces is None:
                sink.write(written.local_header())
                sink.write(self._packed(member))
            else:
                written = _write_pieces(sink, written, pieces, self.label)
            directory.append(written.central_header(offset))
            self._refuse_large(sink)
        offset = sink.tell()
        entries = b"".join(directory)
        sink.write(entries)
        sink.write(end_record(len(directory), len(entries), offset, self._comment))
        self._refuse_large(sink)

    def _unpacked(self, name: str) -> Iterator[bytes | memoryview]:
        """Yield a member in blocks, and raise at the end where it is not what it should be."""
        member = self._by_name[name.lower()]
        packed = self._packed(member)
        size = crc = 0
        blocks = [packed] if member.method == STORED else _inflated(packed, member.size)
        try:
            for block in blocks:
                size += len(block)
                crc = zlib.crc32(block, crc)
                yield block
        except zlib.error as error:
            raise damaged(self.label, f"{member.name} cannot be unpacked") from error
        if size != member.size or crc != member.crc:
            raise damaged(self.label, f"{member.name} does not match its checksum")

    def _packed(self, member: Member) -> memoryview:
        start = member.data_offset
        return memoryview(self._data)[start : start + member.compressed_size]

    def _refuse_large(self, sink: BinaryIO) -> None:
        if sink.tell() > MAX_FILE:
            raise _outgrown(self.label, "the result would have more than 2 GB")


def _outgrown(label: str, what: str) -> Refusal:
    return Refusal(f"{label} cannot be filled: {what}; move some of its rows to another workbook.")


def _write_pieces(sink: BinaryIO, member: Member, pieces: Pieces, label: str) -> Member:
    """Write a member whose sizes are known only afterwards; return it with them."""
    start = sink.tell()
    sink.write(member.local_header())
    data_offset = sink.tell()
    size = crc = 0
    packer = zlib.compressobj(_LEVEL, zlib.DEFLATED, _RAW, strategy=_STRATEGY)
    # Deflating takes longer than all the rest and needs no interpreter lock: it runs beside.
    with ThreadPoolExecutor(max_workers=1) as beside:
        waiting: deque[Future[bytes]] = deque()
        for block in _blocks(pieces):
            size += len(block)
            if size > MAX_PART:
                raise _outgrown(label, f"{member.name} would unpack to more than 1 GB")
            crc = zlib.crc32(block, crc)
            if member.method == STORED:
                sink.write(block)
                continue
            waiting.append(beside.submit(packer.compress, block))
            if len(waiting) > _BLOCKS_AHEAD:
                sink.write(waiting.popleft().result())
        for done in waiting:
            sink.write(done.result())
    if member.method == DEFLATED:
        sink.write(packer.flush())
    end = sink.tell()
    written = replace(member, crc=crc, compressed_size=end - data_offset, size=size)
    sink.seek(start)
    sink.write(written.local_header())
    sink.seek(end)
    return written


def _blocks(pieces: Pieces) -> Iterator[bytes | memoryview]:
    """Join small pieces and cut large ones: neither calls nor memory may depend on their sizes."""
    pending: list[bytes | memoryview] = []
    held = 0
    for piece in pieces:
        if len(piece) > _BLOCK:
            yield b"".join(pending)
            pending, held = [], 0
            view = memoryview(piece)
            for start in range(0, len(view), _BLOCK):
                yield view[start : start + _BLOCK]
            continue
        pending.append(piece)
        held += len(piece)
        if held >= _BLOCK:
            yield b"".join(pending)
            pending, held = [], 0
    yield b"".join(pending)


def _inflated(packed: memoryview, size: int) -> Iterator[bytes]:
    """Inflate at most one byte more than `size`, which is enough to see that a size is false."""
    unpacker = zlib.decompressobj(_RAW)
    found = 0
    for start in range(0, len(packed), _BLOCK):
        block = unpacker.decompress(packed[start : start + _BLOCK], size + 1 - found)
        found += len(block)
        yield block
        if found > size or unpacker.eof:
            break
