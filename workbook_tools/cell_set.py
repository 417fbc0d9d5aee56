"""A set of cells over several sheets, kept as runs of rows in each column."""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections import defaultdict
from typing import NamedTuple

from workbook_tools.cell_address import Range


class _Runs(NamedTuple):
    """First and last rows of runs that neither touch nor overlap, ascending."""

    firsts: list[int]
    lasts: list[int]


class CellSet:
    """Cells that can be added and asked for in any order."""

    def __init__(self) -> None:
        self._sheets: dict[str, dict[int, _Runs]] = defaultdict(dict)

    def add(self, sheet: str, area: Range) -> None:
        """Put all cells of an area in."""
        columns = self._sheets[sheet]
        for column in range(area.first_column, area.last_column + 1):
            runs = columns.setdefault(column, _Runs([], []))
            begin = bisect_left(runs.lasts, area.first_row - 1)
            end = bisect_right(runs.firsts, area.last_row + 1)
            first, last = area.first_row, area.last_row
            if begin < end:
                first, last = min(first, runs.firsts[begin]), max(last, runs.lasts[end - 1])
            runs.firsts[begin:end] = [first]
            runs.lasts[begin:end] = [last]

    def meets(self, sheet: str, area: Range) -> bool:
        """Tell whether a cell of the area is in."""
        columns = self._sheets.get(sheet, {})
        wanted = range(area.first_column, area.last_column + 1)
        for column in wanted if len(wanted) < len(columns) else columns:
            runs = columns.get(column)
            if runs is None or column not in wanted:
                continue
            place = bisect_left(runs.lasts, area.first_row)
            if place < len(runs.firsts) and runs.firsts[place] <= area.last_row:
                return True
        return False

    def areas(self, sheet: str) -> list[Range]:
        """Return the cells of a sheet as runs of one column each, left to right, then down."""
        return [
            Range(first, column, last, column)
            for column, runs in sorted(self._sheets.get(sheet, {}).items())
            for first, last in zip(runs.firsts, runs.lasts, strict=True)
        ]
