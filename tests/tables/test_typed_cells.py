"""Every cell of the table is read as the table says, and the table is as wide as promised."""

from __future__ import annotations

import pytest

from epochconv.typed_outcomes import NoValue, Reason, Remark, Typed, Unread
from epochconv.typed_text import read_typed
from tests.tables.typed_cells import AS_TYPED, COMMA, NAMED, NAMES, NOTES, Cells, Outcome


def cases(cells: Cells) -> pytest.MarkDecorator:
    names = [ascii(cell if len(cell) <= 40 else f"{cell[:37]}...") for cell, _ in cells]
    return pytest.mark.parametrize(("cell", "expected"), cells, ids=names)


@cases(AS_TYPED)
def test_as_typed(cell: str, expected: Outcome) -> None:
    assert read_typed(cell) == expected


@cases(COMMA)
def test_with_decimal_comma(cell: str, expected: Outcome) -> None:
    assert read_typed(cell, decimal_comma=True) == expected


@cases(NOTES)
def test_with_notes_in_brackets(cell: str, expected: Outcome) -> None:
    assert read_typed(cell, brackets_are_notes=True) == expected


@cases(NAMED)
def test_with_names(cell: str, expected: Outcome) -> None:
    assert read_typed(cell, names=NAMES) == expected


def test_table_is_wide_enough() -> None:
    """No cell twice; a third of them refused; every remark and every reason met."""
    tables = (AS_TYPED, COMMA, NOTES, NAMED)
    for table in tables:
        assert len({cell for cell, _ in table}) == len(table)
    outcomes = [outcome for table in tables for _, outcome in table]
    refused = [outcome for outcome in outcomes if isinstance(outcome, Unread)]
    assert len(outcomes) >= 200
    assert len(refused) * 3 >= len(outcomes)
    assert {outcome.reason for outcome in refused} == set(Reason)
    remarks = {r for outcome in outcomes if isinstance(outcome, Typed) for r in outcome.remarks}
    assert remarks == set(Remark)
    assert {outcome.listed for outcome in outcomes if isinstance(outcome, NoValue)} == {True, False}
