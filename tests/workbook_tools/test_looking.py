"""What is seen in a workbook: sheets, headings and why, how cells read, what would be filled."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

from tests.workbook_tools.small_logs import Formula, Grid, write_log
from workbook_tools import Refusal, UsageError, look
from workbook_tools.command import main
from workbook_tools.look_report import look_json, look_text
from workbook_tools.looking import Look

LOG: Grid = [
    ["Object", "z_hel", "e_z", "Quality", "Age [Gyr]", "distance [Mpc]", "Note", "Seeing"],
    ["a", 0.05, 0.01, "A", None, 200.0, "x", 0.8],
    ["b", "2.0(1)", None, "B", 3.27],
    ["c", ">6", None, "B"],
    ["d", "n/a"],
    ["e"],
    ["f", "2-3"],
    ["g", "2,3"],
    ["h", "1,2"],
    ["i", Formula("=1+1", 2.0)],
    ["Mean", 2.5],
]


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


@pytest.fixture
def seen(path: Path) -> Look:
    return look(write_log(path, LOG))


def column(seen: Look, letters: str) -> dict[str, Any]:
    columns = look_json(seen)["sheets"][0]["columns"]
    return next(one for one in columns if one["column"] == letters)


def test_each_column_is_named_with_what_it_is_taken_for_and_why(seen: Look) -> None:
    assert {k: v for k, v in column(seen, "B").items() if k != "cells"} == {
        "column": "B",
        "heading": "z_hel",
        "role": "value",
        "measure": "redshift",
        "unit": "",
        "frame": "heliocentric",
        "method": None,
        "belongs_to": None,
        "reason": None,
        "why": "name 'z_hel'",
    }
    assert (column(seen, "C")["role"], column(seen, "C")["belongs_to"]) == ("error", "B")
    assert (column(seen, "D")["role"], column(seen, "D")["reason"]) == ("carried", "quality")
    assert column(seen, "E")["why"] == "name 'Age', unit Gyr in brackets"
    unclear = column(seen, "F")
    assert unclear["role"] == "unclear"
    assert "luminosity distance" in unclear["reason"]
    assert "--source F:F --as 'comoving distance [Mpc]'" in unclear["reason"]
    assert column(seen, "H")["role"] == "other"


def test_how_cells_read_is_counted_with_the_first_of_each(seen: Look) -> None:
    cells = column(seen, "B")["cells"]
    assert cells["counts"] == {
        "numbers": 3,
        "limits": 1,
        "with errors": 2,
        "blank": 1,
        "no value": 1,
        "left": 3,
        "passed over": 1,
    }
    assert cells["first"] == {
        "numbers": "B2",
        "limits": "B4",
        "with errors": "B2",
        "blank": "B6",
        "no value": "B5",
        "left": "B7",
        "passed over": "B11",
    }
    assert cells["left"] == {
        "not read: a range, not one value": {"count": 1, "first": "B7"},
        "not read: looks like a decimal comma; use --decimal-comma": {"count": 2, "first": "B8"},
    }
    assert cells["remarks"] == {
        "a limit": {"count": 1, "first": "B4"},
        "results of formulas, as last stored": {"count": 1, "first": "B10"},
    }
    assert cells["words_for_no_value"] == {"n/a": 1}
    assert column(seen, "C")["cells"]["counts"] == {"numbers": 1, "blank": 9}
    assert [column(seen, letters)["cells"] for letters in "ADFGH"] == [None] * 5


def test_a_look_reads_units_and_flags_as_a_fill_does(path: Path) -> None:
    rows: Grid = [["z", "l_z"], ["3 Mpc"], [6.0, ">"], [1.0, "u"]]
    counts = column(look(write_log(path, rows)), "A")["cells"]["counts"]
    assert counts == {"limits": 1, "left": 2}


def test_the_text_says_it_all_in_lines(seen: Look) -> None:
    lines = look_text(seen).splitlines()
    assert lines[0] == "sheet 'Log': headings in row 1, rows 2 to 11"
    assert lines[1] == "  B 'z_hel': redshift, heliocentric (name 'z_hel')"
    assert "3 numbers (first B2), 1 limit" in lines[2]
    assert "1 no value (first B5: n/a (1))" in lines[2]
    assert (
        "      left 2: not read: looks like a decimal comma; use --decimal-comma (first B8)"
        in lines
    )
    assert "      read 1: a limit (first B4)" in lines
    assert any(line.startswith("  C 'e_z': error of z_hel, column B") for line in lines)
    assert any(line.startswith("  D 'Quality': quality") for line in lines)
    assert any(line.startswith("  F 'distance [Mpc]': unclear: could be ") for line in lines)
    assert "  none of ours: A, H" in lines
    start = lines.index("  a fill would do this:")
    assert lines[start + 1] == "    E 'Age [Gyr]': 3 cells filled from B 'z_hel', 1 of them a limit"
    assert lines[-1].startswith("under planck 2018: H0 67.36 km/s/Mpc")


def test_a_sheet_with_nothing_to_fill_says_so(path: Path) -> None:
    text = look_text(look(write_log(path, [["z"], [1.0]])))
    assert "  nothing to fill" in text.splitlines()


def test_every_sheet_has_its_line(path: Path) -> None:
    def dress(book: Workbook, _sheet: Worksheet) -> None:
        book.get_worksheet_by_name("Hidden").hide()
        chart = book.add_chart({"type": "line"})
        chart.add_series({"values": "=Log!$B$2:$B$4"})
        book.add_chartsheet("Picture").set_chart(chart)

    more: dict[str, Grid] = {"Hidden": [["z", "Age [Gyr]"], [1.0]], "Lists": [["quasar"]]}
    write_log(path, [["z", "Age [Gyr]"], [1.0]], dress, more)
    lines = look_text(look(path)).splitlines()
    assert "sheet 'Hidden': hidden, filled only when named with --sheet" in lines
    assert "sheet 'Lists': no row of headings that are known here" in lines
    assert "sheet 'Picture': a chartsheet, nothing to fill" in lines
    named = look_text(look(path, sheet="Hidden")).splitlines()
    assert named[0] == "sheet 'Hidden': headings in row 1, rows 2 to 2"
    assert not any("sheet 'Log'" in line for line in named)


def test_an_open_choice_is_said_with_what_settles_it(path: Path) -> None:
    write_log(path, [["z", "z_phot", "Age [Gyr]"], [1.0, 1.1]])
    seen = look(path)
    assert isinstance(seen.stop, UsageError)
    lines = look_text(seen).splitlines()
    assert lines[-2] == f"a fill would stop: {seen.stop}"
    assert "choose one with --source" in lines[-2]
    assert "  nothing to fill" not in lines
    assert look_json(seen)["stop"] == str(seen.stop)


def test_a_column_that_disagrees_is_seen_before_a_fill_stops(path: Path) -> None:
    seen = look(write_log(path, [["z", "Age [Gyr]"], [1.0, 9.9], [2.0]]))
    assert isinstance(seen.stop, Refusal)
    assert "B2 holds 9.9 where 5.8423 belongs" in str(seen.stop)


@pytest.mark.parametrize(
    ("choices", "words"),
    [({"sheet": "Nope"}, "has no sheet 'Nope'"), ({"header_row": 9}, "row 9 of sheet 'Log' holds")],
)
def test_what_is_not_there_cannot_be_looked_at(
    path: Path, choices: dict[str, Any], words: str
) -> None:
    with pytest.raises(UsageError, match=words):
        look(write_log(path), **choices)


def test_what_is_no_workbook_is_refused(path: Path) -> None:
    path.write_bytes(b"no workbook")
    with pytest.raises(Refusal):
        look(path)


def run(capsys: pytest.CaptureFixture[str], *arguments: object) -> tuple[int, str, str]:
    code = main([str(argument) for argument in arguments])
    said = capsys.readouterr()
    return code, said.out, said.err


@pytest.mark.parametrize(
    ("rows", "code"),
    [
        ([["z", "Age [Gyr]"], [1.0]], 0),
        ([["z", "Age [Gyr]"], [1.0], ["2-3"]], 3),
        ([["z", "z_phot", "Age [Gyr]"], [1.0, 1.1]], 2),
        ([["z", "Age [Gyr]"], [1.0, 9.9], [2.0]], 1),
    ],
)
def test_exit_codes(capsys: pytest.CaptureFixture[str], path: Path, rows: Grid, code: int) -> None:
    write_log(path, rows)
    before = path.read_bytes(), path.stat().st_mtime_ns
    found, out, err = run(capsys, "look", path)
    assert (found, err) == (code, "")
    assert out.startswith("sheet 'Log'")
    found, out, _ = run(capsys, "look", path, "--json")
    assert found == code
    assert json.loads(out)["sheets"][0]["sheet"] == "Log"
    assert (path.read_bytes(), path.stat().st_mtime_ns) == before
    assert list(path.parent.iterdir()) == [path]


def test_what_cannot_be_read_at_all_says_why(
    capsys: pytest.CaptureFixture[str], path: Path
) -> None:
    path.write_bytes(b"no workbook")
    code, out, err = run(capsys, "look", path)
    assert (code, out) == (1, "")
    assert err.startswith("epochbook: ")
    code, out, err = run(capsys, "look", write_log(path), "--parameters", "plonk")
    assert (code, out) == (2, "")
    assert "no parameter set" in err
