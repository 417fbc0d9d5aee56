"""Choices that change how cells are read, headings in doubt, h in units; what the report says."""

from __future__ import annotations

from pathlib import Path

import pytest

import epochconv
from tests.workbook_tools.small_logs import AGES, NOW, Dressed, Grid, cells, new_cells, write_log
from workbook_tools import FillResult, UsageError, fill
from workbook_tools.report import json_report


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def filled(path: Path, rows: Grid, **choices: object) -> tuple[FillResult, dict[str, object]]:
    before = cells(write_log(path, rows))
    result = fill(path, now=NOW, **choices)  # type: ignore[arg-type]  # per test
    return result, new_cells(before, path)


def left(result: FillResult) -> dict[str, str]:
    return {one.cell: one.reason for plan in result.plans for one in plan.left}


COMMAS: Grid = [["z", "Age [Gyr]"], ["1,0"], ["2,000"], ["3.0"], ["1.234,5"], [1.0], ["2,0(1)"]]


def test_commas_are_decimal_marks_where_that_is_declared(path: Path) -> None:
    result, new = filled(path, COMMAS)
    assert new.keys() == {"B4", "B6"}
    assert left(result) == {
        "A2": "not read: looks like a decimal comma; use --decimal-comma",
        "A3": "not read: a comma that may be decimal or group thousands; use --decimal-comma or"
        " retype",
        "A5": "not read: looks like a decimal comma; use --decimal-comma",
        "A7": "not read: looks like a decimal comma; use --decimal-comma",
    }
    result, new = filled(path, COMMAS, decimal_comma=True)
    expected = {"B2": AGES[1.0], "B3": AGES[2.0], "B4": AGES[3.0], "B6": AGES[1.0], "B7": AGES[2.0]}
    assert {cell: new[cell] for cell in expected} == pytest.approx(expected, rel=1e-5)
    assert left(result) == {}
    notes = result.plans[0].notes
    assert "commas in typed numbers were taken for decimal marks (--decimal-comma)" in notes


def test_number_cells_have_no_comma_whatever_is_declared(path: Path) -> None:
    _, new = filled(path, [["z", "a []"], [1.25], ["1,25"]], decimal_comma=True)
    assert new["B2"] == new["B3"] == pytest.approx(1 / 2.25, rel=1e-14)


def test_brackets_are_notes_where_that_is_declared(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]"], ["1.0 (a)"], ["2.0 [5]"], ["3.0(2)"]]
    result, new = filled(path, rows)
    assert new.keys() == {"B4"}
    assert set(left(result).values()) == {
        "not read: a bracket after the number: a note or an error; for notes use"
        " --brackets-are-notes"
    }
    result, new = filled(path, rows, brackets_are_notes=True, with_errors=True)
    assert new.keys() == {"B2", "B3", "B4"}  # 3.0(2) has a note and no error then
    (plan,) = result.plans
    assert plan.remarks == {"a note in brackets, passed over": ["A2", "A3", "A4"]}
    assert "brackets behind numbers were taken for notes (--brackets-are-notes)" in plan.notes


MISSING: Grid = [["z", "Age [Gyr]"], [-99.0], ["-99"], [9999.0], [9999.0], [1.0]]


def test_codes_for_missing_values_count_where_they_are_declared(path: Path) -> None:
    result, new = filled(path, MISSING)
    assert new.keys() == {"B4", "B5", "B6"}
    assert list(left(result)) == ["A2", "A3"]
    suspected = [one for one in result.plans[0].notes if "looks like a code" in one]
    assert [one.partition(" and looks")[0] for one in suspected] == [
        "-99 stands 2 times in column A",
        "9999 stands 2 times in column A",
    ]
    result, new = filled(path, MISSING, missing=[-99, 9999])
    assert (new.keys(), left(result)) == ({"B6"}, {})
    assert result.plans[0].notes[:2] == [
        "no value in column A: -99 (2), 9999 (2)",
        "taken for no value, as declared with --missing: -99, 9999",
    ]


def test_choices_that_are_not_made_are_not_named(path: Path) -> None:
    result, _ = filled(path, [["z", "Age [Gyr]"], [1.0]])
    assert not any("--" in note for note in result.plans[0].notes)


@pytest.mark.parametrize(
    ("heading", "words"),
    [
        ("distance [Mpc]", "could be comoving distance, transverse comoving distance, luminosity"),
        ("D [Mpc]", "could be comoving distance"),
        ("Dist. (Gly)", "could be comoving distance"),
        ("time [Gyr]", "could be age or lookback time"),
        ("v [km/s]", "a velocity, whose convention"),
        ("cz [km/s]", "a velocity, whose convention"),
        ("Cepheid distance [Mpc]", "'Cepheid' says that it was measured without a redshift"),
        ("log10(D_L/Mpc)", "log"),
        ("1+z", "it holds 1+z and not z"),
        ("D_C [10^3 Mpc]", "power of ten"),
        ("D_C [h70^-1 Mpc]", "h70 names an h of its own"),
        ("Age", "age without a unit; write 'Age [Gyr]'"),
        ("Age [Mpc]", "Mpc is no unit of age"),
        ("Age [gyr]", "capitals matter in a unit"),
    ],
)
def test_a_heading_in_doubt_is_left_alone_and_said(path: Path, heading: str, words: str) -> None:
    result, new = filled(path, [["Object", "z", heading, "Age [Gyr]"], ["a", 1.0]])
    assert new.keys() == {"D2"}
    (warning,) = result.warnings
    assert warning.startswith(f"sheet 'Log': heading '{heading}' (C1) is left alone: ")
    assert words in warning
    assert json_report(result)["warnings"] == [warning]


def test_the_remedy_that_a_doubt_names_works(path: Path) -> None:
    rows: Grid = [["distance [Mpc]", "z"], [1000.0]]
    (warning,) = filled(path, [*rows, [None, 1.0]])[0].warnings
    assert "insist with --source A:A --as 'comoving distance [Mpc]'" in warning
    result, new = filled(path, rows, source="A:A", source_measure="comoving distance [Mpc]")
    expected = epochconv.convert(1000, "comoving distance", "redshift").magnitude
    assert new["B2"] == pytest.approx(expected, rel=1e-13)
    assert result.warnings == []


@pytest.mark.parametrize("heading", ["D_L [h^-1 Mpc]", "D_L (h⁻¹ Mpc)", "D_L [Mpc/h]"])
def test_h_of_the_history_goes_into_source_and_target(path: Path, heading: str) -> None:
    # such a column holds the distance times h
    exact = epochconv.convert(1, "redshift", "luminosity distance").m_as("megaparsec")
    result, new = filled(path, [["z", heading], [1.0]])
    assert new["B2"] == pytest.approx(exact * 0.6736, rel=1e-13)
    result, new = filled(path, [[heading, "z", "D_L [Mpc]"], [exact * 0.6736]])
    assert new["B2"] == pytest.approx(1.0, rel=1e-12)
    assert new["C2"] == pytest.approx(exact, rel=1e-13)
    assert any("h = 0.6736" in note for note in result.plans[0].notes)
    _, new = filled(path, [["z", heading], [1.0]], parameters="round numbers")
    round_one = epochconv.convert(1, "redshift", "luminosity distance", history="round numbers")
    assert new["B2"] == pytest.approx(0.7 * round_one.m_as("megaparsec"), rel=1e-13)


def test_a_target_in_powers_of_h_names_its_h_too(path: Path) -> None:
    result, _ = filled(path, [["z", "D_L [h^-1 Mpc]"], [1.0]])
    assert any("h = 0.6736" in note for note in result.plans[0].notes)


def test_units_in_cells_beside_a_heading_s(path: Path) -> None:
    rows: Grid = [["Lookback time [Gyr]", "z"], ["10 Gyr"], ["10000 Myr"], [10.0], ["10 Mpc"]]
    result, new = filled(path, rows)
    expected = epochconv.convert("10 Gyr", "lookback time", "redshift").magnitude
    assert [new[f"B{row}"] for row in (2, 3, 4)] == pytest.approx([expected] * 3, rel=1e-12)
    assert left(result) == {"A5": "a length (Mpc) where the heading asks for a time"}
    assert result.plans[0].remarks[
        "a unit in the cell that differs from the heading's, converted"
    ] == ["A3"]


def test_photometric_bands_are_no_redshifts(path: Path) -> None:
    rows: Grid = [["g", "r", "i", "z", "y", "Age [Gyr]"], [21.0, 20.5, 20.1, 19.9, 19.7]]
    result, new = filled(path, rows)
    assert new == {}
    assert any("photometric bands" in warning for warning in result.warnings)
    with pytest.raises(UsageError, match="which is no measure with a unit"):
        fill(path, source="g")


@pytest.mark.parametrize(
    ("values", "is_band"), [([19.9, 21.3], True), ([0.5, 1.5], False), ([19.9], True)]
)
def test_values_like_magnitudes_beside_one_band_make_a_band(
    path: Path, values: list[float], is_band: bool
) -> None:
    rows: Grid = [["i", "z", "Age [Gyr]"], *([20.0, value] for value in values)]
    _, new = filled(path, rows)
    assert bool(new) is not is_band
    alone: Grid = [["Object", "z", "Age [Gyr]"], *(["a", value] for value in values)]
    assert filled(path, alone)[1]  # never by their size alone


def test_repeated_headings_and_other_blocks_below(path: Path) -> None:
    rows: Grid = [
        ["Object", "z", "Age [Gyr]"],
        ["a", 1.0],
        ["Object", "z", "Age [Gyr]"],
        ["b", 2.0],
        [],
        ["Object", "Age [Gyr]", "z"],
        ["c", 5.8423],
    ]
    result, new = filled(path, rows)
    assert new == pytest.approx({"C2": AGES[1.0], "C4": AGES[2.0]}, rel=1e-5)
    below = "below other headings; fill these rows with --header-row 6"
    assert result.plans[0].passed_over == [
        ("B3", "repeated headings", ""),
        ("B6", below, ""),
        ("B7", below, ""),
    ]
    _, new = filled(path, rows, header_row=6)
    assert new == {"C7": pytest.approx(1.0, rel=1e-4)}


def test_a_percent_cell_is_what_it_shows(path: Path) -> None:
    result, new = filled(path, [["z", "a []"], [Dressed(0.25, {"num_format": "0%"})]])
    assert new["B2"] == 0.8
    assert result.plans[0].remarks == {"percent": ["A2"]}


def test_a_second_run_with_the_same_choices_writes_nothing(path: Path) -> None:
    choices = {"decimal_comma": True, "with_errors": True, "add": ["D_C [Mpc]"]}
    rows: Grid = [["z", "Age [Gyr]"], ["1,0(1)"], [">6"], ["n/a"], ["2-3"], [0.0]]
    filled(path, rows, **choices)
    before = path.read_bytes()
    again = fill(path, **choices)  # type: ignore[arg-type]  # as above
    assert (again.written, again.filled) == (False, 0)
    assert path.read_bytes() == before
