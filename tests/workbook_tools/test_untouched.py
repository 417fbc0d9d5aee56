"""The comparison of two zip files finds what is not byte for byte the same."""

from __future__ import annotations

import zipfile
from pathlib import Path

import pytest

from tests.workbook_tools.untouched import compare

CONTENT = {"a.xml": b"<a>" + b"text " * 50 + b"</a>", "b.xml": b"<b/>"}


def write(path: Path, content: dict[str, bytes], *, level: int = 6, comment: bytes = b"") -> Path:
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED, compresslevel=level) as archive:
        archive.comment = comment
        for name, data in content.items():
            entry = zipfile.ZipInfo(name, (1980, 1, 1, 0, 0, 0))
            entry.compress_type = zipfile.ZIP_DEFLATED
            archive.writestr(entry, data, compresslevel=level)
    return path


@pytest.fixture
def before(tmp_path: Path) -> Path:
    return write(tmp_path / "before.zip", CONTENT)


def test_the_same_file_is_the_same(before: Path) -> None:
    assert compare(before, before) == ([], [], [])


def test_changed_and_added_members_are_named(before: Path, tmp_path: Path) -> None:
    after = write(tmp_path / "after.zip", CONTENT | {"b.xml": b"<b>1</b>", "c.xml": b"<c/>"})
    assert compare(before, after) == (["b.xml"], ["c.xml"], [])


def test_compressing_anew_is_a_fault(before: Path, tmp_path: Path) -> None:
    after = write(tmp_path / "after.zip", CONTENT, level=0)
    fault = "a.xml has the same content but not the same bytes"
    assert fault in compare(before, after).faults


@pytest.mark.parametrize("names", [["b.xml", "a.xml"], ["a.xml"], ["c.xml", "a.xml", "b.xml"]])
def test_another_order_is_a_fault(before: Path, tmp_path: Path, names: list[str]) -> None:
    content = {name: CONTENT.get(name, b"<c/>") for name in names}
    after = write(tmp_path / "after.zip", content)
    assert "members are gone or in another order" in compare(before, after).faults


def test_another_comment_is_a_fault(before: Path, tmp_path: Path) -> None:
    after = write(tmp_path / "after.zip", CONTENT, comment=b"new")
    assert compare(before, after).faults == ["the comment of the zip changed"]
