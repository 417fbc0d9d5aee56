"""What members may be called, how they may be packed and how big they may be."""

from __future__ import annotations

from dataclasses import replace

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.member_rules import MAX_MEMBERS, MAX_PART, refuse_members
from workbook_tools.zip_records import STORED, Member


def member(name: str = "xl/workbook.xml", *, size: int = 100, compressed_size: int = 50) -> Member:
    """Return a deflated member of that name and those sizes; the rest does not matter here."""
    return Member(
        name=name,
        name_bytes=name.encode(),
        made_by=20,
        needed=20,
        flags=0,
        method=8,
        dos_time=0,
        dos_date=0,
        crc=0,
        compressed_size=compressed_size,
        size=size,
        internal_attributes=0,
        external_attributes=0,
        extra=b"",
        comment=b"",
        data_offset=0,
    )


def test_ordinary_members_and_folders_pass() -> None:
    names = ["[Content_Types].xml", "xl/", "xl/workbook.xml", "xl/a..b.xml", "xl/größe.xml"]
    refuse_members([member(name) for name in names], "log.xlsx")


@pytest.mark.parametrize(
    ("name", "what"),
    [
        ("xl\\workbook.xml", "backslashes"),
        ("/xl/workbook.xml", "not allowed"),
        ("../workbook.xml", "not allowed"),
        ("xl/../../workbook.xml", "not allowed"),
        ("xl/work\0book.xml", "not allowed"),
        ("xl/\x1b[2Jbook.xml", "not allowed"),
        ("", "not allowed"),
    ],
)
def test_unsafe_names_are_refused(name: str, what: str) -> None:
    with pytest.raises(Refusal, match=what):
        refuse_members([member(name)], "log.xlsx")


@pytest.mark.parametrize("second", ["xl/sheet1.xml", "XL/Sheet1.xml"])
def test_two_members_of_one_name_are_refused_whatever_the_case(second: str) -> None:
    with pytest.raises(Refusal, match="two parts of the same name"):
        refuse_members([member("xl/sheet1.xml"), member(second)], "log.xlsx")


@pytest.mark.parametrize("flag", [0x0001, 0x0040, 0x2000])
def test_zip_encryption_is_refused(flag: int) -> None:
    with pytest.raises(Refusal, match="zip encryption"):
        refuse_members([replace(member(), flags=flag)], "log.xlsx")


@pytest.mark.parametrize("method", [1, 9, 12, 14, 93])
def test_other_packing_methods_are_refused_by_number(method: int) -> None:
    with pytest.raises(Refusal, match=f"zip method {method} "):
        refuse_members([replace(member(), method=method)], "log.xlsx")


def test_a_stored_member_with_two_sizes_is_damaged() -> None:
    with pytest.raises(Refusal, match="is damaged"):
        refuse_members([replace(member(), method=STORED)], "log.xlsx")


def test_a_part_over_the_limit_is_refused() -> None:
    large = member(size=MAX_PART, compressed_size=MAX_PART // 10)
    refuse_members([large], "log.xlsx")
    with pytest.raises(Refusal, match="limit 1 GB"):
        refuse_members([replace(large, size=MAX_PART + 1)], "log.xlsx")


def test_parts_over_the_limit_together_are_refused() -> None:
    parts = [member(f"xl/{n}.xml", size=MAX_PART, compressed_size=10**8) for n in range(3)]
    refuse_members(parts[:2], "log.xlsx")
    with pytest.raises(Refusal, match="3 GB together"):
        refuse_members(parts, "log.xlsx")


def test_the_ratio_counts_only_above_ten_megabytes() -> None:
    refuse_members([member(size=10**7, compressed_size=10**4)], "log.xlsx")
    refuse_members([member(size=2 * 10**7, compressed_size=10**5)], "log.xlsx")
    with pytest.raises(Refusal, match="more than 200 times"):
        refuse_members([member(size=2 * 10**7, compressed_size=10**5 - 1)], "log.xlsx")


def test_too_many_members_are_refused() -> None:
    members = [member(f"xl/{n}.xml") for n in range(MAX_MEMBERS + 1)]
    refuse_members(members[:-1], "log.xlsx")
    with pytest.raises(Refusal, match="10,001 members"):
        refuse_members(members, "log.xlsx")
