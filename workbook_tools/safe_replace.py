"""Putting a filled workbook in place of the old one in a single step, or leaving all as it was."""

from __future__ import annotations

import errno
import stat
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from workbook_tools.dated_copies import keep_copy, remove_oldest
from workbook_tools.errors import Refusal
from workbook_tools.file_system import REAL_FILES, FileSystem
from workbook_tools.new_files import Writer, discard, temporary_name, write_new
from workbook_tools.owner_files import refuse_open
from workbook_tools.placement import Placement, Snapshot, cause, no_permission, taken

_FULL = {errno.ENOSPC, errno.EDQUOT}
_FORBIDDEN = {errno.EACCES, errno.EPERM, errno.EROFS}


@dataclass(frozen=True)
class Replaced:
    """What was done: the file written, the dated copy of the old one, and sentences of warning."""

    path: Path
    kept: Path | None
    warnings: tuple[str, ...]


def put_in_place(
    placement: Placement,
    write: Writer,
    *,
    verify: Callable[[Path], object],
    now: datetime,
    files: FileSystem = REAL_FILES,
) -> Replaced:
    """Write a result beside its destination, check it, and give it its name in one step.

    Whatever fails before that step, the workbook stays as it was and nothing is left beside it.

    Args:
        placement: from `prepare`, made before the workbook was read.
        write: called once with an empty file, open and seekable.
        verify: called with the path of the finished file; raises where it is not right.
        now: the local time, for the name of the dated copy.
        files: the calls to the operating system.
    Raises:
        Refusal: disk full, no permission, held by another program, changed meanwhile; or whatever
            `write` and `verify` raise.
    """
    destination = placement.destination
    temporary = temporary_name(destination)
    kept: Path | None = None
    warnings: list[str] = []
    with _explained(placement):
        status = files.status(placement.source)
        write_new(temporary, write, stat.S_IMODE(status.st_mode) | stat.S_IWUSR, files)
        try:
            verify(temporary)
            if placement.in_place:
                warnings += _take_over(placement, temporary, files)
                kept = keep_copy(placement.source, now, files)
            _refuse_changes(placement, files)
            _swap(temporary, placement, files)
        except BaseException:
            # Where the temporary file is gone, the step was made: then the dated copy must stay.
            if files.exists(temporary):
                discard(temporary, files)
                if kept:
                    discard(kept, files)
            raise
    warnings += _settle(placement, kept, files)
    return Replaced(destination, kept, tuple(warnings))


def _take_over(placement: Placement, temporary: Path, files: FileSystem) -> list[str]:
    """Give the new file the attributes of the old one; return what could not be kept."""
    warnings = []
    name = placement.named.name
    if files.status(placement.source).st_nlink > 1:
        warnings.append(
            f"{name} has further names (hard links); under those the old workbook remains."
        )
    if not files.copy_attributes(placement.source, temporary, with_times=False):
        warnings.append(f"The owner or group of {name} could not be kept; it now belongs to you.")
    return warnings


def _refuse_changes(placement: Placement, files: FileSystem) -> None:
    name = placement.named.name
    try:
        unchanged = Snapshot.of(placement.source, files) == placement.snapshot
    except FileNotFoundError:
        unchanged = False
    if not unchanged:
        raise Refusal(
            f"{name} was changed while it was being filled; nothing was written, so run again."
        )
    if placement.in_place:
        if not placement.ignore_lock:
            refuse_open(placement.named, files)
    elif files.exists(placement.destination):
        raise taken(placement.destination)


def _swap(temporary: Path, placement: Placement, files: FileSystem) -> None:
    try:
        files.replace(temporary, placement.destination)
    except PermissionError as error:
        raise Refusal(
            f"{placement.destination.name} cannot be replaced ({cause(error)}): it is open in"
            " another program or protected; close it there, or name a new file with --output."
        ) from error


def _settle(placement: Placement, kept: Path | None, files: FileSystem) -> list[str]:
    """Make the new name last and remove old copies; what fails now is a warning, as all is done."""
    warnings = []
    folder = placement.destination.parent
    try:
        files.flush_folder(folder)
    except OSError as error:
        warnings.append(
            f"The disk did not confirm the new {placement.destination.name} ({cause(error)});"
            " look at it again after a power failure."
        )
    if kept:
        try:
            stuck = remove_oldest(placement.source, kept, files)
            warnings += [f"The old copy {name} could not be removed; remove it." for name in stuck]
        except OSError as error:
            warnings.append(f"Old copies in {folder} were not counted ({cause(error)}).")
    return warnings


@contextmanager
def _explained(placement: Placement) -> Iterator[None]:
    """Turn an error of the operating system into a sentence."""
    name = placement.named.name
    folder = placement.destination.parent
    try:
        yield
    except FileExistsError as error:
        raise Refusal(
            f"{error.filename} is in the way: another fill of {name} is running, or one was cut"
            " off; if none is running, remove that file and run again."
        ) from error
    except OSError as error:
        if error.errno in _FULL:
            raise Refusal(
                f"The disk with {folder} is full and {name} is unchanged; free some space and run"
                " again."
            ) from error
        if error.errno in _FORBIDDEN:
            raise no_permission(folder) from error
        raise Refusal(
            f"The result could not be written in {folder} ({cause(error)}); {name} is unchanged:"
            " choose another place with --output."
        ) from error
