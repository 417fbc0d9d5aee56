"""What a typed text turns out to be: a value, a word for "no value", or not read and why.

Remarks and reasons are short phrases for people. The same cause always has the same phrase, so
that a report can count and group them.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import StrEnum

from epochconv.units import Unit


class Remark(StrEnum):
    """What a person should know of a text that was read."""

    APPROXIMATE = "marked as approximate"
    UNCERTAIN = "marked as uncertain"
    FOOTNOTE = "a footnote mark, passed over"
    NOTE = "a note in brackets, passed over"
    LEVEL = "a confidence level, not used"
    NAMED = "names its quantity"
    DIGIT_GROUPS = "digits in groups of three"
    DECIMAL_POINT = "a decimal point where decimal commas were declared"
    PERCENT = "percent"
    UNIT = "a unit in the cell"
    ASYMMETRIC = "an asymmetric error"
    ERROR_OR_NOTE = "a number in brackets taken for the error of the last digits; may be a footnote"
    ERROR_IN_BRACKETS = "a number with a decimal point in brackets, taken for the error"
    ERROR_POWER = "a power of ten on the error alone"
    TEXT_MARK = "an apostrophe before the number, passed over"


class Reason(StrEnum):
    """Why a text was not read, and what to do about it where there is a choice."""

    DECIMAL_COMMA = "looks like a decimal comma; use --decimal-comma"
    COMMA_OR_GROUPS = (
        "a comma that may be decimal or group thousands; use --decimal-comma or retype"
    )
    POINT_OR_GROUPS = "a point that may be decimal or group thousands; retype with a comma or none"
    TWO_NUMBERS = "two numbers with a blank between"
    RANGE = "a range, not one value"
    CANDIDATES = "several values to choose from; keep one"
    CHANGE = "a change from one value to another; keep the valid one"
    DATE_OR_TIME = "looks like a date, a time or an angle"
    POINTS = "more than one decimal point"
    LETTER = "a letter after the number: a footnote or a unit; write a unit out after a blank"
    FORTRAN = "an exponent with d; write it with e"
    POWER = "a power of ten without its ^"
    POWER_OR_NOTE = "a superscript after a whole number: a power or a footnote"
    FRACTION = "a fraction sign"
    BRACKET = "a bracket after the number: a note or an error; for notes use --brackets-are-notes"
    BRACKETED = "a number in brackets: negative, doubtful or withdrawn"
    ONE_ERROR = "an error on one side only, or a sum"
    TWO_ERRORS = "more than one error"
    NO_ERROR = "an error sign without an error"
    ERROR_ALONE = "an error without its value"
    RELATIVE_ERROR = "an error that may be relative; write value and error with % each"
    ERROR_POWER = (
        "a power of ten on value or error alone; write it on both, or brackets around both"
    )
    ERROR_SCALE = "an error in brackets that may count last digits or not; write it with ±"
    LIMIT_ERROR = "a limit with an error"
    LIMIT_SIGN = "a sign of comparison that is not known here; use <, >, ≤ or ≥"
    SIGNS = "signs out of place"
    OTHER_NAME = "names another quantity than the heading"
    UNKNOWN_UNIT = "a unit that is not known here (case matters)"
    UNITS_DIFFER = "units of value and error that do not fit each other"
    WORDS = "words with the number"
    NO_NUMBER = "no number"
    FORMULA_ERROR = "a formula error"
    OTHER_DIGITS = "digits of another script"
    INVISIBLE = "an invisible sign within; retype it"
    OUT_OF_RANGE = "a number too large or too small to compute with"
    TOO_LONG = "longer than any value"
    UNCLEAR = "not plainly one value"


@dataclass(frozen=True, slots=True)
class Typed:
    """A value that was read.

    Attributes:
        value: in `unit`, or in that of the column where no unit was typed.
        upper_error, lower_error: sizes, never negative, in the unit of the value; both or none.
        limit: "", or one of < > ≤ ≥ ≲ ≳ where the value is a limit.
        unit: the unit that was typed.
        remarks: what a person should know, in the order of `Remark`.
    """

    value: float
    upper_error: float | None = None
    lower_error: float | None = None
    limit: str = ""
    unit: Unit | None = None
    remarks: tuple[Remark, ...] = ()


@dataclass(frozen=True, slots=True)
class NoValue:
    """A word for "no value".

    Attributes:
        word: as typed, "" for a blank.
        listed: whether somebody still has to look at it ("TBD", "?"), which "n/a" does not ask for.
    """

    word: str
    listed: bool


@dataclass(frozen=True, slots=True)
class Unread:
    """A text that is not plainly a value."""

    reason: Reason
