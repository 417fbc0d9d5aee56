"""A zip directory is read strictly: every doubtful file is refused with one sentence.

Files are made by the standard library and then altered at offsets of APPNOTE 6.3, 4.3.7 (local
header), 4.3.12 (directory entry) and 4.3.16 (end record).
"""

from __future__ import annotations

import struct
import warnings
import zipfile
from collections.abc import Callable
from io import BytesIO

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.zip_directory import read_directory

CONTENT = {"[Content_Types].xml": b"<Types/>" * 9, "xl/workbook.xml": b"<workbook/>" * 99}


def zipped(content: dict[str, bytes] = CONTENT, *, comment: bytes = b"") -> bytearray:
    sink = BytesIO()
    with zipfile.ZipFile(sink, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.comment = comment
        for name, data in content.items():
            archive.writestr(name, data)
    return bytearray(sink.getvalue())


def end_of(data: bytes) -> int:
    return data.rindex(b"PK\x05\x06")


def entry_of(data: bytes) -> int:
    return data.index(b"PK\x01\x02")


def put(data: bytearray, at: int, form: str, *values: int) -> None:
    struct.pack_into(f"<{form}", data, at, *values)


class _Pipe(BytesIO):
    """A sink that cannot seek: the writer must use data descriptors."""

    def seekable(self) -> bool:
        return False

    def seek(self, *_: int) -> int:
        raise OSError("no seeking")


def piped() -> bytes:
    sink = _Pipe()
    with zipfile.ZipFile(sink, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, data in CONTENT.items():
            archive.writestr(name, data)
    return sink.getvalue()


def test_members_are_as_another_reader_sees_them() -> None:
    data = bytes(zipped(comment=b"made for a test"))
    members, comment = read_directory(data, "log.xlsx")
    with zipfile.ZipFile(BytesIO(data)) as archive:
        infos = archive.infolist()
    assert comment == b"made for a test"
    for member, info in zip(members, infos, strict=True):
        assert (member.name, member.crc, member.size) == (info.filename, info.CRC, info.file_size)
        assert member.compressed_size == info.compress_size
        assert member.external_attributes == info.external_attr
        assert member.data_offset == info.header_offset + 30 + len(info.filename)


def test_data_descriptors_are_understood() -> None:
    data = piped()
    assert data[6] & 8
    members, _ = read_directory(data, "log.xlsx")
    assert [member.size for member in members] == [len(each) for each in CONTENT.values()]


def test_a_comment_may_hold_the_signature_of_the_end_record() -> None:
    comment = b"PK\x05\x06" + bytes(30) + b"PK\x05\x06"
    members, read = read_directory(bytes(zipped(comment=comment)), "log.xlsx")
    assert read == comment
    assert len(members) == 2


def test_local_extra_fields_shift_the_data() -> None:
    """Excel pads its local headers (id 0xA220), so data is found from the local lengths only."""
    sink = BytesIO()
    with zipfile.ZipFile(sink, "w") as archive:
        info = zipfile.ZipInfo("xl/workbook.xml")
        info.extra = struct.pack("<2H", 0xA220, 40) + bytes(40)
        archive.writestr(info, b"<workbook/>")
    data = sink.getvalue()
    (member,), _ = read_directory(data, "log.xlsx")
    assert data[member.data_offset : member.data_offset + 11] == b"<workbook/>"


def cut_short(data: bytearray) -> None:
    del data[-10:]


def cut_in_the_middle(data: bytearray) -> None:
    del data[len(data) // 2 :]


def appended(data: bytearray) -> None:
    data += b"tail"


def prefixed(data: bytearray) -> None:
    data[:0] = data[:37]


def one_entry_missing(data: bytearray) -> None:
    put(data, end_of(data) + 8, "2H", 1, 1)


def one_entry_too_many(data: bytearray) -> None:
    put(data, end_of(data) + 8, "2H", 3, 3)


def no_entry_signature(data: bytearray) -> None:
    data[entry_of(data)] = 0


def entry_beyond_directory(data: bytearray) -> None:
    put(data, data.rindex(b"PK\x01\x02") + 32, "H", 60000)


def entry_cut_short(data: bytearray) -> None:
    at = end_of(data)
    size = struct.unpack_from("<L", data, at + 12)[0]
    put(data, at + 8, "2HL", 3, 3, size + 4)
    data[at:at] = b"PK\x01\x02"


def local_header_cut_short(data: bytearray) -> None:
    put(data, end_of(data) + 20, "H", 4)
    put(data, entry_of(data) + 42, "L", len(data))
    data += b"PK\x03\x04"


def no_local_signature(data: bytearray) -> None:
    data[0] = 0


def local_offset_beyond_file(data: bytearray) -> None:
    put(data, entry_of(data) + 42, "L", len(data) + 1)


def local_crc_differs(data: bytearray) -> None:
    data[14] ^= 1


def local_size_differs(data: bytearray) -> None:
    data[22] ^= 1


def local_flags_differ(data: bytearray) -> None:
    data[6] ^= 2


def local_method_differs(data: bytearray) -> None:
    data[8] ^= 8


def local_name_differs(data: bytearray) -> None:
    data[31] ^= 1


def second_entry_at_the_first_member(data: bytearray) -> None:
    put(data, data.rindex(b"PK\x01\x02") + 42, "L", 0)


def packed_size_over_the_next_member(data: bytearray) -> None:
    size = struct.unpack_from("<L", data, entry_of(data) + 20)[0] + 40
    put(data, entry_of(data) + 20, "L", size)
    put(data, 18, "L", size)


def packed_size_over_the_directory(data: bytearray) -> None:
    second = data.rindex(b"PK\x01\x02")
    local = struct.unpack_from("<L", data, second + 42)[0]
    size = struct.unpack_from("<L", data, second + 20)[0] + 40
    put(data, second + 20, "L", size)
    put(data, local + 18, "L", size)


def name_not_utf8(data: bytearray) -> None:
    put(data, entry_of(data) + 8, "H", 0x0800)
    data[entry_of(data) + 46] = 0xFF


@pytest.mark.parametrize(
    ("alter", "what"),
    [
        (cut_short, "cut short"),
        (cut_in_the_middle, "cut short"),
        (appended, "foreign bytes after its end"),
        (prefixed, "not where its last record says"),
        (one_entry_missing, "does not hold what its last record counts"),
        (one_entry_too_many, "does not hold what its last record counts"),
        (no_entry_signature, "does not hold what its last record counts"),
        (entry_beyond_directory, "does not hold what its last record counts"),
        (entry_cut_short, "does not hold what its last record counts"),
        (local_header_cut_short, "not where the zip directory says"),
        (no_local_signature, "not where the zip directory says"),
        (local_offset_beyond_file, "not where the zip directory says"),
        (local_crc_differs, "disagree"),
        (local_size_differs, "disagree"),
        (local_flags_differ, "disagree"),
        (local_method_differs, "disagree"),
        (local_name_differs, "disagree"),
        (second_entry_at_the_first_member, "disagree"),
        (packed_size_over_the_next_member, "overlaps another part"),
        (packed_size_over_the_directory, "runs beyond its place"),
        (name_not_utf8, "cannot be read"),
    ],
)
def test_damage_is_refused(alter: Callable[[bytearray], None], what: str) -> None:
    data = zipped()
    alter(data)
    with pytest.raises(Refusal, match=r"log\.xlsx is damaged: .*; fetch it again") as caught:
        read_directory(bytes(data), "log.xlsx")
    assert what in str(caught.value)


def zip64_count(data: bytearray) -> None:
    put(data, end_of(data) + 8, "2H", 0xFFFF, 0xFFFF)


def zip64_offset(data: bytearray) -> None:
    put(data, end_of(data) + 16, "L", 0xFFFFFFFF)


def zip64_locator(data: bytearray) -> None:
    at = end_of(data)
    data[at:at] = b"PK\x06\x07" + bytes(16)


def zip64_entry_size(data: bytearray) -> None:
    put(data, entry_of(data) + 24, "L", 0xFFFFFFFF)


def zip64_local_size(data: bytearray) -> None:
    put(data, 22, "L", 0xFFFFFFFF)


@pytest.mark.parametrize(
    "alter", [zip64_count, zip64_offset, zip64_locator, zip64_entry_size, zip64_local_size]
)
def test_zip64_is_refused(alter: Callable[[bytearray], None]) -> None:
    data = zipped()
    alter(data)
    with pytest.raises(Refusal, match="64-bit sizes"):
        read_directory(bytes(data), "log.xlsx")


def test_zip64_forced_by_the_writer_is_refused() -> None:
    sink = BytesIO()
    with (
        zipfile.ZipFile(sink, "w") as archive,
        archive.open("xl/workbook.xml", "w", force_zip64=True) as part,
    ):
        part.write(b"<workbook/>")
    with pytest.raises(Refusal, match="64-bit sizes"):
        read_directory(sink.getvalue(), "log.xlsx")


@pytest.mark.parametrize("header", ["local", "directory"])
def test_a_zip64_extra_field_in_either_header_is_refused(header: str) -> None:
    sink = BytesIO()
    with zipfile.ZipFile(sink, "w") as archive:
        info = zipfile.ZipInfo("xl/workbook.xml")
        info.extra = struct.pack("<2HL", 0x5455, 4, 0) + struct.pack("<2HQ", 0x7FFF, 8, 11)
        archive.writestr(info, b"<workbook/>")
    data = bytearray(sink.getvalue())
    read_directory(bytes(data), "log.xlsx")
    field = struct.pack("<2H", 0x7FFF, 8)
    put(data, data.index(field) if header == "local" else data.rindex(field), "H", 1)
    with pytest.raises(Refusal, match="64-bit sizes"):
        read_directory(bytes(data), "log.xlsx")


@pytest.mark.parametrize("where", ["end disk", "directory disk", "count here", "entry disk"])
def test_a_split_zip_file_is_refused(where: str) -> None:
    data = zipped()
    at = {
        "end disk": end_of(data) + 4,
        "directory disk": end_of(data) + 6,
        "count here": end_of(data) + 8,
        "entry disk": entry_of(data) + 34,
    }[where]
    put(data, at, "H", 1)
    with pytest.raises(Refusal, match="split over several files"):
        read_directory(bytes(data), "log.xlsx")


def test_an_empty_zip_file_is_refused() -> None:
    with pytest.raises(Refusal, match="empty zip file"):
        read_directory(bytes(zipped({})), "log.xlsx")


def test_the_rules_for_members_are_applied() -> None:
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # the writer warns of what this test wants
        sink = BytesIO()
        with zipfile.ZipFile(sink, "w") as archive:
            archive.writestr("xl/sheet1.xml", b"1")
            archive.writestr("xl/sheet1.xml", b"2")
    with pytest.raises(Refusal, match="two parts of the same name"):
        read_directory(sink.getvalue(), "log.xlsx")
