"""The cells behind references: names, tables, runs of sheets and copies."""

from __future__ import annotations

import pytest

from tests.workbook_tools.loose_parts import MAIN, LooseParts, relations, small_book
from workbook_tools.cell_address import Range, parse_cell, parse_range
from workbook_tools.cell_set import CellSet
from workbook_tools.parts import read_workbook
from workbook_tools.reference_targets import TargetFinder, Targets

NAMES = {
    "zs": "Log!$B$2:$B$9",
    "chain": "zs*2+Notes!$A$1",
    "ring": "ring+other",
    "other": "ring+Log!$C$1",
    "reach": "OFFSET(Log!$A$1,0,0)",
    "moving": "Log!A1",
    "number": "70",
    "homeless": "$A$1",
}


def finder(local: str = "") -> TargetFinder:
    """Return the finder of a workbook with the sheets Log, Notes, My plots and a table."""
    tabs = ["Log", "Notes", "My plots"]
    sheets = "".join(
        f'<sheet name="{name}" sheetId="{n}" r:id="rId{n}"/>' for n, name in enumerate(tabs, 1)
    )
    names = "".join(f'<definedName name="{n}">{f}</definedName>' for n, f in NAMES.items()) + local
    links = [(f"rId{n}", "worksheet", f"worksheets/sheet{n}.xml") for n in (1, 2, 3)]
    parts = small_book(
        inside=f"<sheets>{sheets}</sheets><definedNames>{names}</definedNames>",
        links=relations(*links),
    )
    parts |= {f"xl/worksheets/sheet{n}.xml": "<worksheet/>" for n in (2, 3)}
    parts["xl/worksheets/_rels/sheet1.xml.rels"] = relations(("rId1", "table", "/xl/table.xml"))
    columns = "".join(
        f'<tableColumn id="{n}" name="{name}"/>' for n, name in enumerate(["Object", "z", "Age"], 1)
    )
    parts["xl/table.xml"] = (
        f'<table xmlns="{MAIN}" id="1" displayName="Quasars" ref="E3:G20">'
        f"<tableColumns>{columns}</tableColumns></table>"
    )
    package = LooseParts(parts)
    return TargetFinder(package, read_workbook(package))


def seen(formula: str, sheet: str | None = "Notes", cells: str = "C3") -> list[str]:
    """Return what a formula in the first of the cells, copied to all of them, reads."""
    area = parse_range(cells)
    origin = parse_cell(cells.partition(":")[0])
    found = finder().of_formula(formula, sheet, origin, area)
    assert not found.uncertain
    return [f"{name}!{area.a1}" for name, area in found.areas]


@pytest.mark.parametrize(
    ("formula", "expected"),
    [
        ("A1+Log!B2:C3", ["Notes!A1", "Log!B2:C3"]),
        ("LOG!A1+'my PLOTS'!A1", ["Log!A1", "My plots!A1"]),
        ("SUM('Log:My plots'!A1)", ["Log!A1", "Notes!A1", "My plots!A1"]),
        ("SUM('My plots:Notes'!A1)", ["Notes!A1", "My plots!A1"]),
        ("Gone!A1", []),
        ("zs", ["Log!B2:B9"]),
        ("ZS+Log!zs", ["Log!B2:B9", "Log!B2:B9"]),
        ("chain", ["Notes!A1", "Log!B2:B9"]),
        ("number+unheard_of+TRUE", []),
        ("quasars[Z]", ["Log!F3:F20"]),
        ("Quasars[[Object]:[z]]", ["Log!E3:F20"]),
        ("Quasars[[#This Row],[Age]]", ["Log!G3:G20"]),
        ("ROWS(Quasars)", ["Log!E3:XFD20"]),
        ("ROWS(Quasars[#All])", ["Log!E3:XFD20"]),
        ("Quasars[gone]", ["Log!E3:XFD20"]),
    ],
)
def test_references_lead_to_cells(formula: str, expected: list[str]) -> None:
    assert seen(formula) == expected


@pytest.mark.parametrize(
    "formula",
    ["'Gone:Log'!A1", "Log:'My plots'!A1", "Unknown[z]", "reach", "moving", "homeless"],
)
def test_what_leads_nobody_knows_where_is_uncertain(formula: str) -> None:
    found = finder().of_formula(formula, "Notes", parse_cell("C3"), parse_range("C3"))
    assert found.uncertain


def test_names_that_lead_to_themselves_come_to_an_end() -> None:
    assert seen("ring") == ["Log!C1"]


def test_the_name_of_the_sheet_comes_before_that_of_the_workbook() -> None:
    local = '<definedName name="zs" localSheetId="1">Notes!$D$4</definedName>'
    for sheet, expected in (("Notes", "D4"), ("Log", "B2:B9")):
        found = finder(local).of_formula("zs", sheet, parse_cell("A1"), parse_range("A1"))
        assert [area.a1 for _, area in found.areas] == [expected]
    found = finder(local).of_formula("Notes!zs", "Log", parse_cell("A1"), parse_range("A1"))
    assert [area.a1 for _, area in found.areas] == ["D4"]


@pytest.mark.parametrize(
    ("formula", "cells", "expected"),
    [
        ("B3", "C3:C9", "B3:B9"),
        ("B$3", "C3:C9", "B3"),
        ("B3", "C3:E3", "B3:D3"),
        ("$B3", "C3:E3", "B3"),
        ("B$3:B3", "C3:C9", "B3:B9"),
        ("A1:A$5", "C3:C9", "A1:A7"),
        ("A1:A5", "C3:D9", "A1:B11"),
        ("A1:$C1", "C3:E3", "A1:C1"),
        ("$A1:C1", "C3:E3", "A1:E1"),
        ("A1:$B1", "C3:F3", "A1:D1"),
        ("B:B", "C3:E9", "B1:D1048576"),
        ("3:3", "C3:E9", "A3:XFD9"),
        ("XFD3", "C3:E9", "XFD3:XFD9"),
    ],
)
def test_copies_read_what_their_moved_references_reach(
    formula: str, cells: str, expected: str
) -> None:
    assert seen(formula, cells=cells) == [f"Notes!{expected}"]


def test_the_area_of_copies_may_begin_before_the_cell_that_holds_the_formula() -> None:
    found = finder().of_formula("B5", "Log", parse_cell("C5"), parse_range("C3:C9"))
    assert [area.a1 for _, area in found.areas] == ["B3:B9"]
    found = finder().of_formula("D5:F$7", "Log", parse_cell("E5"), parse_range("C3:E5"))
    assert [area.a1 for _, area in found.areas] == ["B3:F7"]


def test_targets_meet_cells_they_read_and_uncertain_ones_meet_all() -> None:
    cells = CellSet()
    cells.add("Log", parse_range("B2:B9"))
    assert Targets((("Log", Range(9, 1, 12, 3)),), False).meets(cells)
    assert not Targets((("Log", Range(10, 1, 12, 3)),), False).meets(cells)
    assert not Targets((("Notes", Range(9, 1, 12, 3)),), False).meets(cells)
    assert Targets((), True).meets(cells)
