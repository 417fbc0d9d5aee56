"""What a careful observer takes a cell for; written by hand beside what was typed.

The policy is that of the project for typed cells: a cell is read, read with a remark, or left with
a reason. Causes are chosen here by hand; their words are those of the reader, so that a report can
be compared in full.
"""

from __future__ import annotations

from dataclasses import dataclass

from epochconv.typed_outcomes import Reason


@dataclass(frozen=True)
class Reading:
    """The outcome of one cell.

    Attributes:
        value: in the unit of the heading; None where there is none.
        upper, lower: sizes of its errors in that unit; None where none is known.
        limit: one of < > ≤ ≥ ≲ ≳ where the value is a limit.
        remarks: what a person should know of it.
        reason: why the cell is left; "" where it is read or holds nothing.
        shown: what a cell that is left shows, if that can be told.
        passed_over: why the row is none of the log; "" where it is one.
        word: the word for "no value" that it holds.
    """

    value: float | None = None
    upper: float | None = None
    lower: float | None = None
    limit: str = ""
    remarks: tuple[str, ...] = ()
    reason: str = ""
    shown: str = ""
    passed_over: str = ""
    word: str = ""


NOTHING = Reading()


def reads(value: float, *remarks: str) -> Reading:
    """A value without an error."""
    return Reading(value, remarks=remarks)


def within(value: float, error: float, *remarks: str) -> Reading:
    """A value with the same error on both sides."""
    return Reading(value, error, error, remarks=remarks)


def between(value: float, upper: float, lower: float, *remarks: str) -> Reading:
    """A value with an error on each side."""
    return Reading(value, upper, lower, remarks=remarks)


def limit(sign: str, value: float, *remarks: str) -> Reading:
    """A limit."""
    return Reading(value, limit=sign, remarks=remarks)


def unread(text: str, why: Reason) -> Reading:
    """A text that is not plainly one value."""
    return Reading(reason=f"not read: {why}", shown=text)


def left(reason: str, shown: str = "") -> Reading:
    """A cell that is left for a reason of another kind."""
    return Reading(reason=reason, shown=shown)


def no_value(word: str) -> Reading:
    """A word for "no value", counted and not listed."""
    return Reading(word=word)


def pending(word: str) -> Reading:
    """A word that asks for somebody to look: listed."""
    return Reading(reason="no value yet", shown=word)


def no_row(why: str) -> Reading:
    """A cell of the layout, or in a row that is not processed."""
    return Reading(passed_over=why)
