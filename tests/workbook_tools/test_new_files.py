"""A new file is written whole or not at all."""

from __future__ import annotations

import os
from pathlib import Path
from typing import BinaryIO

import pytest

from workbook_tools.file_system import REAL_FILES
from workbook_tools.new_files import discard, temporary_name, write_new


def test_the_file_holds_what_was_written(tmp_path: Path) -> None:
    path = tmp_path / "new"
    write_new(path, lambda file: file.write(b"content"), 0o600, REAL_FILES)
    assert path.read_bytes() == b"content"


@pytest.mark.parametrize("error", [ValueError("no"), OSError(28, "full"), KeyboardInterrupt()])
def test_nothing_is_left_when_writing_fails(tmp_path: Path, error: BaseException) -> None:
    def write(file: BinaryIO) -> None:
        file.write(b"half of it")
        raise error

    with pytest.raises(type(error)):
        write_new(tmp_path / "new", write, 0o600, REAL_FILES)
    assert os.listdir(tmp_path) == []


def test_a_file_that_is_there_is_neither_overwritten_nor_removed(tmp_path: Path) -> None:
    path = tmp_path / "new"
    path.write_bytes(b"another's")
    with pytest.raises(FileExistsError):
        write_new(path, lambda file: file.write(b"mine"), 0o600, REAL_FILES)
    assert path.read_bytes() == b"another's"


def test_the_temporary_name_lies_beside_and_is_hidden(tmp_path: Path) -> None:
    name = temporary_name(tmp_path / "log.xlsx")
    assert name.parent == tmp_path
    assert name.name.startswith(".")
    assert name.suffix != ".xlsx"


def test_discarding_what_is_gone_is_no_error(tmp_path: Path) -> None:
    discard(tmp_path / "nothing", REAL_FILES)
