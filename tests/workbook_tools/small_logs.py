"""Small workbooks for tests of the whole fill, made from rows of values and read back by openpyxl.

The bytes are the same wherever and whenever they are made.
"""

from __future__ import annotations

import datetime
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import NamedTuple

import xlsxwriter
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.made_xml import quiet
from tests.workbook_tools.read_back import cell_values
from tests.workbook_tools.repack import part, repack
from tests.workbook_tools.rules.sheet_view import letters

SHEET = "xl/worksheets/sheet1.xml"
WORKBOOK = "xl/workbook.xml"
NOW = datetime.datetime(2026, 12, 1, 14, 3, 22)

# What `epochconv.convert` gives for redshift 1, 2 and 3 under the default parameters; written with
# few digits, since it is tested elsewhere. Ages in Gyr.
AGES = {1.0: 5.8423, 2.0: 3.27014, 3.0: 2.13908}


class Formula(NamedTuple):
    """A formula with its stored result."""

    text: str
    result: float | str


class Dressed(NamedTuple):
    """A value in a format of XlsxWriter: `num_format`, `font_strikeout`, …"""

    value: float | str | None
    format: Mapping[str, object]


class Runs(NamedTuple):
    """A rich text: runs, each with its format, {} for none."""

    runs: Sequence[tuple[str, Mapping[str, object]]]


Value = float | str | bool | Formula | Dressed | Runs | datetime.date | None
Grid = Sequence[Sequence[Value]]
Dress = Callable[[Workbook, Worksheet], None]

LOG: Grid = [["Object", "z", "Age [Gyr]"], ["first", 1.0], ["second", 2.0], ["third", 3.0]]
BARE: Grid = [row[:2] for row in LOG]


def write_log(
    path: Path,
    rows: Grid = LOG,
    dress: Dress | None = None,
    more: Mapping[str, Grid] | None = None,
    options: Mapping[str, object] | None = None,
) -> Path:
    """Write a workbook whose first sheet is named Log.

    Args:
        rows: of the first sheet, from row 1 on.
        dress: what else XlsxWriter shall do to the workbook and its first sheet, at the end.
        more: rows of further sheets, by name.
        options: for XlsxWriter.
    """
    with xlsxwriter.Workbook(path, {"in_memory": True, **(options or {})}) as book:
        book.set_properties({"created": datetime.datetime(2026, 1, 1)})
        day = book.add_format({"num_format": "yyyy-mm-dd"})
        sheets = [
            _write(book, book.add_worksheet(name), grid, day)
            for name, grid in {"Log": rows, **(more or {})}.items()
        ]
        if dress is not None:
            dress(book, sheets[0])
    parts = {WORKBOOK: part(path, WORKBOOK)}
    return repack(path, path, quiet(parts))


def _write(book: Workbook, sheet: Worksheet, rows: Grid, day: object) -> Worksheet:
    for row, values in enumerate(rows):
        for column, value in enumerate(values):
            if isinstance(value, Formula):
                sheet.write_formula(row, column, value.text, None, value.result)
            elif isinstance(value, Dressed):
                look = book.add_format(dict(value.format))
                write = sheet.write_string if isinstance(value.value, str) else sheet.write
                write(row, column, value.value, look)
            elif isinstance(value, Runs):
                looks = [(book.add_format(dict(look)), text) for text, look in value.runs]
                sheet.write_rich_string(row, column, *(part for pair in looks for part in pair))
            elif isinstance(value, str):
                sheet.write_string(row, column, value)
            elif isinstance(value, datetime.date):
                sheet.write_datetime(row, column, value, day)
            elif value is not None:
                sheet.write(row, column, value)
    return sheet


def cells(path: Path, sheet: str = "Log", *, results: bool = False) -> dict[str, object]:
    """What stands in a sheet by address, as openpyxl reads it."""
    found = cell_values(path, results=results)[sheet]
    return {f"{letters(column)}{row}": value for (row, column), value in found.items()}


def new_cells(before: dict[str, object], path: Path, sheet: str = "Log") -> dict[str, object]:
    """The cells of a sheet that a fill added; all older ones must be as they were."""
    after = cells(path, sheet)
    assert {address: after.get(address) for address in before} == before
    return {address: value for address, value in after.items() if address not in before}


def with_parts(path: Path, **changed: tuple[str, str]) -> Path:
    """Change one text of parts: `sheet` or `workbook` = (old, new)."""
    names = {"sheet": SHEET, "workbook": WORKBOOK}
    changes: dict[str, bytes | None] = {}
    for key, (old, new) in changed.items():
        text = part(path, names[key]).decode()
        assert old in text, text
        changes[names[key]] = text.replace(old, new).encode()
    return repack(path, path, changes)


def dated_copies(path: Path) -> list[Path]:
    """The copies of a workbook that were kept, the oldest first."""
    return sorted(path.parent.glob(f"{path.stem} (kept *){path.suffix}"))
