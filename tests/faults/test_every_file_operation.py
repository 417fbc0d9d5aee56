"""Fail the first file operation, then the second, and so on until a run passes.

After each the workbook is the whole old one with nothing left beside it, or the whole new one with
the whole old one in a dated copy. (A habit of SQLite's tests, from memory of its testing page.)
"""

from __future__ import annotations

import errno
import os
from collections.abc import Callable, Iterator
from datetime import datetime
from pathlib import Path
from typing import BinaryIO

import pytest

from workbook_tools.errors import Refusal
from workbook_tools.file_system import FileSystem
from workbook_tools.placement import prepare
from workbook_tools.safe_replace import Replaced, put_in_place

OLD, NEW = b"old" * 50_000, b"new!" * 60_000
NOW = datetime(2026, 12, 1, 14, 3, 22)
STALE = [f"log (kept 2026-11-{day:02} 09.00.00).xlsx" for day in range(1, 7)]
OPERATIONS_AT_LEAST = 20  # fewer would mean that calls go round the seam


class Fault:
    """Counts operations; raises at the n-th, and where it lasts at all that follow."""

    def __init__(self, at: int, number: int, lasting: bool) -> None:
        self.at, self.number, self.lasting = at, number, lasting
        self.count = 0

    def pass_by(self) -> None:
        self.count += 1
        if self.count == self.at or (self.lasting and self.count > self.at):
            raise OSError(self.number, os.strerror(self.number))

    @property
    def struck(self) -> bool:
        return self.count >= self.at


class FaultyFile:
    """A file whose reads and writes are operations too; a failed write leaves half its bytes."""

    def __init__(self, file: BinaryIO, fault: Fault) -> None:
        self.file, self.fault = file, fault

    def __enter__(self) -> FaultyFile:
        return self

    def __exit__(self, *_: object) -> None:
        self.file.close()

    def write(self, data: bytes) -> int:
        try:
            self.fault.pass_by()
        except OSError:
            self.file.write(data[: len(data) // 2])
            raise
        return self.file.write(data)

    def read(self, size: int = -1) -> bytes:
        self.fault.pass_by()
        return self.file.read(size)

    def seek(self, position: int) -> int:
        self.fault.pass_by()
        return self.file.seek(position)

    def __getattr__(self, name: str) -> object:
        return getattr(self.file, name)


def faulty(fault: Fault) -> FileSystem:
    """A file system all of whose public calls pass by the fault first."""

    def counted(call: Callable[..., object]) -> Callable[..., object]:
        def run(self: FileSystem, *args: object, **options: object) -> object:
            fault.pass_by()
            result = call(self, *args, **options)
            return FaultyFile(result, fault) if hasattr(result, "fileno") else result  # type: ignore[arg-type]

        return run

    calls = {name: counted(call) for name, call in vars(FileSystem).items() if name[0] != "_"}
    made = type("FaultyFiles", (FileSystem,), calls)
    instance = made()
    assert isinstance(instance, FileSystem)
    return instance


def write(file: BinaryIO) -> None:
    """Write as the archive does: a header, pieces, and the header again."""
    file.write(b"----")
    for start in range(4, len(NEW), 65536):
        file.write(NEW[start : start + 65536])
    file.seek(0)
    file.write(NEW[:4])


def verify(path: Path) -> None:
    if path.read_bytes() != NEW:
        raise Refusal("The result is not as planned; run again.")


def run(folder: Path, fault: Fault, output: str | None) -> Replaced:
    files = faulty(fault)
    placement = prepare(
        folder / "log.xlsx", output=folder / output if output else None, files=files
    )
    return put_in_place(placement, write, verify=verify, now=NOW, files=files)


def outcomes(
    tmp_path: Path, number: int, *, lasting: bool, output: str | None
) -> Iterator[tuple[Path, Replaced | Refusal]]:
    """Yield the folder and the result of each run with a fault, until one passes without."""
    for at in range(1, 1000):
        folder = tmp_path / str(at)
        folder.mkdir()
        (folder / "log.xlsx").write_bytes(OLD)
        for name in STALE:
            (folder / name).write_bytes(name.encode())
        fault = Fault(at, number, lasting)
        result: Replaced | Refusal
        try:
            result = run(folder, fault, output)
        except Refusal as refusal:
            result = refusal
        yield folder, result
        if not fault.struck:
            assert isinstance(result, Replaced)
            assert result.warnings == ()
            assert at > OPERATIONS_AT_LEAST
            return
    raise AssertionError("no run passed")


FAULTS = pytest.mark.parametrize("number", [errno.ENOSPC, errno.EACCES, errno.EIO, errno.ENOENT])
OUTPUTS = pytest.mark.parametrize("output", [None, "filled.xlsx"])


@FAULTS
@OUTPUTS
def test_one_fault_leaves_the_old_or_the_new_workbook_whole(
    tmp_path: Path, number: int, output: str | None
) -> None:
    for folder, result in outcomes(tmp_path, number, lasting=False, output=output):
        log = folder / "log.xlsx"
        found = set(os.listdir(folder)) - {"log.xlsx", *STALE}
        if isinstance(result, Refusal):
            assert log.read_bytes() == OLD
            assert found == set()
            assert set(STALE) < set(os.listdir(folder))
        elif output:
            assert log.read_bytes() == OLD
            assert found == {output}
            assert (folder / output).read_bytes() == NEW
        else:
            assert log.read_bytes() == NEW
            assert result.kept is not None
            assert found == {result.kept.name}
            assert result.kept.read_bytes() == OLD


@FAULTS
@OUTPUTS
def test_a_disk_that_is_gone_for_good_leaves_a_whole_workbook(
    tmp_path: Path, number: int, output: str | None
) -> None:
    """Then nothing can be cleaned up either; but no name that counts holds half a file."""
    for folder, _ in outcomes(tmp_path, number, lasting=True, output=output):
        for path in folder.iterdir():
            if path.name.startswith(".~"):
                continue
            assert path.read_bytes() in (OLD, NEW, path.name.encode()), path.name
        assert (folder / "log.xlsx").exists()
        if output:
            assert (folder / "log.xlsx").read_bytes() == OLD
