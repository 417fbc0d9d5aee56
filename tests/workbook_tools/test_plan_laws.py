"""Whatever people typed: each row is filled, named or counted, once, and nothing is made up."""

from __future__ import annotations

import math
import random

from hypothesis import given, settings
from hypothesis import strategies as st

from tests.laws.well_formed_cells import well_formed
from tests.workbook_tools.small_sheets import Value, grid, reading_of, request
from workbook_tools.plan import plan_sheet
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.typed_cells import EMPTY, WHITE, WORD

# XML has no control characters, surrogates or non-characters.
_LETTERS = st.characters(
    exclude_categories=("Cs", "Cc", "Cn"),
    exclude_characters="\ufffe\uffff",
    include_characters="\n",
)
_ANY = st.one_of(
    st.text(_LETTERS, max_size=12),
    st.integers(0, 10**6).map(lambda seed: well_formed(random.Random(seed)).text),
    st.floats(allow_nan=False, allow_infinity=False),
    st.sampled_from([-99.0, 0.0, 1.0, 46024.0, "n/a", ">6", "2.0(1)", "z", "Total", None]),
)
_FLAG = st.sampled_from([None, None, "<", ">", "≤", "=", "~", "u", "n/a", 1.0])
_SIZE = st.one_of(
    st.sampled_from([None, 0.0, 0.1, -0.1, -99.0, "tbc", "<0.1", "0.1 Mpc", "5%", 1e300, 5.0]), _ANY
)
_HEADER = ["Object", "z", "l_z", "E_z", "e_z", "Age [Gyr]", "l_Age", "µ [mag]", "D_A [Mpc]"]


def made(rows: list[tuple[Value, ...]], header: list[str]) -> SheetPlan:
    log = [[f"object {number}", *values] for number, values in enumerate(rows)]
    # One plain row, so that there is something to convert.
    reading = reading_of(grid(header, ["first", 1.0], *log), header_row=1)
    return plan_sheet(reading, request(with_errors=True, source="z"), None)


def check(plan: SheetPlan) -> None:
    """Hold a plan to what is promised of every plan."""
    reading = plan.reading
    (source,) = reading.columns([2])
    numbers = reading.scan.numbers
    got: dict[int, set[int]] = {}
    for cells in plan.cells:
        assert all(math.isfinite(number) for number in cells.numbers)
        rows = [*cells.rows, *(row for row in cells.texts if row > 1)]
        assert len(set(rows)) == len(rows)
        got[cells.column] = set(rows)
    named = {one.cell for one in (*plan.left, *plan.passed_over)}
    ages = got[_HEADER.index("Age [Gyr]") + 1] if "l_z" in reading.texts.values() else got[3]
    for position, kind in enumerate(source.kinds):
        row = numbers[reading.rows[position]]
        filled, said = row in ages, f"B{row}" in named
        if kind in (EMPTY, WHITE, WORD) or kind < EMPTY:
            assert (filled, said) == (False, False)
        else:
            assert filled != said
    limits = {p for columns in plan.columns for p in range(columns.limits)}
    assert not limits or any("a limit" in remark for remark in plan.remarks)


@given(st.lists(st.tuples(_ANY), min_size=1, max_size=6))
@settings(deadline=None, max_examples=200)
def test_a_log_of_texts(rows: list[tuple[Value, ...]]) -> None:
    check(made(rows, ["Object", "z", "Age [Gyr]"]))


@given(st.lists(st.tuples(_ANY, _FLAG, _SIZE, _SIZE), min_size=1, max_size=6))
@settings(deadline=None, max_examples=200)
def test_a_log_with_flags_and_errors(rows: list[tuple[Value, ...]]) -> None:
    check(made(rows, _HEADER))


@given(st.lists(st.tuples(_ANY, _FLAG, _SIZE, _SIZE), min_size=1, max_size=4))
@settings(deadline=None, max_examples=100)
def test_a_flagged_limit_is_never_a_plain_number(rows: list[tuple[Value, ...]]) -> None:
    plan = made(rows, _HEADER)
    cells = {one.column: one for one in plan.cells}
    ages, flags = cells[6], cells.get(7)
    (source,) = plan.reading.columns([2])
    signs = plan.reading.texts_of(3)
    signed = set() if flags is None else set(flags.texts)
    for position, index in enumerate(plan.reading.rows):
        row = plan.reading.scan.numbers[index]
        is_limit = signs.get(position) in ("<", ">", "≤") or position in source.limits
        if row in ages.rows:
            assert (row in signed) == is_limit
