"""Single promises of the reader and writer of typed values; tests/tables holds the cells."""

from __future__ import annotations

import pytest

import epochconv
from epochconv.number_text import plain_number
from epochconv.typed_outcomes import NoValue, Reason, Remark, Typed, Unread
from epochconv.typed_text import read_typed, typed_text
from epochconv.units import TABLE, unit_named


@pytest.mark.parametrize(
    ("arguments", "text"),
    [
        ({"value": 0.93, "limit": "<"}, "<0.93"),
        ({"value": 6, "limit": "≳"}, "≳6"),
        ({"value": 12.9, "upper_error": 0.1, "lower_error": 0.2}, "12.9 +0.1/-0.2"),
        ({"value": 12.9, "upper_error": 0.1, "lower_error": 0.1}, "12.9 ± 0.1"),
        ({"value": 1.2874, "upper_error": 6e-5, "lower_error": 6e-5}, "1.2874 ± 0.00006"),
        ({"value": 2.5, "upper_error": 1.2e-7, "lower_error": 0}, "2.5 +0.00000012/-0"),
        ({"value": 1e20, "upper_error": 3, "lower_error": 3}, "1e20 ± 3e0"),
        ({"value": 2, "upper_error": 1e-12, "lower_error": 0.5}, "2e0 +1e-12/-0.5e0"),
        ({"value": -0.0003}, "-0.0003"),
        ({"value": 1 / 3}, "0.333333333333333"),
        ({"value": 1 / 3, "digits": 3}, "0.333"),
        ({"value": 2, "upper_error": 0.101, "lower_error": 0.099, "digits": 1}, "2 ± 0.1"),
        ({"value": 1.5, "upper_error": 0.0, "lower_error": -0.0}, "1.5 ± 0"),
    ],
)
def test_written_values(arguments: dict[str, float], text: str) -> None:
    assert typed_text(**arguments) == text


@pytest.mark.parametrize(
    "arguments",
    [
        {"value": float("nan")},
        {"value": float("-inf"), "limit": "<"},
        {"value": 1.0, "upper_error": float("inf"), "lower_error": 1.0},
        {"value": 1.0, "upper_error": 1.0},
        {"value": 1.0, "lower_error": 0.0},
        {"value": 1.0, "upper_error": 1.0, "lower_error": -1.0},
        {"value": 1.0, "limit": "<", "upper_error": 1.0, "lower_error": 1.0},
        {"value": 1.0, "limit": "<="},
    ],
)
def test_what_can_not_be_written_is_refused(arguments: dict[str, float]) -> None:
    with pytest.raises(epochconv.ArgumentError):
        typed_text(**arguments)


def test_every_unit_of_the_table_is_read_in_every_spelling() -> None:
    for unit in TABLE:
        if unit.dimension == "number":
            continue
        for spelling in (unit.symbol, *unit.spellings):
            assert read_typed(f"2.5 {spelling}") == Typed(2.5, unit=unit, remarks=(Remark.UNIT,))
            read = read_typed(f"(2.5 +0.2 -0.1) {spelling}")
            assert isinstance(read, Typed)
            assert (read.upper_error, read.lower_error, read.unit) == (0.2, 0.1, unit)


def test_an_error_in_another_unit_is_converted() -> None:
    read = read_typed("13.2 Gyr +100 Myr -200000 kyr")
    assert isinstance(read, Typed)
    assert read.unit is not None
    assert read.unit.symbol == "Gyr"
    assert (read.upper_error, read.lower_error) == pytest.approx((0.1, 0.2), rel=1e-15)


@pytest.mark.parametrize("text", ["2.345", "−1.3", "1e3", ".5", "5.", "+7", "0"])
def test_plain_numbers_are_those_of_calls(text: str) -> None:
    """Cells and the calls of the package read plain numbers alike."""
    assert read_typed(text) == Typed(plain_number(text) or 0.0)


def test_percent_is_as_exact_as_if_typed_as_a_fraction() -> None:
    for thousandths in range(1, 1000):
        read = read_typed(f"{thousandths / 10}%")
        assert isinstance(read, Typed)
        assert read.value == float(f"{thousandths}e-3")


def test_names_are_spelled_exactly() -> None:
    assert isinstance(read_typed("z = 1.2", names=("z",)), Typed)
    assert isinstance(read_typed("D_C = 450 Mpc", names={"D_C"}), Typed)
    for names in ((), ("Z",), ("redshift", "z_phot")):
        assert read_typed("z = 1.2", names=names) == Unread(Reason.OTHER_NAME)


def test_blanks_are_folded_before_a_text_counts_as_too_long() -> None:
    assert read_typed(f"2.34{' ' * 500}± 0.02") == Typed(2.34, 0.02, 0.02)
    assert read_typed("\n" * 500) == NoValue("", False)


def test_words_for_no_value_keep_their_spelling() -> None:
    assert read_typed("\u00a0N/A\u200b") == NoValue("N/A", False)
    assert read_typed("Tbd") == NoValue("Tbd", True)


def test_phrases_are_distinct() -> None:
    """Reports count by phrase."""
    phrases = [*Remark, *Reason]
    assert len(set(map(str, phrases))) == len(phrases)
    assert all(phrase == phrase.strip() and "\n" not in phrase for phrase in phrases)


def test_two_options_together() -> None:
    both = {"decimal_comma": True, "brackets_are_notes": True}
    assert read_typed("12 345", **both) == Typed(12345.0, remarks=(Remark.DIGIT_GROUPS,))
    assert read_typed("2,345(12)", **both) == Typed(2.345, remarks=(Remark.NOTE,))
    assert read_typed("2,3 (a) ± 0,1 [4]", **both) == Typed(2.3, 0.1, 0.1, remarks=(Remark.NOTE,))


# Cells with a wrong or a badly named outcome in the first version of the reader.
@pytest.mark.parametrize(
    ("cell", "expected"),
    [
        ("0.071/Gyr", Unread(Reason.UNCLEAR)),
        ("2.10³", Unread(Reason.POWER_OR_NOTE)),
        ("2.3×10³ ± 0.1", Unread(Reason.ERROR_POWER)),
        ("2.3×10^{3}^{+0.1}_{-0.2}", Unread(Reason.ERROR_POWER)),
        ("13.2 +0.1 Gyr -200 Myr", Unread(Reason.UNITS_DIFFER)),
        ("13.2 +0.1 Gyr -0.2", Unread(Reason.UNITS_DIFFER)),
        ("-1--2", Unread(Reason.RANGE)),
        ("2.34(+0.05)(-0.03)", Unread(Reason.BRACKET)),
        ("2.3(12,15)", Unread(Reason.BRACKET)),
        ("2.3,2.4", Unread(Reason.CANDIDATES)),
        (">6, <7", Unread(Reason.RANGE)),
        (">=6, <=7", Unread(Reason.RANGE)),
        ("13.2(Gyr)", Typed(13.2, unit=unit_named("Gyr"), remarks=(Remark.UNIT,))),
        ("z=2.3/2.4", Unread(Reason.CANDIDATES)),
        ("3000 km s-1", Unread(Reason.UNKNOWN_UNIT)),
        ("13.2 Gyr²", Unread(Reason.UNKNOWN_UNIT)),
        ("2.3 Gyr 2.4 Gyr", Unread(Reason.TWO_NUMBERS)),
        ("2.3 ± n/a", Unread(Reason.NO_ERROR)),
        ("2.3 ± 0.1 stat", Unread(Reason.WORDS)),
        ("[2.3 ± 0.1]", Unread(Reason.BRACKETED)),
        ("2.3 $\\pm$ 0.1", Typed(2.3, 0.1, 0.1)),
        ("2.3$^{+0.1}_{-0.2}$", Typed(2.3, 0.1, 0.2, remarks=(Remark.ASYMMETRIC,))),
    ],
)
def test_second_look(cell: str, expected: Typed | Unread) -> None:
    assert read_typed(cell) == expected
