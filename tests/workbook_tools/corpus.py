"""The folder of real workbooks that the environment variable EPOCHBOOK_CORPUS names."""

from __future__ import annotations

import os
import zipfile
from collections.abc import Iterator
from pathlib import Path

import pytest

VARIABLE = "EPOCHBOOK_CORPUS"
needs_corpus = pytest.mark.skipif(
    not os.environ.get(VARIABLE), reason=f"{VARIABLE} does not name a folder of workbooks"
)


def corpus_paths() -> list[Path]:
    """Return all workbooks, also those that nobody can open."""
    return sorted(Path(os.environ[VARIABLE]).rglob("*.xls*"))


def corpus_parts(ending: str) -> Iterator[tuple[str, bytes]]:
    """Yield (file name, content) of each part whose name ends so, whatever its case."""
    for path in corpus_paths():
        if not zipfile.is_zipfile(path):
            continue
        with zipfile.ZipFile(path) as archive:
            for entry in archive.infolist():
                if entry.filename.lower().endswith(ending) and not entry.flag_bits & 1:
                    yield path.name, archive.read(entry)
