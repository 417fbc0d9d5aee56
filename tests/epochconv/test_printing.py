"""Numbers and small tables as text."""

from __future__ import annotations

import math

import pytest

from epochconv.printing import number_text, text_table, with_unit


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.0, "0"),
        (1.0, "1"),
        (-2.5, "-2.5"),
        (13.797531, "13.7975"),
        (0.1 + 0.2, "0.3"),
        (123456.7, "123457"),
        (1234567.8, "1234568"),
        (9999999.0, "9999999"),
        (9999999.6, "10000000"),
        (1e7, "1e7"),
        (1.234567e10, "1.23457e10"),
        (-3e22, "-3e22"),
        (0.0001234567, "0.000123457"),
        (0.0001, "0.0001"),
        (0.00001234567, "1.23457e-5"),
        (1e-300, "1e-300"),
        (math.nan, "none"),
        (math.inf, "inf"),
        (-math.inf, "-inf"),
    ],
)
def test_number_is_written_with_six_digits(value: float, text: str) -> None:
    assert number_text(value) == text


@pytest.mark.parametrize("digits", range(1, 18))
def test_written_number_is_right_to_its_digits(digits: int) -> None:
    for power in range(-12, 13):
        value = math.pi * 10.0**power
        written = float(number_text(value, digits))
        assert abs(written / value - 1) <= 0.5 * 10.0 ** (1 - digits) + 3e-16


def test_seventeen_digits_bring_the_double_back() -> None:
    for value in (0.1, 1 / 3, 2e-5, 1e22, 123456789.123456789):
        assert float(number_text(value, 17)) == value


def test_unit_follows_a_blank_and_only_where_there_is_one() -> None:
    assert with_unit("13.8", "Gyr") == "13.8 Gyr"
    assert with_unit("2.5", "") == "2.5"


def test_columns_are_aligned_and_lines_end_bare() -> None:
    rows = [["age", "13.8", "Gyr"], ["scale factor", "1", ""]]
    assert text_table(rows, [False, True, False]) == ("age           13.8  Gyr\nscale factor     1")


def test_rows_of_unequal_length_are_our_bug() -> None:
    with pytest.raises((ValueError, IndexError)):
        text_table([["a", "b"], ["c"]], [False, False])
