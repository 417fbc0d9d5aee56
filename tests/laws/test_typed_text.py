"""What holds for every text that anybody could type, and for every value that we write."""

from __future__ import annotations

import math
import random
import re

import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from epochconv.typed_outcomes import NoValue, Reason, Remark, Typed, Unread
from epochconv.typed_text import read_typed, typed_text
from tests.laws.well_formed_cells import NAMES, Cell, well_formed
from tests.tables.typed_cells import AS_TYPED, COMMA, NAMED, NOTES

EVERY_SIGN = st.characters(exclude_categories=())  # lone surrogates and controls as well
TYPICAL_SIGNS = st.sampled_from(
    list("0123456789.,+-−–±()[]{}^_/\\eEx×*·<>≤≳~≈?:†%$= 'GyrMpcKmz³⁻¹½→…\u00a0\u2009\u200b\n")
)
TABLE_CELLS = [cell for table in (AS_TYPED, COMMA, NOTES, NAMED) for cell, _ in table]
OPTIONS = st.fixed_dictionaries(
    {"decimal_comma": st.booleans(), "brackets_are_notes": st.booleans()}
)


@st.composite
def damaged_cells(draw: st.DrawFn) -> str:
    """A cell of the table in which up to three signs are lost, doubled or put in."""
    text = draw(st.sampled_from(TABLE_CELLS))
    for _ in range(draw(st.integers(0, 3))):
        place = draw(st.integers(0, len(text)))
        put_in = draw(st.one_of(st.just(""), TYPICAL_SIGNS, EVERY_SIGN))
        text = text[:place] + put_in + text[place + draw(st.integers(0, 1)) :]
    return text


ANY_TEXT = st.one_of(st.text(EVERY_SIGN), st.text(TYPICAL_SIGNS, max_size=25), damaged_cells())
PIECES = [
    *["1", ".", ",", "±", "(", "~", "<", "a", "z", "?", "*", "¹", "$", "\\", "%", "-", "−", "/"],
    *[
        "1.",
        "1+",
        "+-",
        "1±",
        "(1",
        "1)",
        "[1]",
        "^{",
        "1^",
        "×10",
        "1e",
        "e1",
        "<~",
        "z=",
        "?*",
        "1¹",
        "1/",
        "1,234",
        "Gyr",
    ],
    *("1 ", "1 234 ", "± ", "Gyr ", "1 Gyr ", "million ", "1-1 ", " ", "\n", "\u200b", "1\u200b"),
]
FINITE = st.floats(allow_nan=False, allow_infinity=False)
SIZES = st.floats(min_value=0.0, allow_nan=False, allow_infinity=False)


def read_cell(cell: Cell) -> Typed | NoValue | Unread:
    return read_typed(cell.text, decimal_comma=cell.decimal_comma, names=NAMES)


def differences(cell: Cell, read: Typed) -> list[str]:
    """What of a well-formed cell was read otherwise; rounding may differ by one part in 1e15."""
    pairs = [("value", cell.value, read.value), ("upper", cell.upper, read.upper_error)]
    pairs.append(("lower", cell.lower, read.lower_error))
    found = []
    for what, expected, got in pairs:
        if (expected is None) != (got is None):
            found.append(what)
        elif expected is not None and got is not None and got != float(expected):
            close = math.isclose(got, float(expected), rel_tol=1e-15)
            found.extend([] if close else [what])
    if cell.limit != read.limit:
        found.append("limit")
    if cell.unit != (read.unit.symbol if read.unit else ""):
        found.append("unit")
    return found


@settings(max_examples=1000)
@given(ANY_TEXT, OPTIONS)
@example("9" * 5000, {})
@example("\ud800", {})
def test_any_text_has_one_of_three_outcomes(text: str, options: dict[str, bool]) -> None:
    read = read_typed(text, names=NAMES, **options)
    if isinstance(read, Unread):
        assert read.reason in Reason
        return
    if isinstance(read, NoValue):
        assert not any(sign.isdecimal() for sign in text)
        return
    assert math.isfinite(read.value)
    errors = (read.upper_error, read.lower_error)
    assert errors == (None, None) or all(e is not None and 0.0 <= e < math.inf for e in errors)
    assert read.limit in ("", "<", ">", "≤", "≥", "≲", "≳")
    assert not read.limit or errors == (None, None)
    assert list(read.remarks) == [remark for remark in Remark if remark in read.remarks]


@settings(max_examples=1000)
@given(ANY_TEXT, OPTIONS)
def test_digits_of_a_value_stand_in_the_text(text: str, options: dict[str, bool]) -> None:
    """Nothing is invented: what was read, without its power of ten, was typed in this order."""
    read = read_typed(text, **options)
    typed = "".join(str(int(sign)) for sign in text if sign.isdecimal())
    if isinstance(read, Typed) and len(typed) <= 15:
        for number in (read.value, read.upper_error, read.lower_error):
            if number is not None and read.unit is None:
                digits = re.sub(r"\D", "", f"{number:.15g}".partition("e")[0]).strip("0")
                assert digits in typed


@settings(max_examples=1000)
@given(ANY_TEXT, OPTIONS)
def test_what_stands_invisibly_at_the_ends_is_nothing(text: str, options: dict[str, bool]) -> None:
    """This also holds the short way of the commonest cells to the answers of the grammar."""
    assert read_typed(f"\u200b\u00a0{text}\ufeff ", **options) == read_typed(text, **options)


@pytest.mark.parametrize("option", [{}, {"decimal_comma": True}, {"brackets_are_notes": True}])
@pytest.mark.parametrize("piece", PIECES)
def test_long_texts_end(piece: str, option: dict[str, bool]) -> None:
    """No text makes the patterns search without end, just below the longest and far above it."""
    for length in (60, 199, 10_000):
        text = (piece * length)[:length]
        for whole in (text, text + "!", f"1{text}x", f"({text}"):
            assert isinstance(read_typed(whole, **option), Typed | NoValue | Unread)


@settings(max_examples=500)
@given(FINITE, st.sampled_from(["", "<", ">", "≤", "≥", "≲", "≳"]))
@example(1.7976931348623157e308, "")
@example(5e-324, "<")
@example(-0.0, "")
def test_values_that_we_write_come_back(value: float, limit: str) -> None:
    exact = read_typed(typed_text(value, limit=limit, digits=17))
    assert exact == Typed(value, limit=limit)
    short = read_typed(typed_text(value, limit=limit))
    rounded = float(f"{value:.15g}")
    assert short == Typed(rounded if math.isfinite(rounded) else value, limit=limit)


@settings(max_examples=500)
@given(FINITE, SIZES, SIZES)
@example(1.5, 1e-20, 1e20)
@example(1e20, 3.0, 3.0)
@example(1.2874, 6e-5, 7e-5)
@example(0.0, 0.0, 5e-324)
def test_errors_that_we_write_come_back(value: float, upper: float, lower: float) -> None:
    text = typed_text(value, upper_error=upper, lower_error=lower, digits=17)
    remarks = () if upper == lower else (Remark.ASYMMETRIC,)
    assert read_typed(text) == Typed(value, upper, lower, remarks=remarks)


@settings(max_examples=1000)
@given(st.randoms(use_true_random=False))
def test_well_formed_cells_are_never_read_to_another_value(rng: random.Random) -> None:
    cell = well_formed(rng)
    read = read_cell(cell)
    assert isinstance(read, Unread) or (isinstance(read, Typed) and not differences(cell, read))


def test_well_formed_cells_are_read() -> None:
    """At least 98 of 100, in a sample that is the same on every run."""
    rng = random.Random(20260211)
    cells = [well_formed(rng) for _ in range(10_000)]
    read = [(cell, read_cell(cell)) for cell in cells]
    wrong = [c for c, r in read if isinstance(r, Typed) and differences(c, r)]
    left = [(c.text, r) for c, r in read if not isinstance(r, Typed)]
    assert not wrong
    assert len(left) <= 200, left[:10]
