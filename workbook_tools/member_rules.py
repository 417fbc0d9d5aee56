"""What the members of a workbook's zip file may be called, how they may be packed and how big be.

Sources: names as in ECMA-376 part 2 (OPC), 10.1.3 and 7.3 (from memory); the limits against zip
bombs are common practice, no source.
"""

from __future__ import annotations

from collections.abc import Sequence

from workbook_tools.zip_records import DEFLATED, ENCRYPTED_FLAGS, STORED, Member
from workbook_tools.zip_refusals import damaged, to_save_again, too_large

MAX_PART = 10**9
MAX_TOTAL = 2 * 10**9
MAX_MEMBERS = 10_000
MAX_RATIO = 200
_RATIO_COUNTS_ABOVE = 10 * 10**6  # a small part of repeated bytes packs better and harms nobody


def refuse_members(members: Sequence[Member], label: str) -> None:
    """Refuse members that no workbook should have.

    Args:
        members: as the zip directory lists them.
        label: how the message calls the file.
    Raises:
        Refusal: unsafe or clashing names, zip encryption, an unknown packing method, or a bomb.
    """
    if len(members) > MAX_MEMBERS:
        raise too_large(label, f"it has {len(members):,} members (limit {MAX_MEMBERS:,})")
    _refuse_names([member.name for member in members], label)
    for member in members:
        _refuse_packing(member, label)
        _refuse_bomb(member, label)
    total = sum(member.size for member in members)
    if total > MAX_TOTAL:
        raise too_large(
            label, f"its parts would unpack to {_gb(total)} GB together (limit {_gb(MAX_TOTAL)} GB)"
        )


def _refuse_names(names: Sequence[str], label: str) -> None:
    seen: set[str] = set()
    for name in names:
        if not name or not name.isprintable() or name.startswith("/") or ".." in name.split("/"):
            raise to_save_again(label, f"has a part whose name is not allowed ({name!r})")
        if "\\" in name:
            raise to_save_again(
                label, f"has a part whose name is spelled with backslashes ({name})"
            )
        # Readers disagree on which of two counts; part names are equal regardless of case.
        if name.lower() in seen:
            raise to_save_again(label, f"has two parts of the same name ({name})")
        seen.add(name.lower())


def _refuse_packing(member: Member, label: str) -> None:
    if member.flags & ENCRYPTED_FLAGS:
        raise to_save_again(label, f"has a part with zip encryption ({member.name})")
    if member.method not in (STORED, DEFLATED):
        raise to_save_again(
            label, f"has a part packed with zip method {member.method} ({member.name})"
        )
    if member.method == STORED and member.compressed_size != member.size:
        raise damaged(label, f"the two sizes of {member.name}, which is not packed, differ")


def _refuse_bomb(member: Member, label: str) -> None:
    if member.size > MAX_PART:
        raise too_large(
            label,
            f"{member.name} would unpack to {_gb(member.size)} GB (limit {_gb(MAX_PART)} GB)",
        )
    if member.size > _RATIO_COUNTS_ABOVE and member.size > MAX_RATIO * member.compressed_size:
        raise too_large(
            label,
            f"{member.name} would unpack to more than {MAX_RATIO} times its packed size",
        )


def _gb(size: int) -> str:
    return f"{size / 10**9:.3g}"
