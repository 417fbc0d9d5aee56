"""Dated copies: what a workbook was before it was replaced, the last five, kept beside it."""

from __future__ import annotations

import re
import shutil
import stat
from collections.abc import Iterator
from datetime import datetime
from itertools import count
from pathlib import Path

from workbook_tools.file_system import FileSystem
from workbook_tools.new_files import discard, temporary_name, write_new

KEPT = 5
_KEPT_AT = r" \(kept (\d{4}-\d\d-\d\d \d\d\.\d\d\.\d\d)(?:, (\d+))?\)"


def keep_copy(original: Path, now: datetime, files: FileSystem) -> Path:
    """Copy a file to `NAME (kept 2026-12-01 14.03.22).xlsx` beside it, whole or not at all.

    Args:
        original: the file itself, no link to it.
        now: the local time for the name; where that is taken, a number follows it.
        files: the calls to the operating system.
    Returns:
        The path of the copy, which has the times and attributes of the original.
    Raises:
        OSError: the copy could not be made; nothing of it is left.
    """
    copy = next(name for name in _names(original, now) if not files.exists(name))
    temporary = temporary_name(copy)
    mode = stat.S_IMODE(files.status(original).st_mode)
    with files.open(original) as old:
        write_new(temporary, lambda new: shutil.copyfileobj(old, new), mode, files)
    try:
        files.copy_attributes(original, temporary, with_times=True)
        files.replace(temporary, copy)
    except BaseException:
        discard(temporary, files)
        raise
    return copy


def remove_oldest(original: Path, newest: Path, files: FileSystem) -> list[str]:
    """Remove all dated copies of a file but the last five; no other file is ever removed.

    Args:
        original: the file whose copies are meant.
        newest: the copy just made, which stays whatever the clock says.
        files: the calls to the operating system.
    Returns:
        The names of the copies that should have been removed and could not be.
    Raises:
        OSError: the folder cannot be read.
    """
    form = re.compile(re.escape(original.stem) + _KEPT_AT + re.escape(original.suffix))
    dated: list[tuple[str, int, str]] = []
    for name in files.names(original.parent):
        match = form.fullmatch(name)
        if match and name != newest.name:
            dated.append((match[1], int(match[2] or 1), name))
    stuck = []
    for _, _, name in sorted(dated)[: -(KEPT - 1)]:
        try:
            files.remove(original.with_name(name))
        except OSError:
            stuck.append(name)
    return stuck


def _names(original: Path, now: datetime) -> Iterator[Path]:
    for number in count(1):
        again = f", {number}" if number > 1 else ""
        stamp = f" (kept {now:%Y-%m-%d %H.%M.%S}{again})"
        yield original.with_name(f"{original.stem}{stamp}{original.suffix}")
