"""Converting a column: the core's numbers in the column's unit, and a reason for each that fails.

The core itself is tested elsewhere against publications and quadrature; here the two ways to it
must agree, and the reasons must read well.
"""

from __future__ import annotations

from array import array
from typing import Any

import numpy as np
import pytest

import epochconv
from epochconv.published import history_of
from epochconv.registry import measure_named
from epochconv.units import unit_named
from workbook_tools.answers import FloatArray, Moments
from workbook_tools.column_meanings import Heading
from workbook_tools.typed_cells import NUMBER, ColumnCells
from workbook_tools.value_columns import ValueColumn

DEFAULT = history_of(None)
NAN = float("nan")


def heading(measure: str, unit: str = "", h_power: int = 0) -> Heading:
    return Heading(measure_named(measure), unit_named(unit), measure, h_power, name=measure)


def source(numbers: list[float], measure: str, unit: str = "", **more: Any) -> ValueColumn:
    """A column B of values; `more` are errors (lower, upper), limits and the like."""
    count = len(numbers)
    cells = ColumnCells(
        2, range(count), bytearray([NUMBER] * count), array("d", numbers), array("q", [0] * count)
    )
    nothing = [NAN] * count
    lower, upper = (np.array(more.pop(side, nothing), float) for side in ("lower", "upper"))
    limits = more.pop("limits", {})
    return ValueColumn(
        heading(measure, unit), cells, np.array(numbers), lower, upper, limits, {}, {}
    )


def moments(numbers: list[float], measure: str, unit: str = "", side: str | None = None) -> Moments:
    return Moments(source(numbers, measure, unit), DEFAULT, side)


def column(found: Moments, measure: str, unit: str = "") -> tuple[FloatArray, dict[int, str]]:
    answers = found.answers(heading(measure, unit))
    return answers.values, answers.reasons


@pytest.mark.parametrize(
    ("source", "source_unit", "numbers", "target", "unit", "pint_unit"),
    [
        ("redshift", "", [0.01, 1.0, 6.3], "age", "Myr", "megayear"),
        ("redshift", "", [0.01, 1.0, 6.3], "comoving distance", "Gly", "gigalight_year"),
        ("age", "Myr", [900.0, 5000.0], "redshift", "", "dimensionless"),
        ("lookback time", "Gyr", [1.0, 12.5], "CMB temperature", "mK", "millikelvin"),
        ("comoving distance", "Gly", [1.0, 20.0], "Hubble rate", "1/Gyr", "1 / gigayear"),
        ("scale factor", "", [0.1, 1.0], "luminosity distance", "kpc", "kiloparsec"),
    ],
)
def test_values_are_those_of_the_core(
    source: str, source_unit: str, numbers: list[float], target: str, unit: str, pint_unit: str
) -> None:
    values, missing = column(moments(numbers, source, source_unit), target, unit)
    factor = unit_named(source_unit).size / unit_named(measure_named(source).unit).size
    core = epochconv.convert(np.array(numbers) * factor, source, target)
    assert values == pytest.approx(core.m_as(pint_unit), rel=1e-11)
    assert not missing


def test_the_source_measure_comes_back_unrounded_in_another_unit() -> None:
    values, _ = column(moments([0.1, 13.7], "age", "Gyr"), "age", "Myr")
    assert values.tolist() == pytest.approx([100.0, 13700.0], rel=1e-15)


def test_a_cell_without_a_number_has_neither_value_nor_reason() -> None:
    found = moments([NAN, 1.0], "redshift")
    values, missing = column(found, "age", "Gyr")
    assert np.isnan(values).tolist() == [True, False]
    assert (found.reasons, missing) == ({}, {})


@pytest.mark.parametrize(
    ("measure", "unit", "number", "reason"),
    [
        (
            "redshift",
            "",
            -0.0003,
            "a negative redshift is a neighbour's peculiar motion towards us and no epoch",
        ),
        (
            "age",
            "Gyr",
            14.0,
            "age is more than the age of the universe today (13.7958 Gyr under planck 2018)",
        ),
        (
            "lookback time",
            "Gyr",
            14.0,
            "lookback time is older than the universe (13.7958 Gyr under planck 2018)",
        ),
        ("lookback time", "Gyr", -1.0, "lookback time lies in the future"),
        (
            "CMB temperature",
            "K",
            2.0,
            "CMB temperature is colder than today's CMB (2.7255 K under planck 2018)",
        ),
        ("comoving distance", "Mpc", -1.0, "comoving distance is no distance"),
        (
            "scale factor",
            "",
            1e-11,
            "scale factor is earlier than redshift 1e10, where the tables end"
            " (1e-10 under planck 2018)",
        ),
        (
            "scale factor",
            "",
            1.5,
            "scale factor lies in the future (1 under planck 2018)",
        ),
        (
            "angular diameter distance",
            "Mpc",
            1e4,
            "angular diameter distance is above the largest angular diameter distance"
            " (1794.74 Mpc under planck 2018)",
        ),
    ],
)
def test_a_number_outside_the_range_has_a_reason(
    measure: str, unit: str, number: float, reason: str
) -> None:
    found = moments([NAN, number], measure, unit)
    assert found.reasons == {1: reason}
    assert np.all(np.isnan(column(found, "redshift")[0]))


def test_a_measure_may_be_missing_at_a_moment() -> None:
    values, missing = column(moments([0.0, -0.0, 1.0], "redshift"), "distance modulus", "mag")
    assert np.isnan(values).tolist() == [True, True, False]
    assert missing == dict.fromkeys((0, 1), "distance modulus does not exist at redshift 0")


def test_where_a_map_turns_over_both_answers_are_named() -> None:
    found = moments([1000.0, 0.0], "angular diameter distance", "Mpc")
    assert np.isnan(found.moment.x).tolist() == [True, False]
    assert found.reasons == {
        0: "two epochs have this angular diameter distance, at redshift 0.322744 and 8.18131;"
        " choose with --side nearer or --side farther"
    }


@pytest.mark.parametrize("side", ["nearer", "farther"])
def test_a_chosen_side_leaves_nothing_open(side: str) -> None:
    found = moments([1000.0, 1500.0], "angular diameter distance", "Mpc", side)
    core = epochconv.convert([1000.0, 1500.0], "angular diameter distance", "redshift", side=side)
    assert column(found, "redshift")[0] == pytest.approx(core.magnitude, rel=1e-12)
    assert not found.reasons


def test_the_same_column_under_another_history() -> None:
    found = moments([1.0, 2.0], "redshift").under(history_of("round numbers"))
    core = epochconv.convert([1.0, 2.0], "redshift", "age", history="round numbers")
    assert column(found, "age", "Gyr")[0] == pytest.approx(core.m_as("gigayear"), rel=1e-12)
