"""What people type into a cell or at the prompt, read strictly; and our own values written so.

Whatever the text, the outcome is one of three: a value, a word for "no value", or a reason why it
is not read. Nothing is guessed: where a text has two readings it is left.
"""

from __future__ import annotations

import functools
import math
from collections.abc import Collection
from dataclasses import replace

from epochconv.errors import ArgumentError
from epochconv.printing import number_text
from epochconv.typed_common import read_common
from epochconv.typed_grammar import grammar, with_error_signs
from epochconv.typed_marks import Marked, made_plain, without_marks, without_notes, word_for_none
from epochconv.typed_numbers import Refused
from epochconv.typed_outcomes import NoValue, Reason, Remark, Typed, Unread
from epochconv.typed_refusals import may_group_thousands, reason_for

__all__ = ["NoValue", "Reason", "Remark", "Typed", "Unread", "read_typed", "typed_text"]

_LONGEST = 200
_LIMITS = ("<", ">", "≤", "≥", "≲", "≳")


def read_typed(
    text: str,
    *,
    decimal_comma: bool = False,
    brackets_are_notes: bool = False,
    names: Collection[str] = (),
) -> Typed | NoValue | Unread:
    """Read a text that somebody typed; never raises.

    Args:
        text: any text.
        decimal_comma: "2,345" is 2.345; else such a text is left.
        brackets_are_notes: what stands in brackets behind a value is passed over, "2.3 (a)" and
            "2.345(12)" alike, unless it is an error with its sign or a unit.
        names: the spellings of the quantity, case and all, that may stand before the value, as in
            "z = 1.2".
    """
    if len(text) <= _LONGEST:
        read = read_common(text, decimal_comma, brackets_are_notes)
        if read is not None:
            return read
    return _read_closely(text, decimal_comma, brackets_are_notes, tuple(names))


def typed_text(
    value: float,
    *,
    upper_error: float | None = None,
    lower_error: float | None = None,
    limit: str = "",
    digits: int = 15,
) -> str:
    """Write a value so that `read_typed` gives it back: "<0.93", "12.9 +0.1/-0.2", "12.9 ± 0.1".

    Args:
        value: finite.
        upper_error, lower_error: sizes; both or none, and none with a limit.
        limit: "" or one of < > ≤ ≥ ≲ ≳.
        digits: significant ones; with 17 every value comes back to the last bit.

    Raises:
        ArgumentError: a number is not finite, an error is negative or has no partner, a limit has
            errors or is none of the signs.
    """
    errors = [error for error in (upper_error, lower_error) if error is not None]
    if not all(math.isfinite(number) for number in (value, *errors)):
        raise ArgumentError(f"{value!r} with errors {errors} can not be written: not finite")
    if any(error < 0.0 for error in errors) or len(errors) == 1:
        raise ArgumentError(
            f"errors {upper_error!r}, {lower_error!r}: give two that are not below 0"
        )
    if limit not in ("", *_LIMITS) or (limit and errors):
        raise ArgumentError(f"{limit!r}: a limit is one of {' '.join(_LIMITS)} and has no errors")
    number = _digits(value, digits)
    if not errors:
        return limit + number
    upper, lower = (_written_out(_digits(abs(error), digits)) for error in errors)
    if any("e" in one for one in (number, upper, lower)):
        # A power of ten on one of them alone could be meant for all.
        number, upper, lower = (one if "e" in one else f"{one}e0" for one in (number, upper, lower))
    return f"{number} ± {upper}" if upper == lower else f"{number} +{upper}/-{lower}"


@functools.lru_cache(maxsize=4096)
def _read_closely(
    text: str, decimal_comma: bool, brackets_are_notes: bool, names: tuple[str, ...]
) -> Typed | NoValue | Unread:
    if len(text) > _LONGEST:
        text = " ".join(text.split())
        if len(text) > _LONGEST:
            return Unread(Reason.TOO_LONG)
    plain = made_plain(text)
    word = word_for_none(text, plain)
    if word is not None:
        return word
    try:
        marked, read = _parsed(plain, decimal_comma, brackets_are_notes)
    except Refused as refused:
        return Unread(refused.reason)
    name_fits = not marked.name or marked.name in names
    if read is not None:
        return read if name_fits else Unread(Reason.OTHER_NAME)
    reason = _reason_of_mark(plain, decimal_comma, brackets_are_notes)
    if reason is None:
        reason = reason_for(plain, with_error_signs(marked.body))
        if reason is Reason.UNCLEAR and not name_fits:
            reason = Reason.OTHER_NAME
    return Unread(reason)


def _parsed(
    plain: str, decimal_comma: bool, brackets_are_notes: bool
) -> tuple[Marked, Typed | None]:
    """Return the marks around the value of a text, and the value with all remarks, if any."""
    body = without_notes(plain) if brackets_are_notes else plain
    marked = without_marks(body)
    read = grammar(decimal_comma).read(marked.body)
    if read is None:
        return marked, None
    remarks = {*read.remarks, *marked.remarks}
    if body != plain:
        remarks.add(Remark.NOTE)
    has_error = read.upper_error is not None
    if has_error and marked.limit:
        raise Refused(Reason.LIMIT_ERROR)
    if Remark.LEVEL in remarks and not has_error and not marked.limit:
        if not brackets_are_notes:
            raise Refused(Reason.BRACKET)
        remarks = remarks - {Remark.LEVEL} | {Remark.NOTE}
    in_order = tuple(remark for remark in Remark if remark in remarks)
    return marked, replace(read, limit=marked.limit, remarks=in_order)


def _reason_of_mark(plain: str, decimal_comma: bool, brackets_are_notes: bool) -> Reason | None:
    """Return the reason for a text that would be read with the other decimal mark."""
    if ("." not in plain or "," in plain) if decimal_comma else ("," not in plain):
        return None
    try:
        _, read = _parsed(plain, not decimal_comma, brackets_are_notes)
    except Refused:
        return None
    if read is None:
        return None
    if decimal_comma:
        return Reason.POINT_OR_GROUPS
    grouped = may_group_thousands(plain, ",")
    return Reason.COMMA_OR_GROUPS if grouped else Reason.DECIMAL_COMMA


def _digits(value: float, digits: int) -> str:
    text = number_text(value, digits)
    # Rounded up, the largest floats are beyond all floats.
    return text if math.isfinite(float(text)) else repr(value)


def _written_out(text: str) -> str:
    """Return 6e-5 as 0.00006, as an error is read more easily; smaller numbers stay."""
    mantissa, _, exponent = text.partition("e")
    if not exponent or not -10 <= int(exponent) < 0:
        return text
    return "0." + "0" * (-int(exponent) - 1) + mantissa.replace(".", "")
