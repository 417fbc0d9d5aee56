"""Limits go through a fill and come out as limits, written as the log writes them."""

from __future__ import annotations

from pathlib import Path

import pytest

import epochconv
from tests.workbook_tools.small_logs import NOW, Grid, cells, new_cells, write_log
from workbook_tools import FillResult, fill
from workbook_tools.report import text_report


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "log.xlsx"


def filled(path: Path, rows: Grid, **choices: object) -> tuple[FillResult, dict[str, object]]:
    before = cells(write_log(path, rows))
    result = fill(path, now=NOW, **choices)  # type: ignore[arg-type]  # per test
    return result, new_cells(before, path)


def split(text: object) -> tuple[str, float]:
    """Sign and number of a limit that was written as text."""
    assert isinstance(text, str)
    return text[0], float(text[1:])


def shown(exact: float, digits: int) -> float:
    """A number to as many digits, or to its units where it has more before the point."""
    return float(round(exact)) if exact >= 10.0**digits else float(f"{exact:.{digits}g}")


@pytest.mark.parametrize(
    ("heading", "measure", "unit", "sign"),
    [
        ("Age [Gyr]", "age", "gigayear", "<"),
        ("Lookback time [Gyr]", "lookback time", "gigayear", ">"),
        ("scale factor", "scale factor", "dimensionless", "<"),
        ("D_C [Mpc]", "comoving distance", "megaparsec", ">"),
        ("D_L [Mpc]", "luminosity distance", "megaparsec", ">"),
        ("T_CMB [K]", "CMB temperature", "kelvin", ">"),
        ("H(z) [km/s/Mpc]", "Hubble rate", "kilometer/second/megaparsec", ">"),
        ("µ [mag]", "distance modulus", "dimensionless", ">"),
    ],
)
def test_text_stays_text_and_the_sign_turns_where_the_map_falls(
    path: Path, heading: str, measure: str, unit: str, sign: str
) -> None:
    result, new = filled(path, [["z", heading], [">6"], ["<0.5"], ["≥ 1.23456"]])
    other = {"<": ">", ">": "<"}[sign]
    beside = {"<": "≤", ">": "≥"}[sign]
    for cell, z, expected, digits in (
        ("B2", 6.0, sign, 3),
        ("B3", 0.5, other, 3),
        ("B4", 1.23456, beside, 5),
    ):
        exact = epochconv.convert(z, "redshift", measure).m_as(unit)
        assert split(new[cell]) == (expected, shown(exact, digits))
    assert result.plans[0].columns[0].limits == 3
    assert "3 cells filled from A 'z', 3 of them limits" in text_report(result)


def test_limits_in_a_falling_measure_come_back(path: Path) -> None:
    _, new = filled(path, [["Age [Gyr]", "z", "Lookback time [Gyr]"], ["<0.93 Gyr"], ["> 5"]])
    assert split(new["B2"])[0] == ">"
    assert split(new["B2"])[1] == pytest.approx(
        epochconv.convert("0.93 Gyr", "age", "redshift").magnitude, rel=5e-3
    )
    assert [split(new[cell])[0] for cell in ("C2", "B3", "C3")] == [">", "<", "<"]


def test_what_we_wrote_reads_back_as_a_limit(path: Path) -> None:
    filled(path, [["z", "Age [Gyr]"], [">6"], [1.0]])
    before = path.read_bytes()
    assert fill(path).written is False
    assert path.read_bytes() == before
    again = fill(path, source="Age [Gyr]", add=["a []"], output=path.with_name("out.xlsx"))
    assert cells(again.path)["C2"] == "<0.143"  # 1/7, whatever the digits of the age


def test_a_column_of_limits_alone_can_be_a_source(path: Path) -> None:
    _, new = filled(path, [["z", "a []"], [">6"], ["<0.25"]])
    assert new == {"B2": "<0.143", "B3": ">0.8"}


FLAGGED: Grid = [["z", "l_z", "Age [Gyr]", "l_Age"], [6.0, ">"], [1.0], [0.1, "<"]]


def test_a_log_with_flags_gets_number_and_flag(path: Path) -> None:
    result, new = filled(path, FLAGGED)
    ages = epochconv.convert([6.0, 1.0, 0.1], "redshift", "age").m_as("gigayear")
    assert [new[f"C{row}"] for row in (2, 3, 4)] == pytest.approx(list(ages), rel=1e-13)
    assert {cell: sign for cell, sign in new.items() if cell[0] == "D"} == {"D2": "<", "D4": ">"}
    assert [one.holds for one in result.plans[0].columns] == ["values", "limit signs"]
    assert fill(path).written is False


def test_a_limit_never_becomes_a_plain_number(path: Path) -> None:
    rows = [[*row[:3]] for row in FLAGGED]
    result, new = filled(path, rows)
    assert new.keys() == {"C3"}
    reason = "a limit, whose sign needs a column headed 'limit flag of Age'"
    assert result.plans[0].left == [("C2", reason, ""), ("C4", reason, "")]


def test_the_heading_that_the_reason_names_settles_it(path: Path) -> None:
    rows = [[*row[:3]] for row in FLAGGED]
    rows[0].append("limit flag of Age")
    result, new = filled(path, rows)
    assert result.left == []
    assert (new["D2"], new["D4"]) == ("<", ">")


def test_a_new_column_brings_its_flags(path: Path) -> None:
    rows = [row[:2] for row in FLAGGED]
    result, new = filled(path, rows, add=["Age [Gyr]", "D_C [Mpc]"])
    assert [new[f"{column}1"] for column in "CDEF"] == [
        "Age [Gyr]",
        "limit flag of Age",
        "D_C [Mpc]",
        "limit flag of D_C",
    ]
    assert [new.get(f"D{row}") for row in (2, 3, 4)] == ["<", None, ">"]
    assert [new.get(f"F{row}") for row in (2, 3, 4)] == [">", None, "<"]
    assert result.left == []
    assert fill(path, add=["Age [Gyr]", "D_C [Mpc]"]).written is False


def test_without_a_limit_no_flags_are_added(path: Path) -> None:
    rows: Grid = [["z", "l_z"], [6.0], [1.0]]
    _, new = filled(path, rows, add=["Age [Gyr]"])
    assert "D1" not in new


def test_a_text_limit_beside_flags_becomes_number_and_flag(path: Path) -> None:
    _, new = filled(path, [["z", "l_z", "a []", "l_a"], [">6"], [1.0]])
    assert (new["C2"], new["D2"]) == (pytest.approx(1 / 7, rel=1e-14), "<")


def test_beyond_its_turning_point_a_measure_takes_a_limit(path: Path) -> None:
    # D_A is largest at a redshift of 1.6; what is farther is nearer to it, and so on.
    result, new = filled(path, [["z", "D_A [Mpc]"], [">6"], ["<0.5"], ["<6"], [">0.5"], [1.0]])
    expected = epochconv.convert([6.0, 0.5], "redshift", "angular diameter distance")
    far, near = expected.m_as("megaparsec")
    assert (split(new["B2"]), split(new["B3"])) == (("<", shown(far, 3)), ("<", shown(near, 3)))
    reason = "a limit beyond which angular diameter distance turns over, so it stands for none"
    assert result.plans[0].left == [("B4", reason, ""), ("B5", reason, "")]


@pytest.mark.parametrize("side", ["nearer", "farther"])
def test_a_limit_on_a_measure_that_turns_over_is_none(path: Path, side: str) -> None:
    result, new = filled(path, [["D_A [Mpc]", "z"], ["<1000"], [1000.0]], side=side)
    assert new.keys() == {"B3"}
    ((cell, reason, _),) = result.plans[0].left
    assert (cell, reason) == (
        "B2",
        "a limit on angular diameter distance, which turns over, so it stands for no other limit",
    )


def test_a_limit_outside_the_range_is_left(path: Path) -> None:
    result, new = filled(path, [["Lookback time [Gyr]", "z"], ["<14"], [">13"]])
    assert new.keys() == {"B3"}
    assert result.plans[0].left == [
        (
            "A2",
            "lookback time is older than the universe (13.7958 Gyr under planck 2018)",
            "<14",
        )
    ]


def test_a_limit_at_which_a_measure_does_not_exist_is_left(path: Path) -> None:
    result, new = filled(path, [["z", "µ [mag]", "D_C [Mpc]"], [">0"], [1.0]])
    assert new["C2"] == ">0"
    assert ("B2", "distance modulus does not exist at redshift 0", "") in result.plans[0].left


def test_flags_of_columns_of_one_name_tell_their_units(path: Path) -> None:
    rows: Grid = [["z", "l_z", "Age [Gyr]", "limit flag of Age [Gyr]"], [6.0, ">"], [1.0]]
    result, new = filled(path, rows, add=["Age [Myr]"])
    assert (new["D2"], new["E1"], new["F1"], new["F2"]) == (
        *("<", "Age [Myr]"),
        *("limit flag of Age [Myr]", "<"),
    )
    assert result.left == []
    assert fill(path, add=["Age [Myr]"]).written is False
