"""Errors through a fill: the image of the source's interval, both ends mapped."""

from __future__ import annotations

from pathlib import Path

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

import epochconv
from tests.workbook_tools.package_rules import new_problems
from tests.workbook_tools.small_logs import NOW, Grid, cells, dated_copies, new_cells, write_log
from workbook_tools import FillResult, fill
from workbook_tools.report import text_report


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def filled(path: Path, rows: Grid, **choices: object) -> tuple[FillResult, dict[str, object]]:
    before = cells(write_log(path, rows))
    result = fill(path, now=NOW, **choices)  # type: ignore[arg-type]  # per test
    return result, new_cells(before, path)


def notes(result: FillResult) -> list[str]:
    """The notes of the one sheet but for those about frames and parameter sets."""
    (plan,) = result.plans
    return [
        note
        for note in plan.notes
        if not note.startswith(("the heading names no frame", "the choice of parameters"))
    ]


def of(measure: str, redshift: float) -> float:
    return float(epochconv.convert(redshift, "redshift", measure).magnitude)


def sides(measure: str, low: float, z: float, high: float) -> tuple[float, float]:
    """Lower and upper error: from both ends of the redshift's interval."""
    value, ends = of(measure, z), sorted((of(measure, low), of(measure, high)))
    return value - ends[0], ends[1] - value


MEASURES = [
    ("Age [Gyr]", "age"),
    ("Lookback time [Gyr]", "lookback time"),
    ("D_C [Mpc]", "comoving distance"),
    ("D_L [Mpc]", "luminosity distance"),
    ("T_CMB [K]", "CMB temperature"),
    ("scale factor", "scale factor"),
    ("H(z) [km/s/Mpc]", "Hubble rate"),
    ("µ [mag]", "distance modulus"),
]


@pytest.mark.parametrize(("heading", "measure"), MEASURES)
def test_both_ends_are_mapped(path: Path, heading: str, measure: str) -> None:
    name = heading.partition(" [")[0]
    rows: Grid = [["z", heading, f"E_{name}", f"e_{name}"], ["2.0 +0.4/-0.1"], ["0.50(5)"]]
    _, new = filled(path, rows)
    for row, (low, z, high) in ((2, (1.9, 2.0, 2.4)), (3, (0.45, 0.5, 0.55))):
        lower, upper = sides(measure, low, z, high)
        assert new[f"B{row}"] == pytest.approx(of(measure, z), rel=1e-13)
        assert new[f"C{row}"] == pytest.approx(upper, rel=1e-11)
        assert new[f"D{row}"] == pytest.approx(lower, rel=1e-11)


@pytest.mark.parametrize(("heading", "measure"), MEASURES)
def test_errors_are_appended_on_request_and_known_again(
    path: Path, heading: str, measure: str
) -> None:
    rows: Grid = [["z", "e_z", heading], [2.0, 0.1], [1.0, None]]
    result, new = filled(path, rows, with_errors=True)
    name, bracket, unit = heading.partition(" [")
    assert (new["D1"], new["E1"]) == (
        f"upper error of {name}{bracket}{unit}",
        f"lower error of {name}{bracket}{unit}",
    )
    lower, upper = sides(measure, 1.9, 2.0, 2.1)
    assert new["D2"] == pytest.approx(upper, rel=1e-11)
    assert new["E2"] == pytest.approx(lower, rel=1e-11)
    assert new.keys() == {"C2", "C3", "D1", "D2", "E1", "E2"}
    assert [one.holds for one in result.plans[0].columns] == [
        "values",
        "upper errors",
        "lower errors",
    ]
    again = fill(path, with_errors=True)
    assert (again.written, again.filled) == (False, 0)


def test_a_symmetric_error_column_holds_the_larger_side_and_says_so(path: Path) -> None:
    result, new = filled(path, [["z", "Age [Gyr]", "e_Age [Gyr]"], ["2.0±0.5"], [1.0]])
    assert new["C2"] == pytest.approx(max(sides("age", 1.5, 2.0, 2.5)), rel=1e-12)
    assert notes(result) == [
        "column C holds the larger side of errors that are not symmetric; for both sides use"
        " columns headed 'upper error of' and 'lower error of'"
    ]


def test_the_larger_side_may_be_the_lower_one(path: Path) -> None:
    _, new = filled(path, [["z", "t_L [Gyr]", "e_t_L"], ["2.0±0.5"]])
    lower, upper = sides("lookback time", 1.5, 2.0, 2.5)
    assert lower > upper
    assert new["C2"] == pytest.approx(lower, rel=1e-11)


def test_a_symmetric_error_is_not_called_uneven(path: Path) -> None:
    result, new = filled(path, [["z", "T_CMB [K]", "e_T_CMB"], ["2.0±0.5"]])
    assert new["C2"] == pytest.approx(0.5 * 2.7255, rel=1e-12)
    assert notes(result) == []


@pytest.mark.parametrize(("unit", "scale"), [("Gyr", 1.0), ("Myr", 1e3), ("yr", 1e9)])
def test_an_error_column_has_a_unit_of_its_own(path: Path, unit: str, scale: float) -> None:
    rows: Grid = [["z", "Age [Gyr]", f"upper error of Age [{unit}]"], ["2.0±0.1"]]
    _, new = filled(path, rows)
    assert new["C2"] == pytest.approx(sides("age", 1.9, 2.0, 2.1)[1] * scale, rel=1e-11)


def test_h_goes_into_errors_as_into_values(path: Path) -> None:
    _, new = filled(path, [["z", "D_C [h^-1 Mpc]", "E_D_C", "e_D_C"], ["2.0±0.1"]])
    h = 0.6736
    lower, upper = sides("comoving distance", 1.9, 2.0, 2.1)
    expected = [of("comoving distance", 2.0) * h, upper * h, lower * h]
    assert [new[f"{column}2"] for column in "BCD"] == pytest.approx(expected, rel=1e-11)


def test_only_the_side_that_lacks_is_appended(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "upper error of Age [Gyr]"], ["2.0±0.1"]]
    _, new = filled(path, rows, with_errors=True)
    assert new["D1"] == "lower error of Age [Gyr]"
    assert "E1" not in new
    rows = [["z", "Age [Gyr]", "e_Age"], ["2.0±0.1"]]
    assert "D1" not in filled(path, rows, with_errors=True)[1]


def test_an_interval_over_a_turning_point_reaches_its_peak(path: Path) -> None:
    rows: Grid = [["z", "D_A [Mpc]"], ["1.6±0.5"], ["0.5±0.1"]]
    _, new = filled(path, rows, with_errors=True)
    peak = 1794.74  # of the default parameters, to six digits; at z = 1.59
    value = of("angular diameter distance", 1.6)
    assert new["C2"] == pytest.approx(peak - value, abs=0.01)
    ends = [of("angular diameter distance", z) for z in (1.1, 2.1)]
    assert new["D2"] == pytest.approx(value - min(ends), rel=1e-11)
    assert new["D3"] == pytest.approx(
        value_between("angular diameter distance", 0.5, 0.4), rel=1e-11
    )


def value_between(measure: str, one: float, other: float) -> float:
    return of(measure, one) - of(measure, other)


def test_an_interval_that_ends_beyond_today_is_cut_there(path: Path) -> None:
    rows: Grid = [["z", "D_C [Mpc]", "µ [mag]"], ["0.05±0.1"], ["0.5±0.1"]]
    result, new = filled(path, rows, with_errors=True)
    assert [new[f"{column}1"].split()[0] for column in "DEFG"] == ["upper", "lower"] * 2  # type: ignore[attr-defined]
    assert new["E2"] == new["B2"]  # down to no distance at all
    assert new["F2"] == pytest.approx(value_between("distance modulus", 0.15, 0.05), rel=1e-11)
    assert "G2" not in new  # a modulus has no end there, and an infinite error is never written
    (plan,) = result.plans
    assert plan.left == [("G2", "an error that reaches to redshift 0", "")]
    assert plan.remarks["an error that reaches beyond what is possible, cut there"] == ["A2"]


def test_an_interval_that_reaches_to_the_beginning_has_no_upper_end(path: Path) -> None:
    rows: Grid = [["Age [Gyr]", "z", "D_C [Mpc]"], ["0.5±0.6"], ["0.5±0.1"]]
    result, new = filled(path, rows, with_errors=True)
    assert [new.get(f"{column}2") is None for column in "DEFG"] == [True, False, False, False]
    (plan,) = result.plans
    assert plan.left == [("D2", "an error that reaches to the beginning", "")]
    horizon = float(epochconv.convert(1e10, "redshift", "comoving distance").magnitude)
    assert new["F2"] == pytest.approx(horizon - float(str(new["C2"])), rel=1e-9)


def test_limits_and_rows_without_an_error_have_none(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]"], ["2.0±0.1"], [1.0], [">6"], ["n/a"]]
    _, new = filled(path, rows, with_errors=True)
    assert new.keys() == {"B2", "B3", "B4", "C1", "C2", "D1", "D2"}


def test_in_a_table_the_names_of_new_columns_are_unique(path: Path) -> None:
    def dress(_book: Workbook, sheet: Worksheet) -> None:
        headers = [{"header": one} for one in ("z", "e_z", "Age [Gyr]")]
        sheet.add_table(0, 0, 2, 2, {"columns": headers, "name": "Objects"})

    write_log(path, [["z", "e_z", "Age [Gyr]"], [2.0, 0.1], [1.0, 0.1]], dress)
    result = fill(path, with_errors=True, add=["D_C [Mpc]"], now=NOW)
    (plan,) = result.plans
    assert plan.grown is not None
    assert plan.grown[1] == [
        "D_C [Mpc]",
        "upper error of D_C [Mpc]",
        "lower error of D_C [Mpc]",
        "upper error of Age [Gyr]",
        "lower error of Age [Gyr]",
    ]
    assert not new_problems(dated_copies(path)[0], path)
    assert fill(path, with_errors=True, add=["D_C [Mpc]"]).written is False


def test_where_units_have_a_row_errors_do_too(path: Path) -> None:
    rows: Grid = [["z", "Age"], ["---", "Gyr"], ["2.0±0.1"]]
    _, new = filled(path, rows, with_errors=True)
    assert [new[cell] for cell in ("C1", "C2", "D1", "D2")] == [
        *("upper error of Age", "Gyr"),
        *("lower error of Age", "Gyr"),
    ]
    assert fill(path, with_errors=True).written is False


def test_columns_of_one_name_in_two_units_keep_their_errors_apart(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "Age [Myr]"], ["2.0±0.1"]]
    _, new = filled(path, rows, with_errors=True)
    assert [new[f"{column}1"] for column in "DEFG"] == [
        "upper error of Age [Gyr]",
        "lower error of Age [Gyr]",
        "upper error of Age [Myr]",
        "lower error of Age [Myr]",
    ]
    assert fill(path, with_errors=True).written is False


def test_errors_of_a_column_that_is_complete_are_filled_where_it_agrees(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "e_Age"], ["2.0±0.1", 3.27], ["1.0±0.1", 5.84]]
    result, new = filled(path, rows)
    assert new.keys() == {"C2", "C3"}
    rows = [["z", "Age [Gyr]", "e_Age"], ["2.0±0.1", 3.27], ["1.0±0.1", 7.77]]
    result, new = filled(path, rows)
    assert (new, result.written) == ({}, False)


def test_an_error_column_that_holds_others_is_left_alone(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "e_Age"], ["2.0±0.1", None, 0.5], ["1.0±0.1"]]
    result, new = filled(path, rows)
    assert new.keys() == {"B2", "B3"}
    assert notes(result) == [
        "column C is left alone, since its errors are others: C2 holds 0.5 where"
        f" {max(sides('age', 1.9, 2.0, 2.1)):.6g} belongs"
    ]
    rows = [["z", "Age [Gyr]", "e_Age"], ["2.0±0.1", None, 0.17], ["1.0±0.1"]]
    assert filled(path, rows)[1].keys() == {"B2", "B3", "C3"}


def test_why_no_errors_are_written_is_said(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "e_Age"], [2.0]]
    result, new = filled(path, rows, with_errors=True)
    assert new.keys() == {"B2"}
    assert notes(result) == [
        "column C stays blank, since column A gives no errors",
        "column A gives no errors to carry",
    ]
    result, new = filled(path, [["z", "e_z", "Age [Gyr]"], [2.0, 0.1]])
    assert new.keys() == {"C2"}
    assert notes(result) == [
        "the errors of column A went nowhere, as no column holds errors; --with-errors appends some"
    ]


def test_the_parameter_sets_own_error_is_added_and_named(path: Path) -> None:
    # Planck 2018 VI, table 2: the age of the universe has an error of 0.023 Gyr
    rows: Grid = [["z", "Age [Gyr]", "E_Age", "e_Age"], ["0.0±0.0"]]
    result, new = filled(path, rows, parameter_error=True)
    assert new["C2"] == pytest.approx(0.024, abs=0.001)
    assert new["D2"] == pytest.approx(new["C2"], rel=1e-12)
    (note,) = [one for one in notes(result) if "counted" in one]
    assert note.startswith("errors of planck 2018 counted: H0 ± 0.54; Ω_m ± 0.0073; correlation -0")
    assert note in text_report(result)


def test_it_adds_in_quadrature_to_the_errors_of_the_source(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]", "E_Age"], ["2.0±0.1"], ["2.0±0.0"]]
    _, new = filled(path, rows, parameter_error=True)
    alone = float(str(new["C3"]))
    upper = sides("age", 1.9, 2.0, 2.1)[1]
    assert new["C2"] == pytest.approx((alone**2 + upper**2) ** 0.5, rel=1e-9)


def test_without_any_error_what_is_asked_for_counts_alone(path: Path) -> None:
    rows: Grid = [["z", "Age [Gyr]"], [2.0], [">6"], [None]]
    result, new = filled(path, rows, parameter_error=True, with_errors=True)
    assert new.keys() == {"B2", "B3", "C1", "C2", "D1", "D2"}
    assert notes(result)[0] == "column A gives no errors; those written count only what follows"
    rows = [["z", "Age [Gyr]"], [2.0], ["1.0±0.1"]]  # here the first is not known
    assert filled(path, rows, parameter_error=True, with_errors=True)[1].keys() == {
        *("B2", "B3", "C1", "C3", "D1", "D3")
    }


def test_a_peculiar_velocity_is_added_and_named(path: Path) -> None:
    rows: Grid = [["z", "T_CMB [K]"], ["0.01±0.0"], ["0.01±0.001"]]
    result, new = filled(path, rows, with_errors=True, peculiar_velocity=300.0)
    blur = 1.01 * 300.0 / 299792.458
    assert new["C2"] == pytest.approx(2.7255 * blur, rel=1e-9)
    assert new["C3"] == pytest.approx(2.7255 * (blur**2 + 0.001**2) ** 0.5, rel=1e-9)
    assert "errors count peculiar motions of 300 km/s" in notes(result)


def test_what_is_asked_for_without_a_place_is_said(path: Path) -> None:
    result, new = filled(path, [["z", "Age [Gyr]"], [2.0]], parameter_error=True)
    assert new.keys() == {"B2"}
    assert notes(result) == [
        "what was asked to count in errors went nowhere, as no column holds errors; --with-errors"
        " appends some"
    ]


@pytest.mark.parametrize(
    ("choices", "words"),
    [
        ({"parameter_error": True, "parameters": "round numbers"}, "'round numbers' has no publ"),
        ({"peculiar_velocity": 300.0, "source": "Age [Gyr]"}, "a peculiar velocity blurs a redsh"),
        ({"peculiar_velocity": -1.0}, "is no speed from 0 to 30,000 km/s"),
        ({"peculiar_velocity": float("nan")}, "is no speed from 0 to 30,000 km/s"),
    ],
)
def test_terms_that_cannot_be_counted_are_refused(
    path: Path, choices: dict[str, object], words: str
) -> None:
    rows: Grid = [["z", "Age [Gyr]", "a []"], ["2.0±0.1", "3.27±0.1"]]
    write_log(path, rows)
    before = path.read_bytes()
    with pytest.raises(epochconv.ArgumentError, match=words):
        fill(path, **{"source": "z", **choices})  # type: ignore[arg-type]  # per test
    assert path.read_bytes() == before


@pytest.mark.parametrize(
    ("rows", "source"),
    [
        ([["z", "Age [Gyr]", "e_Age"], ["2.0±0.1", 3.27], ["1.0±0.1", 5.84]], "A"),
        ([["Age [Gyr]", "z", "e_Age"], [3.27, "2.0±0.1"], [5.84, "1.0±0.1"]], "B"),
    ],
)
def test_the_column_with_errors_is_the_source_where_only_errors_wait(
    path: Path, rows: Grid, source: str
) -> None:
    result, new = filled(path, rows)
    assert new.keys() == {"C2", "C3"}
    assert result.plans[0].columns[0].source_column == ord(source) - 64


COMPLETE: Grid = [["Age [Gyr]", "z", "D_C [Mpc]"], ["3.27±0.1", "2.0±0.1", 5313.0]]


def test_two_columns_that_could_give_errors_are_not_guessed_between(path: Path) -> None:
    write_log(path, COMPLETE)
    with pytest.raises(epochconv.EpochconvError, match=r"2 columns to convert from: 'Age \[Gyr\]'"):
        fill(path, with_errors=True)
    _, new = filled(path, COMPLETE, with_errors=True, source="z")
    assert (new["D1"], new["E1"]) == ("upper error of D_C [Mpc]", "lower error of D_C [Mpc]")
    assert "F1" not in new  # ages state their errors in their cells


def test_terms_alone_could_start_from_any_column(path: Path) -> None:
    write_log(path, [["Age [Gyr]", "z"], [3.27, 2.0]])
    with pytest.raises(epochconv.EpochconvError, match="2 columns to convert from"):
        fill(path, with_errors=True, parameter_error=True)
    assert fill(path, with_errors=True).written is False
