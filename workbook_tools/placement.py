"""Where a result will go: settled, and refused where it could not end well, before any work."""

from __future__ import annotations

import stat
from dataclasses import dataclass
from pathlib import Path
from typing import Self

from workbook_tools.errors import Refusal, UsageError
from workbook_tools.file_system import REAL_FILES, FileSystem
from workbook_tools.owner_files import refuse_open


@dataclass(frozen=True)
class Snapshot:
    """What tells one state of a file from another: last change, size and identity."""

    modified_ns: int
    size: int
    inode: int

    @classmethod
    def of(cls, path: Path, files: FileSystem) -> Self:
        """Return the state of a file now; raises `OSError` where there is none."""
        status = files.status(path)
        return cls(status.st_mtime_ns, status.st_size, status.st_ino)


@dataclass(frozen=True)
class Placement:
    """Where a result will go, settled before anything is read.

    Attributes:
        named: the workbook as the user named it.
        source: the file that is read, with no link left in its path.
        destination: the file that is written; the same as `source` unless an output was named.
        snapshot: state of the source before it was read.
        ignore_lock: go on though somebody has the workbook open.
    """

    named: Path
    source: Path
    destination: Path
    snapshot: Snapshot
    ignore_lock: bool

    @property
    def in_place(self) -> bool:
        """Whether the workbook itself is replaced."""
        return self.source == self.destination


def prepare(
    path: Path,
    *,
    output: Path | None = None,
    ignore_lock: bool = False,
    files: FileSystem = REAL_FILES,
) -> Placement:
    """Settle where a result will go, and refuse early what could not end well.

    Args:
        path: the workbook.
        output: a new file for the result; None replaces the workbook itself.
        ignore_lock: go on though there is an owner file.
        files: the calls to the operating system.
    Raises:
        Refusal: no such file, a folder, open in another program, read-only, a folder without
            permission; or the output exists already, or its folder does not.
        UsageError: the output's name does not end as that of the workbook does.
    """
    try:
        source = files.resolved(path)
        if not stat.S_ISREG(files.status(source).st_mode):
            raise Refusal(f"{path} is not a file; name a workbook.")
        snapshot = Snapshot.of(source, files)
        if not ignore_lock:
            refuse_open(path, files)
        if output is None:
            destination = source
            if not files.is_writable(source):
                raise Refusal(
                    f"{path.name} is read-only; make it writable, or name a new file with --output."
                )
        else:
            if output.suffix.lower() != path.suffix.lower():
                raise UsageError(
                    f"--output {output}: the result is a workbook of the same kind as {path.name},"
                    f" so give it a name that ends in {path.suffix or 'nothing'} too"
                )
            destination = _free_output(output, source, files)
        if not files.is_writable(destination.parent):
            raise no_permission(destination.parent)
    except FileNotFoundError as error:
        raise Refusal(f"There is no file {path}; check its name and folder.") from error
    except OSError as error:
        raise Refusal(
            f"{path} cannot be reached ({cause(error)}); check its name and your permissions."
        ) from error
    return Placement(path, source, destination, snapshot, ignore_lock)


def _free_output(output: Path, source: Path, files: FileSystem) -> Path:
    if files.exists(output):
        try:
            is_source = files.resolved(output) == source
        except OSError:
            is_source = False
        if is_source:
            raise Refusal(
                f"--output names the workbook itself ({output}); choose another name,"
                " or leave --output out to replace the workbook."
            )
        raise taken(output)
    try:
        return files.resolved(output.parent) / output.name
    except OSError as error:
        raise Refusal(
            f"There is no folder {output.parent} for --output; make it or choose another."
        ) from error


def no_permission(folder: Path) -> Refusal:
    """Return the refusal to write in a folder."""
    return Refusal(
        f"No permission to write in {folder}; ask for it, or choose another place with --output."
    )


def taken(output: Path) -> Refusal:
    """Return the refusal to overwrite a file that `--output` names."""
    return Refusal(f"{output} already exists; choose another name or delete it.")


def cause(error: OSError) -> str:
    """Return the words of the operating system for an error."""
    return error.strerror or type(error).__name__
