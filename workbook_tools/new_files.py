"""A new file, written whole or not at all."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from pathlib import Path
from typing import BinaryIO

from workbook_tools.file_system import FileSystem

Writer = Callable[[BinaryIO], object]


def temporary_name(path: Path) -> Path:
    """Return the name under which a file is written before it becomes `path`.

    It is hidden, and begins and ends in ways that programs for shared folders do not pass on.
    """
    return path.with_name(f".~{path.name}.epochbook.tmp")


def write_new(path: Path, write: Writer, mode: int, files: FileSystem) -> None:
    """Create a file, fill it, and return when the disk holds it.

    Args:
        path: a name that is free.
        write: called once with the open file.
        mode: permissions, less the umask.
        files: the calls to the operating system.
    Raises:
        FileExistsError: the name is taken.
        OSError: from the operating system; nothing is left. So for whatever `write` raises.
    """
    file = files.create(path, mode)
    try:
        with file:
            write(file)
            files.flush_to_disk(file)
    except BaseException:
        discard(path, files)
        raise


def discard(path: Path, files: FileSystem) -> None:
    """Remove a file of ours after a failure, whose cause must not be hidden by another."""
    with suppress(OSError):
        files.remove(path)
