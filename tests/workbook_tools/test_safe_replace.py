"""A workbook is replaced in one step or stays as it was."""

from __future__ import annotations

import errno
import os
import stat
import sys
from datetime import datetime, timedelta
from pathlib import Path
from typing import BinaryIO

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.file_system import FileSystem
from workbook_tools.new_files import temporary_name
from workbook_tools.placement import prepare
from workbook_tools.safe_replace import put_in_place

NOW = datetime(2026, 12, 1, 14, 3, 22)
OLD, NEW = b"the old workbook", b"the filled workbook"
KEPT = "log (kept 2026-12-01 14.03.22).xlsx"


@pytest.fixture
def log(tmp_path: Path) -> Path:
    path = tmp_path / "log.xlsx"
    path.write_bytes(OLD)
    return path


def write(file: BinaryIO) -> None:
    file.write(NEW)


def accept(path: Path) -> None:
    assert path.read_bytes() == NEW


def names(log: Path) -> list[str]:
    return sorted(os.listdir(log.parent))


def refused(log: Path, files: FileSystem, *, output: Path | None = None) -> str:
    """Let a replacement fail; return the sentence after checking that nothing happened."""
    placement = prepare(log, output=output)
    before = names(log)
    with pytest.raises(Refusal) as caught:
        put_in_place(placement, write, verify=accept, now=NOW, files=files)
    assert names(log) == before
    assert log.read_bytes() == OLD
    return str(caught.value)


def test_the_workbook_is_replaced_and_a_dated_copy_kept(log: Path) -> None:
    done = put_in_place(prepare(log), write, verify=accept, now=NOW)
    assert done.path == log.resolve()
    assert done.kept == log.resolve().with_name(KEPT)
    assert done.warnings == ()
    assert log.read_bytes() == NEW
    assert done.kept.read_bytes() == OLD
    assert names(log) == sorted(["log.xlsx", KEPT])


def test_an_output_leaves_the_workbook_alone_and_keeps_no_copy(log: Path) -> None:
    output = log.with_name("filled.xlsx")
    done = put_in_place(prepare(log, output=output), write, verify=accept, now=NOW)
    assert (done.path, done.kept, done.warnings) == (output.resolve(), None, ())
    assert output.read_bytes() == NEW
    assert log.read_bytes() == OLD
    assert names(log) == ["filled.xlsx", "log.xlsx"]


def test_five_dated_copies_stay_after_many_fills(log: Path) -> None:
    for minute in range(7):
        now = NOW + timedelta(minutes=minute)
        put_in_place(prepare(log), write, verify=accept, now=now)
    assert names(log) == sorted(
        ["log.xlsx", *(f"log (kept 2026-12-01 14.{m:02}.22).xlsx" for m in range(5, 10))]
    )


def test_a_link_stays_a_link(log: Path) -> None:
    folder = log.parent / "links"
    folder.mkdir()
    link = folder / "short.xlsx"
    try:
        link.symlink_to(log)
    except OSError:
        pytest.skip("this system makes no symbolic links for us")
    done = put_in_place(prepare(link), write, verify=accept, now=NOW)
    assert link.is_symlink()
    assert log.read_bytes() == NEW
    assert done.kept == log.resolve().with_name(KEPT)
    assert os.listdir(folder) == ["short.xlsx"]


def test_hard_links_are_reported(log: Path) -> None:
    second = log.with_name("second.xlsx")
    try:
        os.link(log, second)
    except OSError:
        pytest.skip("this folder takes no hard links")
    done = put_in_place(prepare(log), write, verify=accept, now=NOW)
    assert second.read_bytes() == OLD
    (warning,) = done.warnings
    assert "hard links" in warning


@pytest.mark.skipif(sys.platform == "win32", reason="modes of POSIX")
@pytest.mark.parametrize("mode", [0o600, 0o664, 0o640])
def test_the_mode_stays_and_no_file_is_ever_more_open(log: Path, mode: int) -> None:
    log.chmod(mode)
    seen = []

    def look(path: Path) -> None:
        seen.append(stat.S_IMODE(path.stat().st_mode))

    done = put_in_place(prepare(log), write, verify=look, now=NOW)
    assert done.kept is not None
    assert stat.S_IMODE(log.stat().st_mode) == mode
    assert stat.S_IMODE(done.kept.stat().st_mode) == mode
    assert seen[0] & ~mode == 0


def test_the_new_workbook_has_a_new_time(log: Path) -> None:
    os.utime(log, ns=(10**18, 10**18))
    done = put_in_place(prepare(log), write, verify=accept, now=NOW)
    assert done.kept is not None
    assert log.stat().st_mtime_ns > 10**18
    assert done.kept.stat().st_mtime_ns == 10**18


def test_no_file_gets_its_name_before_the_disk_holds_it(log: Path) -> None:
    """Otherwise a power failure could leave an empty file under that name."""

    class Disk(FileSystem):
        def __init__(self) -> None:
            self.open_files: dict[BinaryIO, Path] = {}
            self.held: set[Path] = set()
            self.named: list[str] = []

        def create(self, path: Path, mode: int) -> BinaryIO:
            file = super().create(path, mode)
            self.open_files[file] = path
            return file

        def flush_to_disk(self, file: BinaryIO) -> None:
            super().flush_to_disk(file)
            if self.open_files[file].stat().st_size in (len(OLD), len(NEW)):
                self.held.add(self.open_files[file])

        def replace(self, source: Path, target: Path) -> None:
            assert source in self.held
            super().replace(source, target)
            self.named.append(target.name)

        def flush_folder(self, folder: Path) -> None:
            super().flush_folder(folder)
            self.named.append("flushed")

    disk = Disk()
    put_in_place(prepare(log), write, verify=accept, now=NOW, files=disk)
    assert disk.named == [KEPT, "log.xlsx", "flushed"]


class Failing(FileSystem):
    """Fails one call by name."""

    def __init__(self, call: str, error: OSError) -> None:
        self.call = call
        self.error = error

    def __getattribute__(self, name: str) -> object:
        if name == object.__getattribute__(self, "call"):

            def fail(*_: object, **__: object) -> object:
                raise object.__getattribute__(self, "error")

            return fail
        return object.__getattribute__(self, name)


@pytest.mark.parametrize(
    ("call", "number", "what"),
    [
        ("create", errno.EACCES, "No permission to write in"),
        ("create", errno.EROFS, "No permission to write in"),
        ("create", errno.ENOSPC, "is full and log.xlsx is unchanged; free some space"),
        ("flush_to_disk", errno.ENOSPC, "is full and log.xlsx is unchanged; free some space"),
        ("flush_to_disk", errno.EDQUOT, "is full and log.xlsx is unchanged; free some space"),
        ("flush_to_disk", errno.EIO, "log.xlsx is unchanged: choose another place"),
        ("create", errno.ENAMETOOLONG, "log.xlsx is unchanged: choose another place"),
        ("copy_attributes", errno.EIO, "log.xlsx is unchanged: choose another place"),
        ("replace", errno.EIO, "log.xlsx is unchanged: choose another place"),
    ],
)
def test_errors_of_the_system_become_sentences(
    log: Path, call: str, number: int, what: str
) -> None:
    sentence = refused(log, Failing(call, OSError(number, os.strerror(number))))
    assert what in sentence


def test_a_workbook_held_by_another_program_stays(log: Path) -> None:
    """As on Windows, where a program may forbid that its file is replaced."""

    class Held(FileSystem):
        def replace(self, source: Path, target: Path) -> None:
            if target.name == "log.xlsx":
                raise PermissionError(errno.EACCES, "Access is denied")
            super().replace(source, target)

    assert "open in another program or protected; close it" in refused(log, Held())


def test_a_disk_that_fills_up_while_writing(log: Path) -> None:
    def write_too_much(file: BinaryIO) -> None:
        file.write(b"half")
        raise OSError(errno.ENOSPC, "No space left on device")

    placement = prepare(log)
    with pytest.raises(Refusal, match="is full"):
        put_in_place(placement, write_too_much, verify=accept, now=NOW)
    assert names(log) == ["log.xlsx"]
    assert log.read_bytes() == OLD


def edited(log: Path) -> None:
    log.write_bytes(b"the old workbook, and a line more")


def edited_to_the_same_size(log: Path) -> None:
    log.write_bytes(OLD[::-1])
    os.utime(log, ns=(10**18, 10**18))


def saved_by_replacing(log: Path) -> None:
    status = log.stat()
    beside = log.with_name("beside")
    beside.write_bytes(OLD[::-1])
    os.utime(beside, ns=(status.st_atime_ns, status.st_mtime_ns))
    beside.replace(log)


@pytest.mark.parametrize("change", [edited, edited_to_the_same_size, saved_by_replacing])
@pytest.mark.parametrize("output", [None, "filled.xlsx"])
def test_a_workbook_changed_meanwhile_stays(log: Path, change: object, output: str | None) -> None:
    placement = prepare(log, output=log.with_name(output) if output else None)
    assert callable(change)
    change(log)
    theirs = log.read_bytes()
    with pytest.raises(Refusal, match=r"log\.xlsx was changed while it was being filled"):
        put_in_place(placement, write, verify=accept, now=NOW)
    assert log.read_bytes() == theirs
    assert names(log) == ["log.xlsx"]


def test_a_workbook_moved_away_meanwhile(log: Path) -> None:
    placement = prepare(log)
    away = log.with_name("away.xlsx")

    def move(_: Path) -> None:
        log.rename(away)

    with pytest.raises(Refusal):
        put_in_place(placement, write, verify=move, now=NOW)
    assert names(log) == ["away.xlsx"]
    assert away.read_bytes() == OLD


def test_a_workbook_opened_meanwhile_stays(log: Path) -> None:
    placement = prepare(log)

    def open_it(_: Path) -> None:
        log.with_name("~$log.xlsx").write_bytes(b"")

    with pytest.raises(Refusal, match="open in another program"):
        put_in_place(placement, write, verify=open_it, now=NOW)
    assert names(log) == ["log.xlsx", "~$log.xlsx"]
    assert log.read_bytes() == OLD
    ignoring = prepare(log, ignore_lock=True)
    put_in_place(ignoring, write, verify=accept, now=NOW)
    assert log.read_bytes() == NEW
    assert "~$log.xlsx" in names(log)


def test_an_output_that_appears_meanwhile_is_not_overwritten(log: Path) -> None:
    output = log.with_name("filled.xlsx")
    placement = prepare(log, output=output)

    def appear(_: Path) -> None:
        output.write_bytes(b"another's")

    with pytest.raises(Refusal, match="already exists"):
        put_in_place(placement, write, verify=appear, now=NOW)
    assert output.read_bytes() == b"another's"
    assert names(log) == ["filled.xlsx", "log.xlsx"]


@pytest.mark.parametrize("error", [Refusal("not as planned"), KeyboardInterrupt()])
def test_a_result_that_does_not_verify_is_thrown_away(log: Path, error: BaseException) -> None:
    def reject(path: Path) -> None:
        assert path.read_bytes() == NEW
        raise error

    with pytest.raises(type(error)):
        put_in_place(prepare(log), write, verify=reject, now=NOW)
    assert names(log) == ["log.xlsx"]
    assert log.read_bytes() == OLD


def test_two_fills_of_one_workbook_do_not_mix(log: Path) -> None:
    """The second finds the first's unfinished file, says so and leaves it alone."""
    placement = prepare(log)
    inner: list[str] = []

    def second_run(_: Path) -> None:
        with pytest.raises(Refusal) as caught:
            put_in_place(placement, write, verify=accept, now=NOW)
        inner.append(str(caught.value))

    put_in_place(placement, write, verify=second_run, now=NOW)
    assert "another fill of log.xlsx is running" in inner[0]
    assert str(temporary_name(log.resolve())) in inner[0]
    assert log.read_bytes() == NEW
    assert names(log) == sorted(["log.xlsx", KEPT])


def test_an_interrupt_just_after_the_step_leaves_the_dated_copy(log: Path) -> None:
    class Interrupted(FileSystem):
        def replace(self, source: Path, target: Path) -> None:
            super().replace(source, target)
            if target.name == "log.xlsx":
                raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        put_in_place(prepare(log), write, verify=accept, now=NOW, files=Interrupted())
    assert log.read_bytes() == NEW
    assert log.with_name(KEPT).read_bytes() == OLD


@pytest.mark.parametrize("call", ["flush_folder", "names"])
def test_what_fails_after_the_step_is_a_warning(log: Path, call: str) -> None:
    files = Failing(call, OSError(errno.EIO, "Input/output error"))
    done = put_in_place(prepare(log), write, verify=accept, now=NOW, files=files)
    assert log.read_bytes() == NEW
    (warning,) = done.warnings
    assert "Input/output error" in warning


def test_an_owner_that_cannot_be_kept_is_a_warning(log: Path) -> None:
    class Humble(FileSystem):
        def copy_attributes(self, source: Path, target: Path, *, with_times: bool) -> bool:
            super().copy_attributes(source, target, with_times=with_times)
            return False

    done = put_in_place(prepare(log), write, verify=accept, now=NOW, files=Humble())
    (warning,) = done.warnings
    assert "owner or group of log.xlsx could not be kept" in warning
