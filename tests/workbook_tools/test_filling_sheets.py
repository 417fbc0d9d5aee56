"""Which sheets a fill touches, and who reads what it filled."""

from __future__ import annotations

from pathlib import Path

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.repack import part
from tests.workbook_tools.small_logs import (
    AGES,
    LOG,
    WORKBOOK,
    Formula,
    Grid,
    cells,
    new_cells,
    write_log,
)
from tests.workbook_tools.untouched import compare
from workbook_tools import Refusal, UsageError, fill

SPRING: Grid = [["Redshift", "a []"], [1.0], [3.0]]
READERS: Grid = [
    [Formula("=AVERAGE(Log!C2:C9)", 0), Formula("=AVERAGE(Log!B2:B9)", 2)],
    [Formula("=A1*2", 0), Formula("=COUNT(Spring!A:A)", 2)],
]


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def states(book: Workbook, _sheet: Worksheet) -> None:
    book.get_worksheet_by_name("Hidden").hide()
    book.get_worksheet_by_name("Deep").very_hidden()


MANY = {"Spring": SPRING, "Hidden": SPRING, "Deep": SPRING, "Notes": [["remarks"]]}


def test_every_visible_sheet_with_something_to_fill_is_filled(path: Path) -> None:
    write_log(path, dress=states, more=MANY)
    before = {name: cells(path, name) for name in MANY}
    result = fill(path)
    assert [plan.reading.sheet.name for plan in result.plans] == ["Log", "Spring"]
    assert new_cells(before["Spring"], path, "Spring") == {"B2": 0.5, "B3": 0.25}
    for name in ("Hidden", "Deep", "Notes"):
        assert cells(path, name) == before[name]


@pytest.mark.parametrize("name", ["Spring", "hidden", "Deep"])
def test_a_named_sheet_alone_is_filled(path: Path, name: str) -> None:
    write_log(path, dress=states, more=MANY)
    original = path.read_bytes()
    result = fill(path, sheet=name)
    assert [plan.reading.sheet.name for plan in result.plans] == [name.capitalize()]
    assert result.kept is not None
    assert result.kept.read_bytes() == original
    changed = compare(result.kept, path)
    assert changed.faults == []
    assert len([one for one in changed.changed if "worksheets" in one]) == 1


def test_an_addition_that_fits_several_sheets_needs_a_name(path: Path) -> None:
    write_log(path, more={"Spring": SPRING})
    before = path.read_bytes()
    with pytest.raises(UsageError) as caught:
        fill(path, add=["D_C [Mpc]"])
    assert str(caught.value) == "--add fits several sheets ('Log', 'Spring'); name one with --sheet"
    assert path.read_bytes() == before
    result = fill(path, add=["D_C [Mpc]"], sheet="Spring")
    assert cells(path, "Spring")["C1"] == "D_C [Mpc]"
    assert result.filled == 4


def test_an_addition_that_fits_one_sheet_needs_none(path: Path) -> None:
    write_log(path, more={"Notes": [["remarks"]]})
    assert fill(path, add=["a []"]).filled == 6


def test_a_source_is_looked_for_on_every_sheet(path: Path) -> None:
    write_log(path, more={"Spring": SPRING})
    result = fill(path, source="redshift")
    assert [plan.reading.sheet.name for plan in result.plans] == ["Spring"]
    assert [plan.reading.sheet.name for plan in fill(path, source="z").plans] == ["Log"]


def test_one_sheet_that_cannot_be_filled_stops_them_all(path: Path) -> None:
    write_log(path, more={"Spring": [["z", "a []"], [1.0, 0.7], [2.0]]})
    before = path.read_bytes()
    with pytest.raises(Refusal, match=r"column 'a \[\]' does not agree with planck 2018: B2"):
        fill(path)
    assert path.read_bytes() == before


def test_a_protected_sheet_needs_consent(path: Path) -> None:
    write_log(path, dress=lambda book, sheet: sheet.protect("not a secret"))
    before = path.read_bytes()
    with pytest.raises(Refusal, match="sheet 'Log' is protected; ask its owner, or fill it all"):
        fill(path)
    assert path.read_bytes() == before
    protection = b"<sheetProtection"
    result = fill(path, allow_protected=True)
    assert result.kept is not None
    old, new = (part(one, "xl/worksheets/sheet1.xml") for one in (result.kept, path))
    assert new[new.index(protection) :] == old[old.index(protection) :]


def test_protection_of_a_sheet_that_is_not_filled_does_not_matter(path: Path) -> None:
    def dress(book: Workbook, _sheet: Worksheet) -> None:
        book.get_worksheet_by_name("Notes").protect()

    assert fill(write_log(path, dress=dress, more={"Notes": [["remarks"]]})).filled == 3


def recalculates(path: Path) -> bool:
    return b'fullCalcOnLoad="1"' in part(path, WORKBOOK)


def test_formulas_that_read_filled_cells_are_named_and_recalculated(path: Path) -> None:
    write_log(path, more={"Summary": READERS})
    assert not recalculates(path)
    result = fill(path)
    assert result.dependents["Log"].cells == {"Summary": ("A1:A2",)}
    assert recalculates(path)
    assert cells(path, "Summary") == {
        "A1": "=AVERAGE(Log!C2:C9)",
        "B1": "=AVERAGE(Log!B2:B9)",
        "A2": "=A1*2",
        "B2": "=COUNT(Spring!A:A)",
    }


@pytest.mark.parametrize(
    "readers",
    [
        [[Formula("=AVERAGE(Log!B2:B9)", 2)]],
        [[Formula("=COUNT(Log!C20:C90)", 0)]],
        [[Formula("=COUNT(C1:C9)", 0)]],
        [["AVERAGE(Log!C2:C9)"]],
    ],
)
def test_where_nothing_reads_filled_cells_nothing_is_recalculated(
    path: Path, readers: Grid
) -> None:
    write_log(path, more={"Summary": readers})
    result = fill(path)
    assert result.dependents == {}
    assert not recalculates(path)
    assert result.kept is not None
    assert WORKBOOK not in compare(result.kept, path).changed


def test_charts_and_names_are_named_but_ask_for_no_recalculation(path: Path) -> None:
    def dress(book: Workbook, sheet: Worksheet) -> None:
        chart = book.add_chart({"type": "scatter"})
        series = {"categories": "=Log!$B$2:$B$4", "values": "=Log!$C$2:$C$4"}
        chart.add_series(series)
        book.get_worksheet_by_name("Plots").insert_chart("B2", chart)
        book.define_name("Ages", "=Log!$C$2:$C$4")
        book.define_name("Deep", "=Log!$B$2:$B$4")
        sheet.print_area(0, 0, 9, 9)

    result = fill(write_log(path, dress=dress, more={"Plots": []}))
    found = result.dependents["Log"]
    assert (found.cells, found.names, found.charts) == ({}, ("Ages",), {"Plots": 1})
    assert not recalculates(path)


def test_a_formula_beside_the_log_counts_too(path: Path) -> None:
    rows: Grid = [[*LOG[0], "twice"], [*LOG[1], None, Formula("=C2*2", 0)], *LOG[2:]]
    result = fill(write_log(path, rows))
    assert result.dependents["Log"].cells == {"Log": ("D2",)}
    assert cells(path, results=True)["D2"] == 0
    assert cells(path)["C2"] == pytest.approx(AGES[1.0], rel=1e-5)
