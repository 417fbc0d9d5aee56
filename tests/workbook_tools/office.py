"""What an office program shows of a workbook: LibreOffice, run without a window.

Each run has a profile folder of its own, so nobody's settings matter and nobody's program that
is open at the time is disturbed. Inputs are copied under numbers first: two workbooks of the same
name in different folders would overwrite each other's results.
"""

from __future__ import annotations

import csv
import shutil
import subprocess
import tempfile
from collections.abc import Iterator, Sequence
from pathlib import Path

import pytest

_PROGRAMS = ("soffice", "libreoffice")
# Tokens of the CSV filter as LibreOffice documents them: comma, double quote, UTF-8, from line 1,
# no column formats, English (US), quote text, cells NOT as shown (so numbers come with all 15
# digits that the program keeps, whatever their format), no formulas, keep spaces, all sheets.
_CSV = "csv:Text - txt - csv (StarCalc):44,34,76,1,,1033,true,false,false,false,false,-1"
# Seen with 7.4: from the 235th file of one run on, it loads none any more.
_AT_ONCE = 100

Rows = list[list[str]]


def find_office() -> str | None:
    """The LibreOffice program on the path, if any."""
    found = (shutil.which(program) for program in _PROGRAMS)
    return next((path for path in found if path), None)


needs_office = pytest.mark.skipif(find_office() is None, reason="LibreOffice is not on the path")


def convert_to_csv(paths: Sequence[Path], seconds: float = 600) -> dict[Path, dict[str, Rows]]:
    """Rows of every sheet as LibreOffice reads it, for many workbooks in few runs.

    Args:
        paths: the workbooks.
        seconds: how long one run may take.
    Returns:
        Per workbook that LibreOffice could load: sheet name -> rows of texts, hidden sheets
        included. Numbers have up to 15 significant digits; dates and percentages keep their form.
    Raises:
        subprocess.TimeoutExpired: it took longer.
    """
    shown: dict[Path, dict[str, Rows]] = {}
    with tempfile.TemporaryDirectory() as folder:
        inputs, outputs = Path(folder, "in"), Path(folder, "out")
        numbered = list(_numbered(paths, inputs))
        for start in range(0, len(numbered), _AT_ONCE):
            _run(_CSV, numbered[start : start + _AT_ONCE], outputs, seconds)
        for path, copy in zip(paths, numbered, strict=True):
            prefix = f"{copy.stem}-"
            for file in sorted(outputs.glob(f"{prefix}*.csv")):
                sheet = file.name[len(prefix) : -len(".csv")]
                with file.open(encoding="utf-8", newline="") as stream:
                    shown.setdefault(path, {})[sheet] = list(csv.reader(stream))
    return shown


def to_pdf(path: Path, folder: Path, seconds: float = 120) -> Path:
    """Print a workbook to `folder`; returns the PDF file.

    Raises:
        FileNotFoundError: LibreOffice could not load the workbook.
        subprocess.TimeoutExpired: it took longer than `seconds`.
    """
    _run("pdf", [path], folder, seconds)
    return (folder / f"{path.stem}.pdf").resolve(strict=True)


def _numbered(paths: Sequence[Path], folder: Path) -> Iterator[Path]:
    folder.mkdir()
    for number, path in enumerate(paths):
        yield Path(shutil.copyfile(path, folder / f"{number:05}{path.suffix}"))


def _run(target: str, paths: Sequence[Path], folder: Path, seconds: float) -> None:
    office = find_office()
    if office is None:
        raise FileNotFoundError("LibreOffice is not on the path")
    with tempfile.TemporaryDirectory() as profile:
        command = [office, f"-env:UserInstallation={Path(profile).as_uri()}", "--headless"]
        command += ["--convert-to", target, "--outdir", str(folder), *map(str, paths)]
        # The exit code says nothing: it is 0 also for files that could not be loaded.
        subprocess.run(command, check=False, capture_output=True, timeout=seconds)
