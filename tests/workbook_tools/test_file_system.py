"""The calls to the operating system do what their sentences say, on the real one."""

from __future__ import annotations

import os
import stat
import sys
from pathlib import Path

import pytest

from workbook_tools.file_system import REAL_FILES, FileSystem

posix_only = pytest.mark.skipif(sys.platform == "win32", reason="modes and owners of POSIX")


def test_a_file_is_created_once(tmp_path: Path) -> None:
    with REAL_FILES.create(tmp_path / "new", 0o600) as file:
        file.write(b"line\nline\r\n")
        file.seek(0)
        file.write(b"L")
        REAL_FILES.flush_to_disk(file)
        assert (tmp_path / "new").read_bytes() == b"Line\nline\r\n"
    with pytest.raises(FileExistsError):
        REAL_FILES.create(tmp_path / "new", 0o600)


def test_a_read_only_file_is_not_writable_whoever_asks(tmp_path: Path) -> None:
    path = tmp_path / "log"
    path.write_bytes(b"")
    assert REAL_FILES.is_writable(path)
    path.chmod(0o444)
    assert not REAL_FILES.is_writable(path)
    assert REAL_FILES.is_writable(tmp_path)


def test_a_link_to_nothing_is_a_taken_name(tmp_path: Path) -> None:
    link = tmp_path / "link"
    try:
        link.symlink_to(tmp_path / "nothing")
    except OSError:
        pytest.skip("this system makes no symbolic links for us")
    assert REAL_FILES.exists(link)
    assert not REAL_FILES.exists(tmp_path / "nothing")


@posix_only
@pytest.mark.parametrize("with_times", [True, False])
def test_mode_and_times_are_copied(tmp_path: Path, with_times: bool) -> None:
    old, new = tmp_path / "old", tmp_path / "new"
    old.write_bytes(b"")
    new.write_bytes(b"")
    old.chmod(0o664)
    os.utime(old, ns=(10**18, 10**18))
    assert REAL_FILES.copy_attributes(old, new, with_times=with_times)
    assert stat.S_IMODE(new.stat().st_mode) == 0o664
    assert (new.stat().st_mtime_ns == 10**18) is with_times


@pytest.mark.skipif(not hasattr(os, "setxattr"), reason="this system has no extended attributes")
def test_extended_attributes_are_copied(tmp_path: Path) -> None:
    old, new = tmp_path / "old", tmp_path / "new"
    old.write_bytes(b"")
    new.write_bytes(b"")
    try:
        os.setxattr(old, "user.colour", b"blue")
    except OSError:
        pytest.skip("this folder takes no extended attributes")
    REAL_FILES.copy_attributes(old, new, with_times=False)
    assert os.getxattr(new, "user.colour") == b"blue"


@posix_only
def test_the_group_is_kept_where_the_owner_cannot_be(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    old, new = tmp_path / "old", tmp_path / "new"
    old.write_bytes(b"")
    new.write_bytes(b"")
    given: list[tuple[int, int]] = []

    def chown(path: Path, person: int, group: int) -> None:
        if person != -1:
            raise PermissionError(1, "only root may")
        given.append((person, group))

    class Strange(FileSystem):
        """The old file seems to belong to another person and group."""

        def status(self, path: Path) -> os.stat_result:
            fields = list(super().status(path))
            if path == old:
                fields[stat.ST_UID] += 1
                fields[stat.ST_GID] += 1
            return os.stat_result(fields)

    monkeypatch.setattr(os, "chown", chown)
    assert not Strange().copy_attributes(old, new, with_times=False)
    assert given == [(-1, old.stat().st_gid + 1)]


def test_a_folder_is_flushed_without_complaint(tmp_path: Path) -> None:
    REAL_FILES.flush_folder(tmp_path)
    if sys.platform != "win32":
        with pytest.raises(FileNotFoundError):
            REAL_FILES.flush_folder(tmp_path / "nothing")
