"""Every row of the policy for typed cells, as cells of one workbook that is filled with errors.

What each cell must come to was written from the policy, before any fill. A value is read off the
age that is filled beside it, an error off the ages at both of its ends.
"""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from typing import NamedTuple

import pytest
from xlsxwriter.workbook import Workbook
from xlsxwriter.worksheet import Worksheet

import epochconv
from tests.workbook_tools.small_logs import (
    Dressed,
    Formula,
    Runs,
    Value,
    cells,
    new_cells,
    with_parts,
    write_log,
)
from workbook_tools import FillResult, fill


class Read(NamedTuple):
    """A value that is read, with what the report says of it."""

    value: float
    lower: float | None = None
    upper: float | None = None
    remarks: tuple[str, ...] = ()


class Limit(NamedTuple):
    """A limit; `sign` is that of the age, which falls where redshift rises."""

    value: float
    sign: str
    remarks: tuple[str, ...] = ("a limit",)


class Left(NamedTuple):
    """A cell that is left; the report gives how its reason begins, and its text."""

    reason: str
    text: str


class Passed(NamedTuple):
    """A cell of a row that is none of the log."""

    reason: str


Outcome = Read | Limit | Left | Passed | None
"""None: nothing to read, which is counted and not listed."""

AS_TEXT = ("numbers typed as text",)
STRUCK, SUPER = {"font_strikeout": True}, {"font_script": 1}
RAISED = "raised or lowered digits, which could be an exponent or a footnote; retype it"
NOTE = "not read: a bracket after the number: a note or an error; for notes use --brackets-are"
CANDIDATES = "not read: several values to choose from; keep one"
GROUPS = ("digits in groups of three",)
MISSING = "a redshift of -1 or below is impossible"


def pm(value: float, size: float, *remarks: str) -> Read:
    return Read(value, size, size, remarks)


def text(outcome: type[Left], reason: str, *texts: str) -> list[tuple[Value, Outcome]]:
    """Cells with these texts, which are left for one reason."""
    return [(one, outcome(reason, one)) for one in texts]


NUMBERS: list[tuple[Value, Outcome]] = [
    (2.345, Read(2.345)),
    ("2.345", Read(2.345, remarks=AS_TEXT)),
    (Dressed("1.5", {"num_format": "@"}), Read(1.5, remarks=AS_TEXT)),
    ("1,234.5", Read(1234.5, remarks=AS_TEXT)),
    ("1 234.5", Read(1234.5, remarks=GROUPS)),
    ("1'234.5", Read(1234.5, remarks=GROUPS)),
    ("1\u00a0234.5", Read(1234.5, remarks=GROUPS)),
    ("1\u2009234.5", Read(1234.5, remarks=GROUPS)),
    ("\u00a02.5\u202f", Read(2.5, remarks=AS_TEXT)),
    ("２.５", Read(2.5, remarks=AS_TEXT)),
    ("1.3×10³", Read(1300.0, remarks=AS_TEXT)),
    ("1.3x10^3", Read(1300.0, remarks=AS_TEXT)),
    ("1.3E3", Read(1300.0, remarks=AS_TEXT)),
    *text(Left, "not read: an exponent with d; write it with e", "1.3d3"),
    *text(Left, "not read: a comma that may be decimal or group thousands; use", "2,345"),
    *text(Left, "not read: looks like a decimal comma; use --decimal-comma", "2,3", "1.234,5"),
    *text(Left, "not read: two numbers with a blank between", "1 2"),
    (Dressed(0.05, {"num_format": "0%"}), Read(0.05, remarks=("percent",))),
    ("5%", Read(0.05, remarks=("percent",))),
    (0, Read(0.0, remarks=("a redshift of exactly 0, which may stand for a missing value",))),
    (46024, Read(46024.0, remarks=("a whole number that may be a date without its format",))),
    (99.99, Read(99.99)),
    (-0.0003, Left("a negative redshift is a neighbour's peculiar motion", "-0.0003")),
    (-0.5, Left("a negative redshift is a neighbour's peculiar motion", "-0.5")),
    (-99, Left(MISSING, "-99")),
    (-9.99, Left(MISSING, "-9.99")),
    ("\u221299", Left(MISSING, "\u221299")),
    (-1, Left(MISSING, "-1")),
]
ERRORS: list[tuple[Value, Outcome]] = [
    ("2.345(12)", pm(2.345, 0.012)),
    ("2.34(1.2)", pm(2.34, 1.2, "a number with a decimal point in brackets, taken for the error")),
    ("2345(12)", pm(2345.0, 12.0, "a number in brackets taken for the error of the last digits;")),
    ("2.34±0.02", pm(2.34, 0.02)),
    ("2.34 +/- 0.02", pm(2.34, 0.02)),
    ("2.34 +- .02", pm(2.34, 0.02)),
    *[
        (one, Read(2.34, 0.03, 0.05, ("an asymmetric error",)))
        for one in (
            *("2.34+0.05-0.03", "2.34 +0.05/-0.03", "2.34+0.05−0.03", "2.34\n+0.05\n−0.03"),
            *("2.34 (+0.05, -0.03)", "2.34^{+0.05}_{-0.03}"),
        )
    ],
    *text(Left, NOTE, "2.3(a)", "2.3 (2)", "2.3 [5]", "2.3(phot)"),
    *text(Left, "not read: a range, not one value", "2-3", "2–3", "2 to 3"),
    *text(Left, CANDIDATES, "1.2/3.4", "1.2 or 3.4", "1.2; 3.4", "1.2, 3.4"),
    *text(Left, "not read: a change from one value to another", "0.5→0.7"),
]
LIMITS: list[tuple[Value, Outcome]] = [
    (">6", Limit(6.0, "<")),
    ("<0.1", Limit(0.1, ">")),
    ("≥ 6", Limit(6.0, "≤")),
    ("≤0.1", Limit(0.1, "≥")),
    ("<~0.1", Limit(0.1, "≳")),
    ("≲0.1", Limit(0.1, "≳")),
    ("≳ 6", Limit(6.0, "≲")),
    ("z > 6", Limit(6.0, "<", ("a limit", "names its quantity"))),
]
MARKS: list[tuple[Value, Outcome]] = [
    *[
        (one, Read(7.0, remarks=("marked as approximate",)))
        for one in ("~7", "≈7", "c. 7", "ca. 7")
    ],
    *[(one, Read(7.0, remarks=("marked as uncertain",))) for one in ("7:", "7?")],
    ("z=1.2?", Read(1.2, remarks=("marked as uncertain", "names its quantity"))),
    *text(Left, "not read: names another quantity than the heading", "t=1.2?"),
    *[
        (one, Read(2.3, remarks=("a footnote mark, passed over",)))
        for one in ("2.3*", "2.3†", "2.3‡", "2.3¹")
    ],
    *text(Left, "not read: a letter after the number", "2.3a", "2.3b", "2.3d", "12h"),
    (Runs([("2.3", {}), ("1", SUPER)]), Left(RAISED, "2.31")),
    (Dressed(1.5, STRUCK), Read(1.5, remarks=("struck through",))),
    (Dressed("1.6", STRUCK), Read(1.6, remarks=("numbers typed as text", "struck through"))),
    (Runs([("1.", STRUCK), ("7", STRUCK)]), Read(1.7, remarks=(*AS_TEXT, "struck through"))),
    (Runs([("1.7 ", STRUCK), ("1.8", {})]), Left("struck through in part; keep one", "1.7 1.8")),
    *text(Left, "not read: ", "13.2 Gyr ago", "z~7", "≈ 3 bn ly", "3000 km/s", "see below"),
    ("13.2 Gyr", Left("a time (Gyr) where the heading asks for a number", "13.2 Gyr")),
]
NOTHING = ["—", "–", "-", "--", "...", "…", "n/a", "N/A", "NA", "none", "null", "nan", "NaN"]
WORDS: list[tuple[Value, Outcome]] = [
    *[(one, None) for one in NOTHING],
    (" ", None),
    (None, None),
    *text(Left, "no value yet", "TBD", "tbc", "?", "x"),
]
KINDS: list[tuple[Value, Outcome]] = [
    (datetime.date(2026, 1, 2), Left("a date that a spreadsheet program made of something", "")),
    (True, Left("not read: true or false and no number", "TRUE")),
    (False, Left("not read: true or false and no number", "FALSE")),
    (Formula("=1+1", 2.0), Read(2.0, remarks=("results of formulas, as last stored",))),
    (Formula('="2"', "2"), Read(2.0, remarks=(*AS_TEXT, "results of formulas, as last stored"))),
    (Formula("=3*7", 21.0), Left("a formula without a stored result; recalculate and save", "")),
    (Formula("=NA()", "#N/A"), Left("a formula error", "#N/A")),
    (Formula("=1/0", "#DIV/0!"), Left("a formula error", "#DIV/0!")),
    ("#N/A", Left("not read: a formula error", "#N/A")),
    ("z", Passed("repeated headings")),
    (Formula("=AVERAGE(B2:B9)", 2.0), Passed("a line of totals")),
]
CASES = [*NUMBERS, *ERRORS, *LIMITS, *MARKS, *WORDS, *KINDS]
# Rows whose place or label, not their cell, makes them no rows of the log.
HIDDEN, MERGED, TOTAL = len(CASES) + 2, len(CASES) + 3, len(CASES) + 5
ROWS: list[list[Value]] = [
    ["Object", "z", "Age [Gyr]"],
    *([f"object {number}", content] for number, (content, _) in enumerate(CASES)),
    ["hidden", 2.0],
    ["merged", 3.0],
    ["merged too"],
    ["Mean of all", 2.5],
    [],
    ["Notes:"],
    ["2.3 was measured twice"],
]


def dress(_book: Workbook, sheet: Worksheet) -> None:
    sheet.set_row(HIDDEN - 1, None, None, {"hidden": True})
    sheet.merge_range(MERGED - 1, 1, MERGED, 1, 3.0)


class Filled(NamedTuple):
    """The result and the new cells by address."""

    result: FillResult
    new: dict[str, object]


@pytest.fixture(scope="module")
def filled(tmp_path_factory: pytest.TempPathFactory) -> Filled:
    path = write_log(tmp_path_factory.mktemp("policy") / "log.xlsx", ROWS, dress)
    with_parts(path, sheet=("<f>3*7</f><v>21.0</v>", "<f>3*7</f>"))
    before = cells(path)
    result = fill(path, with_errors=True)
    return Filled(result, new_cells(before, path))


def age(redshift: float) -> float:
    return float(epochconv.convert(redshift, "redshift", "age").m_as("gigayear"))


def at(filled: Filled, row: int) -> list[object]:
    """Age, upper and lower error in a row, None for a blank."""
    return [filled.new.get(f"{column}{row}") for column in "CDE"]


def check(filled: Filled, row: int, outcome: Outcome) -> None:
    """Compare a row with what it must have come to."""
    (plan,) = filled.result.plans
    address = f"B{row}"
    left = [(one.reason, one.text) for one in plan.left if one.cell == address]
    passed = [one.reason for one in plan.passed_over if one.cell == address]
    remarks = {remark for remark, where in plan.remarks.items() if address in where}
    found: Sequence[object] = at(filled, row)
    if isinstance(outcome, Read):
        expected: list[object] = [age(outcome.value), None, None]
        if outcome.lower is not None and outcome.upper is not None:
            expected[1] = age(outcome.value - outcome.lower) - age(outcome.value)
            expected[2] = age(outcome.value) - age(outcome.value + outcome.upper)
        assert found == [None if one is None else pytest.approx(one, rel=1e-9) for one in expected]
    elif isinstance(outcome, Limit):
        assert str(found[0])[0] == outcome.sign
        assert float(str(found[0])[1:]) == pytest.approx(age(outcome.value), rel=5e-3)
        assert found[1:] == [None, None]
    else:
        assert found == [None, None, None]
    wanted = outcome.remarks if isinstance(outcome, Read | Limit) else ()
    assert len(remarks) == len(wanted)
    assert all(any(one.startswith(start) for one in remarks) for start in wanted)
    assert passed == ([outcome.reason] if isinstance(outcome, Passed) else [])
    if isinstance(outcome, Left):
        ((reason, shown),) = left
        assert reason.startswith(outcome.reason)
        assert shown == outcome.text
    else:
        assert left == []


@pytest.mark.parametrize(
    "number", range(len(CASES)), ids=[str(content).replace("\n", " ") for content, _ in CASES]
)
def test_each_cell_comes_to_what_the_policy_says(filled: Filled, number: int) -> None:
    check(filled, number + 2, CASES[number][1])


@pytest.mark.parametrize(
    ("row", "reason"),
    [(HIDDEN, "a row hidden by hand"), (MERGED, "merged cells"), (TOTAL, "a line of totals")],
)
def test_rows_that_are_none_of_the_log_are_passed_over(
    filled: Filled, row: int, reason: str
) -> None:
    check(filled, row, Passed(reason))


def test_words_for_no_value_are_counted_and_codes_are_suspected(filled: Filled) -> None:
    (plan,) = filled.result.plans
    (counted,) = [note for note in plan.notes if note.startswith("no value in column B: ")]
    assert all(f"{word} (1)" in counted for word in NOTHING)
    suspected = [note for note in plan.notes if "looks like a code for a missing value" in note]
    assert suspected[0] == (
        "-99 stands 2 times in column B and looks like a code for a missing value; if it is one,"
        " say so with --missing=-99"
    )
    assert [note.split()[0] for note in suspected] == ["-99", "-9.99", "-1"]


def test_every_cell_is_filled_or_named_once(filled: Filled) -> None:
    (plan,) = filled.result.plans
    named = [one.cell for one in (*plan.left, *plan.passed_over)]
    assert len(named) == len(set(named))
    read = sum(isinstance(outcome, Read | Limit) for _, outcome in CASES)
    assert sum(cell.startswith("C") for cell in filled.new) == read
