"""The commonest cells in one pattern, for speed; the grammar reads them to the same values.

They are a number, "<" or "~" and a number, a number with "±" and an error, with "+" and "-" errors,
in brackets or not, or with digits of error in brackets, each with or without a unit in letters.
Whatever is not plainly one of these, or has more to be said about it, is the grammar's.
"""

from __future__ import annotations

import math
import re

from epochconv.number_text import EXPONENT, SIGN
from epochconv.typed_numbers import plain_digits
from epochconv.typed_outcomes import Remark, Typed
from epochconv.units import find_unit


def _pattern(decimal_comma: bool) -> re.Pattern[str]:
    digits = plain_digits(decimal_comma)
    return re.compile(
        rf"\s*([<>≤≥~≈]?)\s*({SIGN}?{digits}{EXPONENT}?)"
        rf"(?:\s*(?:±|\+/-|\+-)\s*({digits})|\(([0-9]+)\)"
        rf"|(?:\s*|\s(\())\+\s?({digits})\s?[/,]?\s?[-−]\s?({digits})(?(5)\)))?"
        r"(?:\s?([A-Z]?[a-z]*[A-Za-z]))?\s*"
    )


_PATTERNS = {comma: _pattern(comma) for comma in (False, True)}
_ABOUT = ("~", "≈")
_REMARKS: dict[tuple[bool, bool], tuple[Remark, ...]] = {
    (has_unit, uneven): (Remark.UNIT,) * has_unit + (Remark.ASYMMETRIC,) * uneven
    for has_unit in (False, True)
    for uneven in (False, True)
}


def read_common(text: str, decimal_comma: bool, brackets_are_notes: bool) -> Typed | None:
    """Return the value of one of the commonest texts, or None for the grammar to decide."""
    found = _PATTERNS[decimal_comma].fullmatch(text)
    if found is None:
        return None
    sign, number, even, last_digits, _, upper, lower, unit_text = found.groups()
    number = number.replace("−", "-")
    if decimal_comma:
        number = number.replace(",", ".")
    value = float(number)
    if math.isinf(value) or (value == 0.0 and number.strip("+-0.") != ""):
        return None
    unit = None
    if unit_text is not None:
        unit = find_unit(unit_text) if len(unit_text) > 1 else None
        if unit is None or unit.dimension == "number":
            return None
    remarks = _REMARKS[unit is not None, False]
    if even is None and last_digits is None and upper is None:
        if sign in _ABOUT:
            return Typed(value, None, None, "", unit, (Remark.APPROXIMATE, *remarks))
        return Typed(value, None, None, sign, unit, remarks)
    if sign or "e" in number or "E" in number:
        return None
    if last_digits is not None:
        decimals = len(number.partition(".")[2])
        if brackets_are_notes or len(last_digits) > decimals:
            return None
        above = below = float(f"{last_digits}e-{decimals}")
    else:
        above, below = _size(upper or even), _size(lower or even)
    return Typed(value, above, below, "", unit, _REMARKS[unit is not None, above != below])


def _size(digits: str) -> float:
    return float(digits.replace(",", "."))
