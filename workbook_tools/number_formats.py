"""Number formats with sensible significant figures, and what a format shows of a number."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence

import numpy as np

_FEWEST, _MOST = 3, 5
# What a format shows that is no digit: texts, spaces as wide as a sign, colours, conditions.
_AROUND = re.compile(r'"[^"]*"|\\.|_.|\*.|\[[^\]]*\]')
_FIXED = re.compile(r"[#0?,]*[#0?](?:\.([#0?]+))?(%?)")
_SCIENTIFIC = re.compile(r"[#0?]+(?:\.([#0?]+))?E[+-]0+")
# All that the General format shows of a number in a cell of ordinary width.
_GENERAL_DIGITS = 10


def significant_digits(value: float) -> int:
    """Return how many significant digits a typed number has (trailing zeros are not stored)."""
    mantissa = f"{value:.14e}".partition("e")[0].replace(".", "").lstrip("-")
    return max(1, len(mantissa.rstrip("0")))


def format_for(values: Sequence[float], source_digits: int) -> str:
    """Return a format that shows values with about the digits of their source.

    The middle one of the values gets three to five significant digits, as its source has, and the
    smallest at least two; powers of ten where that would need too much room.

    Args:
        values: the numbers of a column; finite.
        source_digits: significant digits that its source typically has.
    """
    digits = min(max(source_digits, _FEWEST), _MOST)
    sizes = np.abs(np.asarray(values))
    sizes = sizes[sizes > 0.0]
    if not len(sizes):
        return "0." + "0" * (digits - 1)
    low, high = float(sizes.min()), float(sizes.max())
    with np.errstate(over="ignore"):  # of the mean of two huge ones
        middle = min(float(np.median(sizes)), high)
    decimals = max(digits - 1 - math.floor(math.log10(middle)), 1 - math.floor(math.log10(low)), 0)
    if high >= 1e9 or decimals > 6:
        return "0." + "0" * (digits - 1) + "E+00"
    return "0." + "0" * decimals if decimals else "0"


def format_like(typed: Sequence[float]) -> str:
    """Return a format with as many decimals as the typed numbers mostly have; finite, not empty."""
    counts = sorted(
        max(0, significant_digits(value) - 1 - (math.floor(math.log10(abs(value))) if value else 0))
        for value in typed
    )
    decimals = min(counts[len(counts) // 2], 6)
    return "0." + "0" * decimals if decimals else "0"


def shown_step(value: float, code: str) -> float:
    """Return half a unit of the last digit that a cell shows of a number: what it can be off by.

    With a fixed or scientific format that is its last place. Otherwise it is the last decimal of
    the number itself, of whose digits the General format shows ten; a whole number is shown to its
    units.
    """
    plain = _AROUND.sub("", code).partition(";")[0].strip()
    fixed, scientific = _FIXED.fullmatch(plain), _SCIENTIFIC.fullmatch(plain)
    if fixed is not None:
        return 0.5 * 10.0 ** -(len(fixed[1] or "") + 2 * len(fixed[2]))
    exponent = math.floor(math.log10(abs(value))) if value else 0
    digits = min(max(significant_digits(value), exponent + 1), _GENERAL_DIGITS)
    if scientific is not None:
        digits = 1 + len(scientific[1] or "")
    return 0.5 * 10.0 ** (exponent - digits + 1)
