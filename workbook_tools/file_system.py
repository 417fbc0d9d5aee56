"""The calls to the operating system that replacing a file needs; a seam where tests fail them."""

from __future__ import annotations

import errno
import os
import shutil
import stat
import sys
from pathlib import Path
from typing import BinaryIO

_NO_FOLDER_SYNC = {errno.EINVAL, errno.ENOTSUP}


class FileSystem:
    """The real calls; each raises `OSError` as the operating system does."""

    def resolved(self, path: Path) -> Path:
        """Return the file that a path leads to, through all symbolic links; it must exist."""
        return Path(os.path.realpath(path, strict=True))

    def status(self, path: Path) -> os.stat_result:
        """Return size, times, identity and mode of a file."""
        return os.stat(path)

    def exists(self, path: Path) -> bool:
        """Tell whether a name is taken, be it by a link that leads nowhere."""
        return os.path.lexists(path)

    def is_writable(self, path: Path) -> bool:
        """Tell whether a file or folder may be written; a read-only file may not, even by root."""
        if not os.access(path, os.W_OK):
            return False
        mode = os.stat(path).st_mode
        # Windows marks folders of a special look as read-only, which forbids nothing.
        return stat.S_ISDIR(mode) or bool(mode & 0o222)

    def names(self, folder: Path) -> list[str]:
        """Return the names in a folder."""
        return os.listdir(folder)

    def open(self, path: Path) -> BinaryIO:
        """Open a file for reading."""
        return path.open("rb")

    def create(self, path: Path, mode: int) -> BinaryIO:
        """Create a file with these permissions (less the umask) and open it for writing."""
        flags = os.O_RDWR | os.O_CREAT | os.O_EXCL | getattr(os, "O_BINARY", 0)
        return os.fdopen(os.open(path, flags, mode), "w+b")

    def flush_to_disk(self, file: BinaryIO) -> None:
        """Return only when the disk holds what was written to a file."""
        file.flush()
        os.fsync(file.fileno())

    def copy_attributes(self, source: Path, target: Path, *, with_times: bool) -> bool:
        """Give a file the mode, extended attributes, flags and owner of another.

        Args:
            source: the file to take them from.
            target: the file to give them to.
            with_times: the times of last change too; otherwise the target's become now.
        Returns:
            False where the owner or the group could not be kept.
        """
        shutil.copystat(source, target)
        if not with_times:
            os.utime(target)
        kept = True
        if sys.platform != "win32":
            old, new = self.status(source), self.status(target)
            # Apart, as a member of a group may give a file to the group but to no other person.
            for person, group in ((-1, old.st_gid), (old.st_uid, -1)):
                if person in (-1, new.st_uid) and group in (-1, new.st_gid):
                    continue
                try:
                    os.chown(target, person, group)
                except PermissionError:
                    kept = False
        return kept

    def replace(self, source: Path, target: Path) -> None:
        """Give a file another name in one step; what had that name is gone."""
        os.replace(source, target)

    def remove(self, path: Path) -> None:
        """Remove a file."""
        os.remove(path)

    def flush_folder(self, folder: Path) -> None:
        """Return only when the disk holds the names in a folder, where that can be asked for."""
        if sys.platform == "win32":
            return
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        except OSError as error:
            if error.errno not in _NO_FOLDER_SYNC:  # some network folders know no such call
                raise
        finally:
            os.close(descriptor)


REAL_FILES = FileSystem()
