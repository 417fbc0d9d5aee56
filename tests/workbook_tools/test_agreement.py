"""Filled cells of a partly filled column must be what the chosen parameters give.

The ages are what `epochconv.convert` gives for redshift 1, 2 and 3, rounded by hand; it is tested
elsewhere.
"""

from __future__ import annotations

import re

import pytest

import epochconv
from epochconv.published import ParameterSet, history_of, parameter_sets
from tests.workbook_tools.small_sheets import grid, reading_of
from workbook_tools.agreement import Agreement, disagreement
from workbook_tools.answers import Moments
from workbook_tools.value_columns import read_values

REDSHIFTS = [1.0, 2.0, 3.0, 4.0]


def check(
    ages: list[float | str | None],
    parameters: str = "planck 2018",
    code: str = "General",
    heading: str = "Age [Gyr]",
) -> str:
    """Check a column of ages beside these redshifts, both from row 2 on; "" where they agree."""
    rows = [["z", heading], *([z, age] for z, age in zip(REDSHIFTS, ages, strict=False))]
    reading = reading_of(grid(*rows))
    moments = Moments(read_values(reading, 1, reading.headings[1]), history_of(parameters), None)
    (target,) = reading.columns([2])
    own = reading.headings[2]
    found = Agreement(moments.answers(own).values, target, own, lambda style: code)
    return disagreement(moments, found, own, lambda p: reading.where(p, 2)) if found.wrong else ""


def rounded(parameters: str, decimals: int) -> list[float | str | None]:
    ages = epochconv.convert(REDSHIFTS, "redshift", "age", history=parameters)
    return [round(float(age), decimals) for age in ages.m_as("gigayear")]


@pytest.mark.parametrize("decimals", [0, 1, 2, 4, 8])
@pytest.mark.parametrize("one", parameter_sets(), ids=lambda one: one.name)
def test_cells_rounded_from_the_chosen_set_agree(one: ParameterSet, decimals: int) -> None:
    assert check(rounded(one.name, decimals), one.name) == ""


def test_cells_at_the_fifteen_digits_that_are_kept_agree() -> None:
    exact = epochconv.convert(REDSHIFTS, "redshift", "age").m_as("gigayear")
    assert check([float(f"{age:.15g}") for age in exact]) == ""


def test_what_is_no_number_is_not_compared() -> None:
    assert check([None, "tbc", 2.14]) == ""


def test_the_last_digit_that_is_shown_decides() -> None:
    for right in ([5.84, 3.27], [5.8, 3.3], [5.8423, 3.2701], ["5.84", "3.3"]):
        assert check(right) == ""
    for wrong in ([5.85], [5.9], [5.8424], ["5.85"]):
        assert "does not agree with planck 2018" in check(wrong)
    assert check([5.8449], code="0.00") == ""  # shows 5.84
    assert check([5.8449], code="0.000")


def test_cells_that_disagree_are_named_with_what_belongs_there() -> None:
    text = check([5.84, 3.1, 2.2, 1.4])
    assert text.startswith(
        "column 'Age [Gyr]' does not agree with planck 2018: B3 holds 3.1 where 3.27014 belongs;"
        " B4 holds 2.2 where 2.13908 belongs; B5 holds 1.4 where "
    )
    assert " more" not in text
    assert text.endswith("correct these cells, or name the columns to fill with --only")


def test_only_the_first_three_are_named() -> None:
    text = check([9.0, 9.0, 9.0, 9.0])
    assert re.search(r"B2 .*; B3 .*; B4 .* and 1 more; nothing was filled", text)


@pytest.mark.parametrize(
    "name", ["wmap 2013", "distance ladder 2022", "round numbers", "evolving dark energy 2025"]
)
def test_the_set_that_fits_is_suggested(name: str) -> None:
    text = check(rounded(name, 4))
    assert text.endswith(f"nothing was filled; it agrees with --parameters '{name}'")


def test_cells_where_nothing_can_be_computed_are_not_compared() -> None:
    reading = reading_of(grid(["z", "µ [mag]"], [0.0, 99.0], [-0.5, 99.0], [1.0, 44.2]))
    moments = Moments(read_values(reading, 1, reading.headings[1]), history_of(None), None)
    (target,) = reading.columns([2])
    own = reading.headings[2]
    found = Agreement(moments.answers(own).values, target, own, lambda style: "General")
    assert found.wrong == []


def test_cells_with_a_unit_of_their_own_are_compared_in_the_column_s() -> None:
    assert check(["5842 Myr", "3.27 Gyr"]) == ""
    assert "B2 holds 5.85 where 5.8423 belongs" in check(["5850 Myr"])


def test_limits_and_other_dimensions_are_not_compared() -> None:
    assert check(["<5.9", "3 Mpc", ">1"]) == ""


def test_a_unit_without_the_h_of_the_column_is_not_compared() -> None:
    assert check(["5 Mpc"], heading="D_C [h^-1 Mpc]") == ""
    assert check([5.0], heading="D_C [h^-1 Mpc]")
