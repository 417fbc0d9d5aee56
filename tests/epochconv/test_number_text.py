"""What counts as a number, and as a number with a unit, in text; and what does not."""

from __future__ import annotations

import math

import pytest

from epochconv.errors import ArgumentError
from epochconv.number_text import number_and_rest, number_and_unit, plain_number

NUMBERS = [
    ("0", 0.0),
    ("10.9", 10.9),
    ("+10.9", 10.9),
    ("-1.5", -1.5),
    ("−1.5", -1.5),  # U+2212
    (".5", 0.5),
    ("5.", 5.0),
    ("007", 7.0),
    ("1e3", 1000.0),
    ("1E3", 1000.0),
    ("1e+3", 1000.0),
    ("1e-3", 0.001),
    ("1e−3", 0.001),
    ("1.5e2", 150.0),
    (".5e1", 5.0),
    ("  2.5\t", 2.5),
    ("\u00a02.5\u00a0", 2.5),  # no-break spaces come with copied tables
    ("1e-400", 0.0),
]
NO_NUMBERS = [
    "",
    " ",
    "-",
    "---",
    "+",
    ".",
    "e3",
    ".e3",
    "1,5",
    "1,000",
    "1 000",
    "1'000",
    "1_000",
    "1.2.3",
    "--1",
    "+-1",
    "- 1",
    "1e",
    "1e+",
    "1e3.5",
    "0x10",
    "nan",
    "NaN",
    "inf",
    "-Infinity",
    "1e400",
    "-1e400",
    "~7",
    ">6",
    "<0.1",
    "1.2?",
    "1.2†",
    "(1.2)",
    "[1.2]",
    "$1.2",
    "1.2%",
    "1.2±0.1",
    "2-3",
    "1/2",
    "½",
    "2½",
    "二",
    "٣",
    "３",
    "–1",  # a dash, not a sign
    "z = 2",
    "2j",
    "True",
]


@pytest.mark.parametrize(("text", "number"), NUMBERS)
def test_plain_number_is_read(text: str, number: float) -> None:
    assert plain_number(text) == number


@pytest.mark.parametrize("text", NO_NUMBERS)
def test_anything_else_is_no_plain_number(text: str) -> None:
    assert plain_number(text) is None


def test_sign_of_zero_is_kept() -> None:
    zero = plain_number("-0.0")
    assert zero is not None
    assert math.copysign(1, zero) == -1


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("10.9 Gyr", (10.9, "Gyr")),
        (" 10.9Gyr ", (10.9, "Gyr")),
        ("1e3 K", (1000.0, "K")),
        ("1e3K", (1000.0, "K")),
        ("5 e", (5.0, "e")),
        ("5e", (5.0, "e")),
        ("1,5", (1.0, ",5")),
    ],
)
def test_number_is_told_from_the_rest(text: str, expected: tuple[float, str]) -> None:
    assert number_and_rest(text) == expected


@pytest.mark.parametrize("text", ["Gyr 10.9", "about 3", "", "~7 Gyr"])
def test_text_that_starts_with_no_number_has_no_rest(text: str) -> None:
    assert number_and_rest(text) is None


@pytest.mark.parametrize(
    ("text", "number", "symbol"),
    [
        ("10.9 Gyr", 10.9, "Gyr"),
        ("10.9 billion years", 10.9, "Gyr"),
        ("45 Gly", 45.0, "Gly"),
        ("3000 K", 3000.0, "K"),
        ("70 km/s/Mpc", 70.0, "km/s/Mpc"),
        ("70 km s-1 Mpc-1", 70.0, "km/s/Mpc"),
        ("−3 Gyr", -3.0, "Gyr"),
        ("2 dimensionless", 2.0, ""),
    ],
)
def test_number_with_a_unit_is_read(text: str, number: float, symbol: str) -> None:
    found, unit = number_and_unit(text)
    assert unit is not None
    assert (found, unit.symbol) == (number, symbol)


def test_number_without_a_unit_has_none() -> None:
    assert number_and_unit(" 2.5 ") == (2.5, None)


@pytest.mark.parametrize(
    "text",
    [
        "10.9 gyr",
        "3 mpc",
        "3 Mpc/h",
        "3 h",
        "1 000 Mpc",
        "1,5 Gyr",
        "2.3e",
        "2.3a",
        "10 Gyr ago",
        "10.9 ± 0.2 Gyr",
        "1.2;3",
        "12:30:45",
        "3 1",  # not redshift 3 without a unit
        "3 -",
        "3-",
        "3---",
    ],
)
def test_rest_that_is_no_unit_is_refused(text: str) -> None:
    with pytest.raises(ArgumentError) as caught:
        number_and_unit(text)
    assert repr(text) in str(caught.value)
    assert "'10.9 Gyr'" in str(caught.value)


@pytest.mark.parametrize("text", ["", "Gyr", "about 3 Gyr", "nan Gyr", "1e400 Gyr", "inf"])
def test_text_without_a_finite_number_is_refused(text: str) -> None:
    with pytest.raises(ArgumentError, match="is not a number with a unit"):
        number_and_unit(text)
