"""Owner files of spreadsheet programs are found beside a workbook and name its owner."""

from __future__ import annotations

from pathlib import Path
from typing import BinaryIO

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.file_system import REAL_FILES, FileSystem
from workbook_tools.owner_files import owner_file, refuse_open


def excel_content(owner: str) -> bytes:
    """165 bytes as Excel writes them (LibreOffice, svl, msodocumentlockfile.cxx)."""
    local = owner.encode("cp1252", "replace")
    wide = owner.encode("utf-16-le")
    content = bytes([len(local)]) + local.ljust(54, b" ")
    content += len(owner).to_bytes(2, "little") + wide
    return content.ljust(165, b" ")


LIBRE_CONTENT = "Ann\\, of the Long Survey,ann,desk7,01.12.2026 14:03,file:///home/ann/profile;"


@pytest.fixture
def log(tmp_path: Path) -> Path:
    path = tmp_path / "observing log.xlsx"
    path.write_bytes(b"old")
    return path


def test_no_owner_file(log: Path) -> None:
    log.with_name("~$another log.xlsx").write_bytes(excel_content("Ann"))
    assert owner_file(log, REAL_FILES) is None
    refuse_open(log, REAL_FILES)


@pytest.mark.parametrize("owner", ["Ann", "Žofie Δ", "A" * 52])
def test_excel_owner_file(log: Path, owner: str) -> None:
    sign = log.with_name("~$observing log.xlsx")
    sign.write_bytes(excel_content(owner))
    found = owner_file(log, REAL_FILES)
    assert found is not None
    assert (found.path, found.owner) == (sign, owner)


def test_libreoffice_owner_file_with_an_escaped_comma(log: Path) -> None:
    sign = log.with_name(".~lock.observing log.xlsx#")
    sign.write_text(LIBRE_CONTENT, encoding="utf-8")
    found = owner_file(log, REAL_FILES)
    assert found is not None
    assert (found.path, found.owner) == (sign, "Ann, of the Long Survey")


@pytest.mark.parametrize("content", [b"", b"\x03Ann", b"\xff" * 165, b",;\n"])
@pytest.mark.parametrize("name", ["~$observing log.xlsx", ".~lock.observing log.xlsx#"])
def test_an_owner_file_of_any_content_counts(log: Path, name: str, content: bytes) -> None:
    log.with_name(name).write_bytes(content)
    with pytest.raises(Refusal, match="open in another program") as caught:
        refuse_open(log, REAL_FILES)
    assert str(caught.value).isprintable()


def test_an_owner_file_that_nobody_else_may_read_counts(log: Path) -> None:
    class Held(FileSystem):
        def open(self, path: Path) -> BinaryIO:
            raise PermissionError(13, "held")

    log.with_name("~$observing log.xlsx").write_bytes(excel_content("Ann"))
    found = owner_file(log, Held())
    assert found is not None
    assert found.owner == ""


def test_an_owner_file_beside_the_target_of_a_link_is_found(log: Path, tmp_path: Path) -> None:
    folder = tmp_path / "elsewhere"
    folder.mkdir()
    link = folder / "short.xlsx"
    try:
        link.symlink_to(log)
    except OSError:
        pytest.skip("this system makes no symbolic links for us")
    assert owner_file(link, REAL_FILES) is None
    log.with_name(".~lock.observing log.xlsx#").write_text(LIBRE_CONTENT, encoding="utf-8")
    assert owner_file(link, REAL_FILES) is not None


def test_the_refusal_names_the_file_its_owner_and_the_way_out(log: Path) -> None:
    log.with_name("~$observing log.xlsx").write_bytes(excel_content("Ann"))
    with pytest.raises(Refusal) as caught:
        refuse_open(log, REAL_FILES)
    for words in ("by Ann", "~$observing log.xlsx", "close it there", "--ignore-lock"):
        assert words in str(caught.value)
