"""The text of a number with a unit, such as "10.9 Gyr"; strict, and never a guess.

    quantity = number [blank] [unit]
    number   = [sign] digits ["." [digits]] [exponent] | [sign] "." digits [exponent]
    exponent = ("e" | "E") [sign] digits
    sign     = "+" | "-" | "−" (U+2212)

The unit is one of the closed table. Anything else (a comma, digit groups, words) is not read; nor
are a digit or a dash for "no unit", which in a text mean that something else was typed.
"""

from __future__ import annotations

import re

from epochconv.errors import ArgumentError
from epochconv.units import Unit, find_unit

SIGN = r"[+\-−]"
DIGITS = r"(?:[0-9]+(?:\.[0-9]*)?|\.[0-9]+)"
EXPONENT = rf"(?:[eE]{SIGN}?[0-9]+)"

_NUMBER = re.compile(f"{SIGN}?{DIGITS}{EXPONENT}?")


def number_and_rest(text: str) -> tuple[float, str] | None:
    """Return the leading number and the trimmed rest, or None if `text` starts with no number."""
    trimmed = text.strip()
    match = _NUMBER.match(trimmed)
    if match is None:
        return None
    number = float(match.group().replace("−", "-"))
    return number, trimmed[match.end() :].strip()


def plain_number(text: str) -> float | None:
    """Return the number that `text` is and nothing else, or None (also where it overflows)."""
    found = number_and_rest(text)
    if found is None or found[1] or abs(found[0]) == float("inf"):
        return None
    return found[0]


def number_and_unit(text: str) -> tuple[float, Unit | None]:
    """Return the number and the unit of `text`; None where no unit stands.

    Raises:
        ArgumentError: `text` is not a number with a unit of the table.
    """
    text = text.strip()
    found = number_and_rest(text)
    if found is not None and found[1].startswith(","):
        raise ArgumentError(
            f"{text!r} has a comma; write the decimal mark as a point, like '10.9 Gyr'"
        )
    if found is None or abs(found[0]) == float("inf"):
        raise ArgumentError(f"{text!r} is not a number with a unit; write it like '10.9 Gyr'")
    number, rest = found
    if not rest:
        return number, None
    unit = find_unit(rest)
    if unit is None or (unit.dimension == "number" and not rest.isalpha()):
        raise ArgumentError(
            f"{rest!r} in {text!r} is not a unit that is known here (case matters); "
            "write it like '10.9 Gyr', '450 Mpc', '45 Gly' or '3000 K'"
        )
    return number, unit
