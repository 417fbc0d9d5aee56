"""A column of values with its companions: errors, limit flags, units, codes for missing values."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import pytest

from tests.workbook_tools.small_sheets import PERCENT_STYLE, Value, cell, grid, reading_of, row
from workbook_tools.column_meanings import Role
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.value_columns import ValueColumn, read_values

NAN = float("nan")


def values_of(reading: SheetReading, column: int = 1) -> ValueColumn:
    return read_values(reading, column, reading.headings[column])


def log(*rows: Sequence[Value], **how: object) -> ValueColumn:
    """Column A of a log with headings in row 1."""
    return values_of(reading_of(grid(*rows), **how))


def errors(found: ValueColumn) -> list[tuple[float, float]]:
    return list(zip(found.lower.tolist(), found.upper.tolist(), strict=True))


def same(found: list[tuple[float, float]], expected: list[tuple[float, float]]) -> bool:
    return np.allclose(found, expected, rtol=1e-14, atol=0.0, equal_nan=True)


@pytest.mark.parametrize(
    "header", ["e_z", "z_err", "σ_z", "± z", "error of z", "z error", "dz_err"]
)
def test_an_error_column_beside_the_values(header: str) -> None:
    reading = reading_of(grid(["z", header], [1.0, 0.1], [2.0, None], [None, 0.3]))
    if header == "dz_err":  # an error of something else
        assert reading.companion(1, Role.ERROR) is None
        return
    assert reading.companion(1, Role.ERROR) == 2
    assert same(errors(values_of(reading)), [(0.1, 0.1), (NAN, NAN), (NAN, NAN)])


@pytest.mark.parametrize(
    ("headers", "order"),
    [
        (("E_z", "e_z"), (1, 0)),
        (("e_z", "E_z"), (0, 1)),
        (("z_err_up", "z_err_low"), (1, 0)),
        (("+", "-"), (1, 0)),
        (("+", "−"), (1, 0)),
        (("upper error of z", "lower error of z"), (1, 0)),
    ],
)
def test_upper_and_lower_errors(headers: tuple[str, str], order: tuple[int, int]) -> None:
    found = log(["z", *headers], [1.0, 0.1, 0.2])
    sizes = (0.1, 0.2)
    assert same(errors(found), [(sizes[order[0]], sizes[order[1]])])


def test_a_lower_error_may_be_written_with_its_sign() -> None:
    found = log(["z", "E_z", "e_z"], [1.0, 0.1, -0.2], [1.0, -0.1, -0.2])
    assert same(errors(found), [(0.2, 0.1), (NAN, NAN)])
    assert found.remarks["an error beside it that is negative, and is not used"] == [1]
    assert found.remarks["an error on one side only, which is not used"] == [1]


def test_a_code_for_a_missing_value_is_no_error() -> None:
    found = log(["z", "E_z", "e_z"], [1.0, -99.0, -99.0], [2.0, -99.0, -99.0], [3.0, 0.1, 0.1])
    assert same(errors(found), [(NAN, NAN), (NAN, NAN), (0.1, 0.1)])
    assert found.remarks["an error beside it that is negative, and is not used"] == [0, 1]
    assert sum("--missing=-99" in note for note in found.notes) == 2
    declared = log(["z", "E_z", "e_z"], [1.0, -99.0, -99.0], missing=frozenset({-99.0}))
    assert (declared.notes, declared.remarks) == ([], {})


@pytest.mark.parametrize(
    ("error", "remark"),
    [
        ("tbc", "an error beside it that is not read, and is not used"),
        ("0,1", "an error beside it that is not read, and is not used"),
        ("3 Mpc", "an error beside it that is not read, and is not used"),
        ("<0.1", "an error beside it that is a limit, and is not used"),
        ("5%", "an error beside it in percent, which may be relative, and is not used"),
        (-0.1, "an error beside it that is negative, and is not used"),
    ],
)
def test_an_error_that_is_none_is_said(error: Value, remark: str) -> None:
    found = log(["Age [Gyr]", "e_Age"], [1.0, error], [2.0, 0.1], ["n/a", error])
    assert same(errors(found), [(NAN, NAN), (0.1, 0.1), (NAN, NAN)])
    assert found.remarks == {remark: [0]}
    assert found.values[0] == 1.0


def test_errors_in_a_percent_format_are_not_used() -> None:
    rows = (
        row(1, "z", "e_z") + f'<row r="2">{cell("A2", 1.0)}{cell("B2", 0.05, PERCENT_STYLE)}</row>'
    )
    found = values_of(reading_of(rows))
    assert same(errors(found), [(NAN, NAN)])
    assert len(found.remarks) == 1


@pytest.mark.parametrize(
    ("header", "error", "size"),
    [
        ("e_Age [Gyr]", 0.1, 0.1),
        ("e_Age", 0.1, 0.1),
        ("e_Age [Myr]", 100.0, 0.1),
        ("e_Age [Myr]", "0.1 Gyr", 0.1),
        ("e_Age", "100 Myr", 0.1),
    ],
)
def test_errors_have_a_unit_of_their_own(header: str, error: Value, size: float) -> None:
    found = log(["Age [Gyr]", header], [1.0, error])
    assert found.lower.tolist() == pytest.approx([size], rel=1e-14)
    assert found.upper.tolist() == pytest.approx([size], rel=1e-14)


def test_a_value_s_own_error_counts_before_the_column() -> None:
    found = log(["z", "e_z"], ["1.00(2)", 0.5], ["2.0 +0.3/-0.1", 0.5], [3.0, 0.5])
    assert same(errors(found), [(0.02, 0.02), (0.1, 0.3), (0.5, 0.5)])


@pytest.mark.parametrize("header", ["l_z", "limit flag of z", "z limit flag"])
def test_flags_turn_numbers_into_limits(header: str) -> None:
    found = log(["z", header], [6.0, ">"], [0.1, "<="], [1.0, None], [2.0, "="], [3.0, "-"])
    assert found.flagged
    assert found.limits == {0: ">", 1: "≤"}
    assert (found.reasons, found.remarks) == ({}, {"a limit": [0, 1]})
    assert found.values.tolist() == [6.0, 0.1, 1.0, 2.0, 3.0]


def test_a_limit_has_no_error() -> None:
    found = log(["z", "l_z", "e_z"], [6.0, ">", 0.1], [1.0, None, 0.1])
    assert same(errors(found), [(NAN, NAN), (0.1, 0.1)])


@pytest.mark.parametrize("flag", ["u", 1.0, "upper", "3σ", "?", "TBD"])
def test_a_flag_that_is_not_known_leaves_its_value(flag: Value) -> None:
    found = log(["z", "l_z"], [6.0, flag], [None, flag], [2.0, None])
    (reason,) = found.reasons.values()
    assert reason.startswith("a limit flag that is not known here: ")
    assert reason.endswith("(B)")
    assert np.isnan(found.values[0])
    assert found.values[2] == 2.0


def test_an_approximate_value_is_flagged_so() -> None:
    found = log(["z", "l_z"], [6.0, "~"])
    assert (found.limits, found.remarks) == ({}, {"marked as approximate": [0]})


def test_sign_and_flag_may_not_contradict() -> None:
    found = log(["z", "l_z"], [">6", ">"], [">6", "<"], ["<0.1", None])
    assert found.limits == {0: ">", 2: "<"}
    assert found.reasons == {1: "a limit (>) whose flag says < (B)"}


def test_units_in_cells_are_brought_to_the_heading_s() -> None:
    found = log(
        ["Lookback time [Gyr]"],
        ["13.2 Gyr"],
        ["500 ± 20 Myr"],
        ["<900 Myr"],
        ["450 Mpc"],
        [1.0],
    )
    assert found.values.tolist()[:3] == pytest.approx([13.2, 0.5, 0.9], rel=1e-14)
    assert (found.lower[1], found.upper[1]) == pytest.approx((0.02, 0.02), rel=1e-14)
    assert found.limits == {2: "<"}
    assert found.remarks == {
        "a unit in the cell that differs from the heading's, converted": [1, 2],
        "a limit": [2],
    }
    assert found.reasons == {3: "a length (Mpc) where the heading asks for a time"}


def test_a_unit_without_the_h_of_the_heading_is_not_guessed_at() -> None:
    found = log(["D_C [h^-1 Mpc]"], [450.0], ["450 Mpc"])
    assert found.values[0] == 450.0
    assert found.reasons[1].startswith("a unit in the cell (Mpc) without the h of the heading")


def test_codes_for_missing_values_are_suspected_and_never_dropped() -> None:
    found = log(["D_L [Mpc]"], [99.0], [99.0], [-1.0], [9999.0], [5.0])
    assert found.values.tolist() == [99.0, 99.0, -1.0, 9999.0, 5.0]
    assert [note.partition(" and ")[0] for note in found.notes] == [
        "-1 stands in column A",
        "99 stands 2 times in column A",
    ]


def test_a_code_that_is_declared_is_a_word_for_no_value() -> None:
    found = log(["z"], [-99.0], ["-99.0"], [99.99], [0.5], missing=frozenset({-99.0, 99.99}))
    assert np.isnan(found.values).tolist() == [True, True, True, False]
    assert (found.notes, found.reasons) == ([], {})


def test_a_unit_that_is_stated_row_by_row_makes_the_values_unclear() -> None:
    reading = reading_of(grid(["Period", "Age [Gyr]", "x_Age"], ["a", 1.0, "y"]))
    assert 2 not in reading.headings
    assert reading.meanings[2].role is Role.UNCLEAR
    assert "row by row" in reading.meanings[2].reason


def test_what_is_passed_over_is_neither_value_nor_left() -> None:
    rows = grid(["Object", "z"], ["a", 1.0], ["Object", "z"], ["b", 2.0], ["Mean", 1.5])
    found = values_of(reading_of(rows), 2)
    assert found.passed_over == {1: "repeated headings", 3: "a line of totals"}
    assert (found.reasons, found.remarks) == ({}, {})
    assert np.isnan(found.values).tolist() == [False, True, False, True]


@pytest.mark.parametrize("number", [36000.0, 46024.0, 48000.0])
def test_a_redshift_that_may_be_a_date_is_doubted(number: float) -> None:
    assert log(["z"], [number], [number + 0.5]).remarks == {
        "a whole number that may be a date without its format": [0]
    }
    assert log(["D_L [Mpc]"], [number]).remarks == {}


def test_the_order_of_a_column_without_values() -> None:
    found = log(["z", "e_z", "l_z"], [None, 0.1, ">"], ["tbc", 0.1, "<"])
    assert np.isnan(found.values).all()
    assert (found.limits, found.has_errors) == ({}, False)
    assert list(found.reasons) == [1]


def test_a_row_that_is_passed_over_is_not_left_for_its_unit_too() -> None:
    rows = grid(["Object", "z"], ["a", 1.0], ["Mean", "3 Mpc"])
    found = values_of(reading_of(rows), 2)
    assert (found.passed_over, found.reasons) == ({1: "a line of totals"}, {})
