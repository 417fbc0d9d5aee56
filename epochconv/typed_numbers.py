"""The numbers in a typed text: digits in groups, decimal commas where declared, powers of ten.

    number   = [sign] mantissa [power] | [sign] "10^" exponent
    mantissa = the digits of number_text | digits in groups of three
    power    = "e" exponent | ("×" | "x" | "*" | "·") "10" ("^" exponent | superscript)

The patterns are atomic: a number never gives back what it could take, so that "0.071/Gyr" can not
turn into 0.07 with the unit 1/Gyr, and no text takes longer than its length.
"""

from __future__ import annotations

import functools
import math
import re
from dataclasses import dataclass

from epochconv.number_text import DIGITS, EXPONENT
from epochconv.typed_outcomes import Reason, Remark

_SUPERSCRIPTS = "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻"
_RAISED = f"[⁺⁻]?[{_SUPERSCRIPTS[:10]}]+"
_WHOLE = "[+-]?[0-9]+"
_CARET = rf"(?:{_WHOLE}|\{{{_WHOLE}\}}|\({_WHOLE}\))"
POWER = rf"(?>{EXPONENT}| ?[×xX*·⋅] ?10(?:(?:\^|\*\*){_CARET}|{_RAISED}))"
_POWER_PARTS = re.compile(
    rf"[eE]({_WHOLE})|[ ×xX*·⋅]*10(?:(?:\^|\*\*)[{{(]?({_WHOLE})[}})]?|({_RAISED}))"
)


class Refused(Exception):
    """Goes up inside the reader with the reason why a text is left."""

    def __init__(self, reason: Reason) -> None:
        super().__init__(reason)
        self.reason = reason


@dataclass(frozen=True)
class Number:
    """A number that was typed.

    Attributes:
        value: correctly rounded, the power of ten included.
        mantissa: its digits with a decimal point, as float() takes them.
        exponent: the power of ten.
        power: that power as typed, "" for none.
        remarks: what is to be said of the digits.
    """

    value: float
    mantissa: str
    exponent: int
    power: str
    remarks: frozenset[Remark]


@functools.cache
def mantissa_pattern(decimal_comma: bool) -> str:
    """Return the pattern of digits: in groups first, since a plain number would take a part."""
    start, more, end = "[1-9][0-9]{0,2}", "[0-9]{3}", "(?![0-9])"
    digits = plain_digits(decimal_comma)
    if decimal_comma:
        group, tail = r"\.", "(?:,[0-9]+)?"
        # A point that can not group thousands is a decimal point.
        other = rf"(?:0*|[0-9]+(?=\.(?:[0-9]{{1,2}}|[0-9]{{4,}}){end}))\.[0-9]+(?![.,])|"
    else:
        group, tail, other = ",", r"(?:\.[0-9]*)?", ""
    apart = "|".join(f"{start}(?:{mark}{more})+{end}{tail}" for mark in " '")
    decimal = "," if decimal_comma else r"\."
    thousands = f"(?:{group}{more})+{decimal}[0-9]+|(?:{group}{more}){{2,}}(?![0-9.,])"
    return f"(?>{apart}|{start}(?:{thousands})|{other}{digits})"


def plain_digits(decimal_comma: bool) -> str:
    """Return the pattern of digits without groups."""
    # A decimal comma needs a digit behind it: "10," is the start of a list.
    return "(?:[0-9]+(?:,[0-9]+)?|,[0-9]+)" if decimal_comma else DIGITS


def number_pattern(decimal_comma: bool) -> str:
    """Return the pattern of a number without a sign."""
    bare_power = rf"10\^(?:{_WHOLE}|\{{{_WHOLE}\}})"
    return f"(?>{bare_power}|{mantissa_pattern(decimal_comma)}{POWER}?)"


def number_of(text: str, decimal_comma: bool) -> Number:
    """Evaluate a text that matched the pattern of a number, with or without a sign.

    Raises:
        Refused: it is too large or too small for a float.
    """
    unsigned = text.lstrip("+-")
    sign = text[: len(text) - len(unsigned)]
    if unsigned.startswith("10^"):
        digits, power = "1", unsigned
    else:
        taken = _mantissa(decimal_comma).match(unsigned)
        assert taken is not None  # the same pattern has matched before
        digits, power = taken.group(), unsigned[taken.end() :]
    plain, remarks = _without_groups(digits, decimal_comma)
    exponent = _exponent(power)
    value = scaled(sign + plain, exponent)
    return Number(value, sign + plain, exponent, power, remarks)


def scaled(mantissa: str, exponent: int) -> float:
    """Return digits times ten to the exponent, correctly rounded.

    Raises:
        Refused: the result is infinite, or 0 although the digits are not.
    """
    value = float(f"{mantissa}e{exponent}")
    if math.isinf(value) or (value == 0.0 and mantissa.strip("+-0.") != ""):
        raise Refused(Reason.OUT_OF_RANGE)
    return value


def hundredth(value: float) -> float:
    """Return the value divided by 100 as if it had been typed so: 5.1 % is 0.051."""
    mantissa, _, exponent = repr(value).partition("e")
    return scaled(mantissa, int(exponent or 0) - 2)


@functools.cache
def _mantissa(decimal_comma: bool) -> re.Pattern[str]:
    return re.compile(mantissa_pattern(decimal_comma))


def _without_groups(digits: str, decimal_comma: bool) -> tuple[str, frozenset[Remark]]:
    if digits.isdigit():
        return digits, frozenset()
    group, decimal = (".", ",") if decimal_comma else (",", ".")
    if decimal not in digits and digits.count(group) == 1:
        return digits, frozenset((Remark.DECIMAL_POINT,))
    # With both marks present nothing is left to say.
    told = " " in digits or "'" in digits or (group in digits and decimal not in digits)
    for mark in (" ", "'", group):
        digits = digits.replace(mark, "")
    return digits.replace(decimal, "."), frozenset((Remark.DIGIT_GROUPS,) if told else ())


def _exponent(power: str) -> int:
    if not power:
        return 0
    found = _POWER_PARTS.fullmatch(power)
    assert found is not None  # the same pieces have matched before
    digits = "".join(
        "0123456789+-"[_SUPERSCRIPTS.index(sign)] if sign in _SUPERSCRIPTS else sign
        for sign in found[1] or found[2] or found[3]
    )
    if len(digits) > 8:
        raise Refused(Reason.OUT_OF_RANGE)
    return int(digits)
