"""Filled cells of a partly filled column must be what the chosen parameters give.

The ages are what `epochconv.convert` gives for redshift 1, 2 and 3, rounded by hand; it is tested
elsewhere.
"""

from __future__ import annotations

import numpy as np
import pytest

import epochconv
from epochconv.published import ParameterSet, history_of, parameter_sets
from epochconv.registry import measure_named
from epochconv.units import unit_named
from tests.workbook_tools.small_sheets import grid, reading_of
from workbook_tools.agreement import refuse_disagreement
from workbook_tools.answers import Moments
from workbook_tools.errors import Refusal

REDSHIFTS = [1.0, 2.0, 3.0, 4.0]


def check(
    ages: list[float | str | None],
    parameters: str = "planck 2018",
    code: str = "General",
    heading: str = "Age [Gyr]",
) -> None:
    """Check a column of ages beside these redshifts, both from row 2 on.

    Raises:
        Refusal: they do not agree.
    """
    rows = [["z", heading], *([z, age] for z, age in zip(REDSHIFTS, ages, strict=False))]
    reading = reading_of(grid(*rows))
    source, target = reading.columns([1, 2])
    moments = Moments(
        np.array(source.numbers),
        measure_named("redshift"),
        unit_named(""),
        history_of(parameters),
        None,
    )
    refuse_disagreement(
        moments, target, reading.headings[2], lambda style: code, lambda p: reading.where(p, 2)
    )


def rounded(parameters: str, decimals: int) -> list[float | str | None]:
    ages = epochconv.convert(REDSHIFTS, "redshift", "age", history=parameters)
    return [round(float(age), decimals) for age in ages.m_as("gigayear")]


@pytest.mark.parametrize("decimals", [0, 1, 2, 4, 8])
@pytest.mark.parametrize("one", parameter_sets(), ids=lambda one: one.name)
def test_cells_rounded_from_the_chosen_set_agree(one: ParameterSet, decimals: int) -> None:
    check(rounded(one.name, decimals), one.name)


def test_cells_at_the_fifteen_digits_that_are_kept_agree() -> None:
    exact = epochconv.convert(REDSHIFTS, "redshift", "age").m_as("gigayear")
    check([float(f"{age:.15g}") for age in exact])


def test_what_is_no_number_is_not_compared() -> None:
    check([None, "tbc", 2.14])


def test_the_last_digit_that_is_shown_decides() -> None:
    check([5.84, 3.27])
    check([5.8, 3.3])
    check([5.8423, 3.2701])
    for wrong in ([5.85], [5.9], [5.8424]):
        with pytest.raises(Refusal, match="does not agree with planck 2018"):
            check(wrong)
    check([5.8449], code="0.00")  # shows 5.84
    with pytest.raises(Refusal):
        check([5.8449], code="0.000")


def test_cells_that_disagree_are_named_with_what_belongs_there() -> None:
    with pytest.raises(Refusal) as caught:
        check([5.84, 3.1, 2.2, 1.4])
    text = str(caught.value)
    assert text.startswith(
        "column 'Age [Gyr]' does not agree with planck 2018: B3 holds 3.1 where 3.27014 belongs;"
        " B4 holds 2.2 where 2.13908 belongs; B5 holds 1.4 where "
    )
    assert " more" not in text
    assert text.endswith("nothing was filled; correct these cells, or fill another column")


def test_only_the_first_three_are_named() -> None:
    with pytest.raises(Refusal, match=r"B2 .*; B3 .*; B4 .* and 1 more; nothing was filled"):
        check([9.0, 9.0, 9.0, 9.0])


@pytest.mark.parametrize(
    "name", ["wmap 2013", "distance ladder 2022", "round numbers", "evolving dark energy 2025"]
)
def test_the_set_that_fits_is_suggested(name: str) -> None:
    with pytest.raises(Refusal, match=f"nothing was filled; it agrees with --parameters '{name}'"):
        check(rounded(name, 4))


def test_cells_where_nothing_can_be_computed_are_not_compared() -> None:
    reading = reading_of(grid(["z", "µ [mag]"], [0.0, 99.0], [-1.0, 99.0], [1.0, 44.2]))
    source, target = reading.columns([1, 2])
    numbers = np.array(source.numbers)
    redshift, none = measure_named("redshift"), unit_named("")
    moments = Moments(numbers, redshift, none, history_of(None), None)
    where = {2: "B4"}.__getitem__
    refuse_disagreement(moments, target, reading.headings[2], lambda style: "General", where)
