"""A workbook as openpyxl reads it."""

from __future__ import annotations

import io
import warnings
import zipfile
from pathlib import Path

import openpyxl
from openpyxl.worksheet.worksheet import Worksheet

from tests.workbook_tools.strict_names import to_transitional

Values = dict[tuple[int, int], object]


def cell_values(path: Path, *, results: bool = False) -> dict[str, Values]:
    """What stands in the cells of every worksheet: sheet -> (row, column) -> value.

    Args:
        path: the workbook.
        results: formulas as their stored results, else as their text.
    Raises:
        Exception: whatever openpyxl raises for a file that it cannot load.
    """
    with warnings.catch_warnings():
        # openpyxl warns of what it does not model; nothing is saved with it here.
        warnings.simplefilter("ignore")
        book = openpyxl.load_workbook(_loadable(path), data_only=results)
    return {sheet.title: _values(sheet) for sheet in book.worksheets}


def _loadable(path: Path) -> io.BytesIO:
    """The workbook, a strict one under transitional names: openpyxl 3.1 finds no sheet in it."""
    copy = io.BytesIO()
    with zipfile.ZipFile(path) as old, zipfile.ZipFile(copy, "w") as new:
        for name in old.namelist():
            data = old.read(name)
            xml = name.endswith((".xml", ".rels"))
            new.writestr(name, to_transitional(data) if xml else data)
    return copy


def _values(sheet: Worksheet) -> Values:
    found: Values = {}
    for row in sheet.iter_rows():
        for cell in row:
            if cell.value is not None:
                found[cell.row, cell.column] = _plain(cell.value)
    return found


def _plain(value: object) -> object:
    """A value that compares by content: openpyxl's formula objects compare by identity."""
    return sorted(vars(value).items()) if hasattr(value, "__dict__") else value
