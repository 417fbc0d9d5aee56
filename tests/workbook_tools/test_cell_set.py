"""A set of cells against Python's own set of pairs."""

from __future__ import annotations

import random

from workbook_tools.cell_address import MAX_COLUMN, MAX_ROW, Range, parse_range
from workbook_tools.cell_set import CellSet


def cells_of(area: Range) -> set[tuple[int, int]]:
    return {
        (row, column)
        for row in range(area.first_row, area.last_row + 1)
        for column in range(area.first_column, area.last_column + 1)
    }


def test_random_areas_meet_when_they_share_a_cell() -> None:
    chance = random.Random(8)

    def area() -> Range:
        rows = sorted(chance.choices(range(1, 30), k=2))
        columns = sorted(chance.choices(range(1, 7), k=2))
        return Range(rows[0], columns[0], rows[1], columns[1])

    for _ in range(200):
        ours, plain = CellSet(), set()
        for _ in range(chance.randrange(6)):
            added = area()
            ours.add("Log", added)
            plain |= cells_of(added)
        for _ in range(20):
            asked = area()
            assert ours.meets("Log", asked) is bool(plain & cells_of(asked))
        listed = [cells_of(run) for run in ours.areas("Log")]
        assert set().union(*listed) == plain
        assert sum(map(len, listed)) == len(plain)


def test_touching_runs_become_one() -> None:
    cells = CellSet()
    for text in ("B5", "B3", "B4", "C4", "B7"):
        cells.add("Log", parse_range(text))
    assert [run.a1 for run in cells.areas("Log")] == ["B3:B5", "B7", "C4"]


def test_sheets_are_apart() -> None:
    cells = CellSet()
    cells.add("Log", parse_range("A1"))
    assert cells.meets("Log", parse_range("A1"))
    assert not cells.meets("Plots", parse_range("A:XFD"))
    assert cells.areas("Plots") == []


def test_whole_rows_and_columns_are_no_burden() -> None:
    cells = CellSet()
    cells.add("Log", Range(1, 1, MAX_ROW, MAX_COLUMN))
    assert cells.meets("Log", parse_range("XFD1048576"))
    assert len(cells.areas("Log")) == MAX_COLUMN
