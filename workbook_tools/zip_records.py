"""The records of a zip file as bytes: one member, its two headers, the end of the directory.

Source: PKWARE, .ZIP File Format Specification (APPNOTE) 6.3, sections 4.3.7, 4.3.12, 4.3.16, 4.4.
"""

from __future__ import annotations

from dataclasses import dataclass
from struct import Struct

LOCAL = Struct("<4s5H3L2H")
CENTRAL = Struct("<4s6H3L5H2L")
END = Struct("<4s4H2LH")
LOCAL_SIGNATURE = b"PK\x03\x04"
CENTRAL_SIGNATURE = b"PK\x01\x02"
END_SIGNATURE = b"PK\x05\x06"

STORED = 0
DEFLATED = 8
ENCRYPTED_FLAGS = 0x2041  # traditional, strong, and hidden header values
DESCRIPTOR_FLAG = 0x0008  # sizes and CRC follow the data instead of standing in the local header
UTF8_FLAG = 0x0800


@dataclass(frozen=True, slots=True)
class Member:
    """One member of a zip file, with all that its directory entry says.

    Attributes:
        name: path inside the zip, decoded.
        name_bytes: the same as it stands in the file; valid only together with `flags`.
        made_by, needed: version fields.
        flags, method: general purpose bits; 0 (stored) or 8 (deflated).
        dos_time, dos_date: time of last change.
        crc: CRC-32 of the inflated bytes.
        compressed_size, size: bytes in the file; bytes inflated.
        internal_attributes, external_attributes: copied, never read.
        extra: extra field of the directory entry.
        comment: comment of the directory entry.
        data_offset: where the compressed bytes begin.
    """

    name: str
    name_bytes: bytes
    made_by: int
    needed: int
    flags: int
    method: int
    dos_time: int
    dos_date: int
    crc: int
    compressed_size: int
    size: int
    internal_attributes: int
    external_attributes: int
    extra: bytes
    comment: bytes
    data_offset: int

    def local_header(self) -> bytes:
        """Return the header that stands before the data, without an extra field."""
        fields = (
            *(self.needed, self.flags, self.method, self.dos_time, self.dos_date),
            *(self.crc, self.compressed_size, self.size, len(self.name_bytes), 0),
        )
        return LOCAL.pack(LOCAL_SIGNATURE, *fields) + self.name_bytes

    def central_header(self, offset: int) -> bytes:
        """Return the directory entry of a member whose local header begins at `offset`."""
        fields = (
            *(self.made_by, self.needed, self.flags, self.method, self.dos_time, self.dos_date),
            *(self.crc, self.compressed_size, self.size),
            *(len(self.name_bytes), len(self.extra), len(self.comment), 0),
            *(self.internal_attributes, self.external_attributes, offset),
        )
        header = CENTRAL.pack(CENTRAL_SIGNATURE, *fields)
        return header + self.name_bytes + self.extra + self.comment


def end_record(count: int, size: int, offset: int, comment: bytes) -> bytes:
    """Return the end of the directory: `count` entries in `size` bytes from `offset` on."""
    return END.pack(END_SIGNATURE, 0, 0, count, count, size, offset, len(comment)) + comment
