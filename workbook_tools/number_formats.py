"""Number formats with sensible significant figures, and what a format shows of a number."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

_FEWEST, _MOST = 4, 6
_FIXED = re.compile(r"(?:#,##)?0(?:\.(0+))?")
_SCIENTIFIC = re.compile(r"0(?:\.(0+))?E\+0+")
# All that the General format shows of a number in a cell of ordinary width.
_GENERAL_DIGITS = 10


def significant_digits(value: float) -> int:
    """Return how many significant digits a typed number has (trailing zeros are not stored)."""
    mantissa = f"{value:.14e}".partition("e")[0].replace(".", "").lstrip("-")
    return max(1, len(mantissa.rstrip("0")))


def format_for(values: Sequence[float], source_digits: int) -> str:
    """Return a format that shows values with about the digits of their source.

    At least four significant digits and at most six; powers of ten where fixed decimals would
    need too much room.

    Args:
        values: the numbers of a column; finite.
        source_digits: significant digits that its source typically has.
    """
    digits = min(max(source_digits, _FEWEST), _MOST)
    sizes = sorted(abs(value) for value in values if value)
    if not sizes:
        return "0." + "0" * (digits - 1)
    low, typical, high = sizes[0], sizes[len(sizes) // 10], sizes[-1]
    decimals = digits - 1 - math.floor(math.log10(typical))
    if high >= 1e9 or low < 1e-5 or decimals > 8:
        return "0." + "0" * (digits - 1) + "E+00"
    return "0." + "0" * decimals if decimals > 0 else "0"


def shown_step(value: float, code: str) -> float:
    """Return half a unit of the last digit that a cell shows of a number: what it can be off by.

    With a fixed or scientific format that is its last place. Otherwise it is the last digit of the
    number itself, of which the General format shows ten.
    """
    fixed, scientific = _FIXED.fullmatch(code), _SCIENTIFIC.fullmatch(code)
    if fixed is not None:
        return 0.5 * 10.0 ** -len(fixed[1] or "")
    exponent = math.floor(math.log10(abs(value))) if value else 0
    digits = min(significant_digits(value), _GENERAL_DIGITS)
    if scientific is not None:
        digits = 1 + len(scientific[1] or "")
    return 0.5 * 10.0 ** (exponent - digits + 1)
