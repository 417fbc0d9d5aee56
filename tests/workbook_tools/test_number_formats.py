"""Number formats: enough digits to read, and what a format hides of a number."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from workbook_tools.number_formats import format_for, format_like, shown_step, significant_digits


@pytest.mark.parametrize(
    ("value", "digits"),
    [(0.0, 1), (2.0, 1), (2.5, 2), (0.0312, 3), (1000.0, 1), (-13.787, 5), (1 / 3, 15), (6e-9, 1)],
)
def test_significant_digits_of_a_typed_number(value: float, digits: int) -> None:
    assert significant_digits(value) == digits


@given(st.integers(1, 10**14), st.integers(-12, 12))
def test_significant_digits_are_those_that_were_typed(mantissa: int, exponent: int) -> None:
    typed = str(mantissa).rstrip("0")
    assert significant_digits(float(f"{mantissa}e{exponent}")) == len(typed)


def shown(value: float, code: str) -> str:
    """A number in a format of ours, by Python's own formatting."""
    mantissa, exponent, _ = code.partition("E+00")
    decimals = len(mantissa.partition(".")[2])
    return f"{value:.{decimals}{'e' if exponent else 'f'}}"


@pytest.mark.parametrize(
    ("values", "digits", "code"),
    [
        ([13.787, 5.842, 0.929], 3, "0.00"),
        ([13.787, 5.842, 0.929], 1, "0.00"),  # never fewer than three digits
        ([13.787, 5.842, 0.929], 15, "0.0000"),  # never more than five
        ([8424.1, 3396.2], 3, "0"),
        ([8424.1, 3396.2, 44.2], 5, "0.0"),
        ([0.5, 0.25, 0.0011], 3, "0.0000"),  # the smallest keeps two
        ([1e-9, 2e-9], 3, "0.00E+00"),
        ([1e-4, 2e-4], 3, "0.000000"),
        ([1e-5, 2e-5], 3, "0.00E+00"),
        ([5.0, 9.99e8], 3, "0.0"),
        ([1.0, 2e12], 3, "0.00E+00"),
        ([0.0, 0.0], 3, "0.00"),
        ([], 4, "0.000"),
        ([-3.5, 2.0], 3, "0.00"),
    ],
)
def test_a_format_shows_about_the_digits_of_the_source(
    values: list[float], digits: int, code: str
) -> None:
    assert format_for(values, digits) == code


@given(
    st.lists(st.floats(1e-30, 1e30).flatmap(lambda x: st.sampled_from((x, -x))), min_size=1),
    st.integers(1, 17),
)
def test_the_middle_value_shows_three_digits_and_the_smallest_two(
    values: list[float], digits: int
) -> None:
    code = format_for(values, digits)
    assert len(code) <= 12
    sizes = sorted(abs(value) for value in values)
    for value, fewest in ((sizes[0], 2), (sizes[len(sizes) // 2], 3)):
        plain = shown(value, code).partition("e")[0].replace(".", "").lstrip("0")
        assert len(plain) >= fewest


@pytest.mark.parametrize(
    ("value", "code", "step"),
    [
        (5.84, "0.00", 0.005),
        (5.84, "0", 0.5),
        (5842.0, "#,##0.0", 0.05),
        (5842.0, "0.00E+00", 5.0),
        (5.84, "General", 0.005),
        (0.0312, "General", 0.00005),
        (12.0, "General", 0.5),
        (5.842295707588268, "General", 5e-10),  # of which General shows ten digits
        (5.8423, '0.00" Gyr"', 0.005),
        (5.8423, "0.00_);[Red](0.00)", 0.005),
        (5.8423, "[Blue]0.0\\ ", 0.05),
        (5.8423, "#,##0.0##", 0.0005),
        (5.8423, "0.00 ;-0.00 ", 0.005),
        (0.158, "0.0%", 0.0005),
        (5.84, "@", 0.005),
        (5.84, 'yyyy"-"mm', 0.005),
        (0.0, "General", 0.5),
    ],
)
def test_half_a_unit_of_the_last_digit_shown(value: float, code: str, step: float) -> None:
    assert shown_step(value, code) == pytest.approx(step, rel=1e-12)
    assert shown_step(-value, code) == pytest.approx(step, rel=1e-12)


@pytest.mark.parametrize(
    ("typed", "code"),
    [([5.21, 8.84, 10.53], "0.00"), ([12.0, 7.0], "0"), ([0.0012, 0.0123], "0.0000")],
)
def test_blanks_get_as_many_decimals_as_were_typed(typed: list[float], code: str) -> None:
    assert format_like(typed) == code


def test_the_largest_numbers_have_a_format() -> None:
    assert format_for([9e307, 9e307], 3) == "0.00E+00"
