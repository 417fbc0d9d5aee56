"""The report: short for people, complete as JSON."""

from __future__ import annotations

import json
from pathlib import Path

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from epochconv import ExpansionHistory
from tests.workbook_tools.small_logs import BARE, LOG, NOW, Formula, Grid, write_log
from workbook_tools import FillResult, fill
from workbook_tools.report import json_report, text_report

ROWS: Grid = [
    ["Object", "z", "Age [Gyr]", "µ [mag]"],
    ["a", 1.0],
    ["b", ">6"],
    ["c", -0.1],
    ["d", -0.2],
    ["e", -0.3],
    ["f", -0.4],
    ["g", 0.0],
    ["h", "2"],
    ["Sum", Formula("=SUM(B2:B3)", 1.0)],
]


def with_readers(book: Workbook, sheet: Worksheet) -> None:
    chart = book.add_chart({"type": "line"})
    chart.add_series({"values": "=Log!$C$2:$C$9"})
    sheet.insert_chart("H2", chart)
    book.define_name("Ages", "=Log!$C$2:$C$9")


@pytest.fixture
def result(tmp_path: Path) -> FillResult:
    more = {"Summary": [[Formula("=MAX(Log!C:C)", 0)], [Formula("=MIN(Log!C:C)", 0)]]}
    return fill(write_log(tmp_path / "log.xlsx", ROWS, with_readers, more), now=NOW)


def test_the_text_says_what_was_done_and_what_was_left(result: FillResult) -> None:
    lines = text_report(result).splitlines()
    assert lines[:-3] == [
        "sheet 'Log'",
        "  C 'Age [Gyr]': 4 cells filled from B 'z', 1 of them a limit",
        "  D 'µ [mag]': 3 cells filled from B 'z', 1 of them a limit",
        "  left 4: a negative redshift is a neighbour's peculiar motion towards us and no epoch"
        " (B4 '-0.1', B5 '-0.2', B6 '-0.3' and 1 more)",
        "  left 1: distance modulus does not exist at redshift 0 (D8)",
        "  passed over 1: a line of totals (B10)",
        "  read 1: numbers typed as text (B9)",
        "  read 1: a redshift of exactly 0, which may stand for a missing value (B8)",
        "  read 1: a limit (B3)",
        "  note: the heading names no frame; redshifts are taken as in the CMB frame, which matters"
        " below 0.1 (1 of them)",
        "  these read filled cells and may show old results: formulas on sheet 'Summary' (A1:A2);"
        " names (Ages); 1 chart on sheet 'Log'",
        "  Excel recalculates them when it opens the file; in LibreOffice press Ctrl+Shift+F9",
    ]


def test_the_text_ends_with_assumptions_and_files(result: FillResult) -> None:
    assumed, kept, written = text_report(result).splitlines()[-3:]
    assert assumed.startswith("under planck 2018: H0 67.36 km/s/Mpc, Ω_m 0.3153, flat")
    assert kept == "the workbook as it was is kept as log (kept 2026-12-01 14.03.22).xlsx"
    assert written == f"written: {result.path}"


def test_a_run_without_anything_to_do_says_so(tmp_path: Path) -> None:
    assert text_report(fill(write_log(tmp_path / "log.xlsx", [["z"]]))) == (
        "nothing was waiting to be filled"
    )


def test_one_cell_is_called_one(tmp_path: Path) -> None:
    result = fill(write_log(tmp_path / "log.xlsx", LOG[:2]), now=NOW)
    assert "  C 'Age [Gyr]': 1 cell filled from B 'z'" in text_report(result).splitlines()


def test_a_column_that_got_nothing_is_not_listed(tmp_path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]"], [-0.1], [-0.2], [-0.3]]
    lines = text_report(fill(write_log(tmp_path / "log.xlsx", rows))).splitlines()
    assert lines[:3] == [
        "sheet 'Log'",
        "  left 3: a negative redshift is a neighbour's peculiar motion towards us and no epoch"
        " (A2 '-0.1', A3 '-0.2', A4 '-0.3')",
        "nothing was waiting to be filled",
    ]


def test_a_new_column_is_called_new(tmp_path: Path) -> None:
    result = fill(write_log(tmp_path / "log.xlsx", BARE), add=["Age [Gyr]"], now=NOW)
    assert "  new column C 'Age [Gyr]': 3 cells filled from B 'z'" in text_report(result)


def test_parameters_of_ones_own_are_stated(tmp_path: Path) -> None:
    own = ExpansionHistory(hubble_constant=50, matter=1, radiation=False)
    result = fill(write_log(tmp_path / "log.xlsx"), parameters=own)
    assert "under own parameters: H0 50 km/s/Mpc, Ω_m 1, flat" in text_report(result)
    assert json_report(result)["parameters"]["citation"] is None


def test_a_great_many_reasons_do_not_make_the_report_long(tmp_path: Path) -> None:
    texts = ["2,3", "2,345", "1 2", "2-3", "1.2/3.4", "0.5→0.7", "12:30", "1.2.3", "2.3a", "1.3d3"]
    texts += ["½", "2.3 (2)", "(2.3)", "2.3+0.1", "tbc", "see below", "2.3 Mpc2", "10³"]
    rows = [["z", "a []"], [1.0], *([text] for text in texts for _ in range(2))]
    result = fill(write_log(tmp_path / "log.xlsx", rows))
    counts = json_report(result)["left_by_reason"]
    assert len(counts) > 14
    lines = text_report(result).splitlines()
    assert len(lines) < 20
    hidden = list(counts.values())[12:]
    assert (
        f"  left {sum(hidden)}: for {len(hidden)} further reasons; --report FILE.json lists all"
    ) in lines
    assert "  left 2: not read: a range, not one value (A9 '2-3', A10 '2-3')" in lines


def test_the_json_holds_everything(result: FillResult) -> None:
    data = json.loads(json.dumps(json_report(result), allow_nan=False))
    assert data["format"] == "epochbook fill report 1"
    assert (data["file"], data["filled"]) == ("log.xlsx", 7)
    assert data["kept"] == "log (kept 2026-12-01 14.03.22).xlsx"
    assert data["parameters"]["name"] == "planck 2018"
    assert "A&A 641, A6" in data["parameters"]["citation"]
    (sheet,) = data["sheets"]
    assert (sheet["sheet"], sheet["header_row"]) == ("Log", 1)
    assert sheet["passed_over"] == [{"cell": "B10", "reason": "a line of totals", "text": None}]
    assert sheet["remarks"]["a limit"] == ["B3"]
    assert sheet["columns"][0] == {
        "column": "C",
        "heading": "Age [Gyr]",
        "holds": "values",
        "measure": "age",
        "unit": "Gyr",
        "source_column": "B",
        "source_measure": "redshift",
        "source_unit": "",
        "filled": 4,
        "limits": 1,
        "added": False,
    }
    assert [left["cell"] for left in sheet["left"]] == ["D8", "B4", "B5", "B6", "B7"]
    assert [left["text"] for left in sheet["left"]] == [None, "-0.1", "-0.2", "-0.3", "-0.4"]
    assert data["left_by_reason"]["distance modulus does not exist at redshift 0"] == 1
    assert sum(data["left_by_reason"].values()) == 5
    assert sheet["readers"] == {
        "cells": {"Summary": ["A1:A2"]},
        "names": ["Ages"],
        "charts": {"Log": 1},
    }


def test_the_json_of_a_fill_that_nobody_reads(tmp_path: Path) -> None:
    data = json_report(fill(write_log(tmp_path / "log.xlsx"), output=tmp_path / "out.xlsx"))
    assert data["sheets"][0]["readers"] == {"cells": {}, "names": [], "charts": {}}
    assert (data["file"], data["kept"], data["warnings"]) == ("out.xlsx", None, [])
