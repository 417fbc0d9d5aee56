"""The grammar of a typed value without its outer marks: number, errors, unit.

    value  = number [flag] [unit]
           | mantissa "(" digits ")" [power] [unit]                 the error of the last digits
           | number [unit] ["("] "±" number [unit] [")"] [unit]
           | number [unit] ["("] "+" number [unit] [","] "-" number [unit] [")"] [unit]
           | "(" value with an error ")" [power] [unit]
    unit   = "%" | a spelling of the closed table of units

"+" and "-" may stand in either order, and may be TeX's scripts; numbers are those of typed_numbers.
"""

from __future__ import annotations

import functools
import re
from collections.abc import Sequence
from dataclasses import replace

from epochconv.typed_numbers import (
    POWER,
    Number,
    Refused,
    hundredth,
    mantissa_pattern,
    number_of,
    number_pattern,
    plain_digits,
    scaled,
)
from epochconv.typed_outcomes import Reason, Remark, Typed
from epochconv.units import TABLE, Unit, factor, find_unit

_PLUS_MINUS = re.compile(r"\+ ?/ ?-|\+-")
# The braces of a power of ten have no partner and stay.
_RAISED = r" ?\^(?:\{ ?([+-][^{}]*)\}|([+-][0-9.,]+))"
_LOWERED = _RAISED.replace(r"\^", "_")
_SCRIPTS = (re.compile(_RAISED + _LOWERED), re.compile(_LOWERED + _RAISED))


class Grammar:
    """The forms of a value for one decimal mark."""

    def __init__(self, decimal_comma: bool) -> None:
        self._comma = decimal_comma
        size = number_pattern(decimal_comma)
        unit = f" ?(?:{_unit_spellings(1)})"
        # A single letter in brackets is a note.
        named = _unit_spellings(2)
        last = rf"(?P<last>{unit}| ?\((?:{named})\)| ?\[(?:{named})\])?"
        value = f"(?P<value>[+-]?{size})"
        start = rf"{value}(?P<own>{unit})? ?(?P<open>[(\[])? ?"
        end = rf" ?(?P<close>[)\]])?{last}"
        error = f"(?P<error>{size})(?P<unit>{unit})?"
        second = error.replace("<error>", "<error2>").replace("<unit>", "<unit2>")
        self._single = re.compile(f"{value}(?P<flag> ?(?:[?:]|[*†‡§¶]{{1,3}}))?{last}")
        self._concise = re.compile(
            rf"(?P<value>[+-]?{mantissa_pattern(decimal_comma)})"
            rf"\((?P<error>{plain_digits(decimal_comma)})\)(?P<power>{POWER})?{last}"
        )
        self._even = re.compile(f"{start}± ?{error}{end}")
        self._uneven = re.compile(
            f"{start}(?P<sign>[+-]) ?{error} ?[,;/]? ?(?P<sign2>[+-]) ?{second}{end}"
        )
        self._enclosed = re.compile(rf"\( ?(?P<inner>.*?) ?\)(?P<power>{POWER})?{last}")

    def read(self, body: str) -> Typed | None:
        """Return the value that a text is, or None where it has none of the forms.

        Raises:
            Refused: it has one of them, and yet is not plainly one value.
        """
        found = self._single.fullmatch(body)
        if found is not None:
            return self._single_value(found)
        found = self._concise.fullmatch(body)
        if found is not None:
            return self._concise_value(found)
        body = with_error_signs(body)
        found = self._enclosed.fullmatch(body)
        if found is not None:
            return self._enclosed_value(found)
        return self._value_with_errors(body)

    def _single_value(self, found: re.Match[str]) -> Typed:
        number = number_of(found["value"], self._comma)
        flag, remarks = (found["flag"] or "").strip(), [*number.remarks]
        if flag:
            remarks.append(Remark.UNCERTAIN if flag in "?:" else Remark.FOOTNOTE)
        return _in_unit(Typed(number.value, remarks=tuple(remarks)), found["last"])

    def _concise_value(self, found: re.Match[str]) -> Typed:
        digits, power = found["error"], found["power"] or ""
        number = number_of(found["value"] + power, self._comma)
        decimals, remarks = len(number.mantissa.partition(".")[2]), [*number.remarks]
        if not digits.isdigit():
            if self._comma and "," not in found["value"]:
                raise Refused(Reason.BRACKET)  # "7(12,15)" names two references
            remarks.append(Remark.ERROR_IN_BRACKETS)
            error = number_of(digits + power, self._comma).value
        elif len(digits) <= decimals:
            error = scaled(digits, number.exponent - decimals)
        elif "." not in number.mantissa:
            remarks.append(Remark.ERROR_OR_NOTE)
            error = scaled(digits, number.exponent)
        else:
            raise Refused(Reason.BRACKET)
        return _in_unit(Typed(number.value, error, error, remarks=tuple(remarks)), found["last"])

    def _enclosed_value(self, found: re.Match[str]) -> Typed | None:
        concise = self._concise.fullmatch(found["inner"])
        if concise is not None:
            read: Typed | None = None if found["power"] else self._concise_value(concise)
        else:
            read = self._value_with_errors(found["inner"], found["power"] or "")
        if read is None or (found["last"] and (read.unit or Remark.PERCENT in read.remarks)):
            return None
        return _in_unit(read, found["last"])

    def _value_with_errors(self, body: str, common_power: str = "") -> Typed | None:
        """Read ± and uneven errors; a common power of ten belongs to every number."""
        found = self._even.fullmatch(body) or self._uneven.fullmatch(body)
        if found is None or (found["open"] or "") + (found["close"] or "") not in ("", "()", "[]"):
            return None
        suffixes = ("", "2") if found.re is self._uneven else ("",)
        signs = [found["sign" + suffix] for suffix in suffixes] if len(suffixes) == 2 else []
        if len(signs) == 2 and signs[0] == signs[1]:
            return None
        texts = [found["value"], *(found["error" + suffix] for suffix in suffixes)]
        if signs and found["open"] == found.string[found.end("value")] and _may_count_digits(texts):
            raise Refused(Reason.ERROR_SCALE)
        numbers = [number_of(text, self._comma) for text in texts]
        remarks = {remark for number in numbers for remark in number.remarks}
        if common_power and any(number.power for number in numbers):
            return None
        if common_power:
            numbers = [number_of(text + common_power, self._comma) for text in texts]
        else:
            remarks |= _power_remarks(numbers)
        unit, sizes = _with_units(
            found, [found["unit" + suffix] for suffix in suffixes], [n.value for n in numbers[1:]]
        )
        lower, upper = sizes[-1], sizes[0]
        if signs and signs[0] == "-":
            lower, upper = upper, lower
        if lower != upper:
            remarks.add(Remark.ASYMMETRIC)
        return _in_unit(Typed(numbers[0].value, upper, lower, remarks=tuple(remarks)), unit)


@functools.cache
def grammar(decimal_comma: bool) -> Grammar:
    """Return the grammar for one decimal mark."""
    return Grammar(decimal_comma)


def with_error_signs(body: str) -> str:
    """Return a text with ± for its other spellings, and TeX's scripts in line."""
    body = _PLUS_MINUS.sub("±", body)
    if "^" in body and "_" in body:
        for pattern in _SCRIPTS:
            body = pattern.sub(lambda found: "".join(f" {one}" for one in found.groups("")), body)
    return " ".join(body.split())


def _may_count_digits(texts: Sequence[str]) -> bool:
    """Tell whether 2.345(+12,-10) may mean last digits: whole numbers behind a fraction."""
    value, *errors = texts
    return not value.lstrip("+-").isdigit() and all(error.isdigit() for error in errors)


def _power_remarks(numbers: Sequence[Number]) -> set[Remark]:
    """Say that a power of ten stands on an error alone; refuse where it may be meant for all."""
    value, *errors = numbers
    powers = [error.power for error in errors if error.power]
    if value.power:
        # An error far below the last digit of 2.34e3 may share its power.
        last_digit = 10.0 ** (value.exponent - len(value.mantissa.partition(".")[2]))
        if any(0.0 < error.value < last_digit and not error.power for error in errors):
            raise Refused(Reason.ERROR_POWER)
        return set()
    if not powers:
        return set()
    written_out = any(power[0] not in "eE" for power in powers)
    if written_out or any(error.value > abs(value.value) for error in errors):
        raise Refused(Reason.ERROR_POWER)
    return {Remark.ERROR_POWER}


def _with_units(
    found: re.Match[str], units: list[str | None], sizes: list[float]
) -> tuple[str | None, list[float]]:
    """Return the unit text of a value with errors, and the errors in that unit."""
    own, last = found["own"], found["last"]
    if last is not None:
        if units[-1] is not None:
            raise Refused(Reason.UNITS_DIFFER)
        units[-1] = last
    percents = [text is not None and "%" in text for text in (own, *units)]
    if any(percents):
        if not all(percents):
            raise Refused(Reason.RELATIVE_ERROR)
        return own, sizes
    if own is None:
        # A unit at the very end is that of the value as well.
        own = units[-1]
        if units[0] is not None and units[0] != own:
            raise Refused(Reason.UNITS_DIFFER)
    if own is None:
        return None, sizes
    target = _unit(own)
    for position, text in enumerate(units):
        if text is not None:
            unit = _unit(text)
            if unit.dimension != target.dimension:
                raise Refused(Reason.UNITS_DIFFER)
            sizes[position] *= factor(unit, target)
    return own, sizes


def _in_unit(read: Typed, text: str | None) -> Typed:
    """Return a value with the unit that stands behind it, or as a fraction for %."""
    if text is None:
        return read
    if text.strip() == "%":
        upper, lower = (
            None if size is None else hundredth(size)
            for size in (read.upper_error, read.lower_error)
        )
        remarks = (*read.remarks, Remark.PERCENT)
        return Typed(hundredth(read.value), upper, lower, remarks=remarks)
    if len(text) == 1 and text.islower():
        raise Refused(Reason.LETTER)
    return replace(read, unit=_unit(text), remarks=(*read.remarks, Remark.UNIT))


def _unit(text: str) -> Unit:
    bare = text.strip()
    unit = find_unit(bare) or find_unit(bare[1:-1])
    assert unit is not None  # only spellings of the table match
    return unit


@functools.cache
def _unit_spellings(shortest: int) -> str:
    """Return the alternation of all unit texts of at least so many signs, the longer ones first."""
    spellings = {
        " ".join(spelling.split())
        for unit in TABLE
        if unit.dimension != "number"
        for spelling in (unit.symbol, *unit.spellings, unit.long_name)
        if len(spelling) >= shortest
    }
    if shortest == 1:
        spellings.add("%")
    return "|".join(re.escape(one) for one in sorted(spellings, key=lambda one: (-len(one), one)))
