"""Columns appended at the right edge: in a growing table, beside one that cannot, without one."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.made_workbooks import REDSHIFTS, make
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.small_logs import (
    AGES,
    BARE,
    NOW,
    Dress,
    Grid,
    cells,
    dated_copies,
    new_cells,
    write_log,
)
from workbook_tools import FillResult, fill

ADD = ["Age [Gyr]", "D_C / Mpc"]


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def with_table(reach: tuple[int, int, int, int], *columns: str, **options: object) -> Dress:
    """Lay a table over the first sheet."""

    def dress(_book: Workbook, sheet: Worksheet) -> None:
        listed = [{"header": column} for column in columns]
        sheet.add_table(*reach, {"columns": listed, "name": "Objects", **options})

    return dress


def added(path: Path, add: list[str] = ADD) -> tuple[FillResult, dict[str, object]]:
    """Add columns in place; nothing may break that was whole."""
    before = cells(path)
    result = fill(path, add=add, now=NOW)
    assert not new_problems(dated_copies(path)[-1], path)
    return result, new_cells(before, path)


TABLE = with_table((0, 0, 3, 1), "Object", "z")


def test_a_table_grows(path: Path) -> None:
    result, new = added(write_log(path, BARE, TABLE))
    assert [new["C1"], new["D1"]] == ADD
    assert [new[f"C{row}"] for row in (2, 3, 4)] == pytest.approx(list(AGES.values()), rel=1e-5)
    table = openpyxl.load_workbook(path)["Log"].tables["Objects"]
    assert (table.ref, table.autoFilter.ref) == ("A1:D4", "A1:D4")
    assert [column.name for column in table.tableColumns] == ["Object", "z", *ADD]
    assert table.tableColumns[-1].id == 4
    assert result.plans[0].notes == []


def test_a_table_without_a_filter_grows_too(path: Path) -> None:
    added(write_log(path, BARE, with_table((0, 0, 3, 1), "Object", "z", autofilter=False)))
    table = openpyxl.load_workbook(path)["Log"].tables["Objects"]
    assert (table.ref, table.autoFilter) == ("A1:D4", None)


def test_a_row_of_totals_gets_nothing(tmp_path: Path) -> None:
    path = make("table with totals.xlsx", tmp_path)
    before = cells(path)
    result = fill(path, add=["Age [Gyr]"], sheet="Log", now=NOW)
    assert not new_problems(dated_copies(path)[0], path)
    new = new_cells(before, path)
    assert new.keys() == {f"E{row}" for row in range(3, 4 + len(REDSHIFTS))}
    table = openpyxl.load_workbook(path)["Log"].tables["Log"]
    assert (table.ref, table.autoFilter.ref) == ("A3:E15", "A3:E14")
    assert result.left == []


def test_blank_rows_of_a_table_stay_blank(path: Path) -> None:
    rows: Grid = [*BARE[:3], ["fourth"], *BARE[3:]]
    _, new = added(write_log(path, rows, with_table((0, 0, 4, 1), "Object", "z")), ["Age [Gyr]"])
    assert new.keys() == {"C1", "C2", "C3", "C5"}


def test_beside_a_table_that_cannot_grow_the_columns_stand_outside(tmp_path: Path) -> None:
    path = make("tables side by side.xlsx", tmp_path)
    before = cells(path)
    result = fill(path, add=ADD, now=NOW)
    assert not new_problems(dated_copies(path)[0], path)
    new = new_cells(before, path)
    assert (new["G3"], new["H3"]) == ("Age [Gyr]", "D_C / Mpc")
    tables = openpyxl.load_workbook(path)["Log"].tables.values()
    assert [table.ref for table in tables] == ["A3:D14", "E3:F14"]
    assert result.plans[0].notes[0] == (
        "table 'Table1' cannot grow (something stands beside it); the new columns stand outside it"
    )


def test_a_remark_beside_a_table_is_not_swallowed(path: Path) -> None:
    rows: Grid = [BARE[0], [*BARE[1], "remark"], *BARE[2:]]
    _, new = added(write_log(path, rows, TABLE), ["Age [Gyr]"])
    assert new["D1"] == "Age [Gyr]"
    assert openpyxl.load_workbook(path)["Log"].tables["Objects"].ref == "A1:B4"


def test_without_a_table_the_next_column_is_taken(path: Path) -> None:
    rows: Grid = [BARE[0], *([*row, None, "note"] for row in BARE[1:])]
    _, new = added(write_log(path, rows), ["a []"])
    assert new == {"E1": "a []", "E2": 0.5, "E3": pytest.approx(1 / 3), "E4": 0.25}


def test_a_filter_of_the_sheet_stays_as_it_is(path: Path) -> None:
    write_log(path, BARE, lambda book, sheet: sheet.autofilter(0, 0, 3, 1))
    added(path)
    assert openpyxl.load_workbook(path)["Log"].auto_filter.ref == "A1:B4"


def test_new_columns_look_like_their_neighbours(path: Path) -> None:
    def dress(book: Workbook, sheet: Worksheet) -> None:
        bold = book.add_format({"bold": True, "text_wrap": True, "bg_color": "#DDEEFF"})
        red = book.add_format({"font_color": "#FF0000", "num_format": "0.0000"})
        sheet.write(0, 1, "z", bold)
        sheet.write(2, 1, 2.0, red)
        sheet.set_column("B:F", 7.5)

    added(write_log(path, BARE, dress))
    sheet = openpyxl.load_workbook(path)["Log"]
    assert sheet["C1"].font.b
    assert sheet["C1"].alignment.wrap_text
    assert sheet["C1"].fill.fgColor.rgb == sheet["B1"].fill.fgColor.rgb
    assert sheet["C3"].font.color.rgb == "FFFF0000"
    assert sheet["C2"].font.color != sheet["C3"].font.color
    assert {sheet[f"C{row}"].number_format for row in (2, 3, 4)} == {"0.00"}
    widths = {name: dimension.width for name, dimension in sheet.column_dimensions.items()}
    assert widths["C"] > widths["B"] == pytest.approx(widths["E"])


def test_an_addition_needs_no_source_of_its_own(path: Path) -> None:
    """The same command twice: nothing is added again, and nothing is written."""
    added(write_log(path, BARE), ["Age [Gyr]"])
    before = path.read_bytes()
    result = fill(path, add=["Age [Gyr]"], source="z")
    assert (result.written, path.read_bytes()) == (False, before)
    assert result.plans[0].notes == [
        "'Age [Gyr]' is there already (column C), so no column is added"
    ]


def test_existing_columns_are_filled_together_with_new_ones(path: Path) -> None:
    _, new = added(write_log(path), ["a []"])
    assert new.keys() == {"C2", "C3", "C4", "D1", "D2", "D3", "D4"}
