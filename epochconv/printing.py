"""Numbers, units and small tables as text; pure."""

from __future__ import annotations

import math
from collections.abc import Sequence

_MOST_DIGITS = 12


def number_text(value: float, digits: int = 6) -> str:
    """Return a number with that many significant digits, without needless zeros or exponents."""
    if math.isnan(value):
        return "none"
    text = f"{value:.{digits}g}"
    if "e" in text and 1e-4 <= abs(value) < 1e7:
        decimals = max(0, digits - 1 - math.floor(math.log10(abs(value))))
        text = f"{value:.{decimals}f}"
    mantissa, mark, exponent = text.partition("e")
    return f"{mantissa}e{int(exponent)}" if mark else text


def value_with_errors(value: float, lower: float, upper: float) -> str:
    """Return a value and the sizes of its errors, to the second digit of the smaller one.

    Such as "12.87 ± 0.04", "12.87 +0.05 −0.04" or "(1.23 ± 0.12)e-9"; infinite errors read "inf".
    """
    if math.isnan(value):
        return number_text(value)
    if math.isnan(lower) or math.isnan(upper):
        return f"{number_text(value)} (error not known)"
    sizes = [size for size in (lower, upper) if 0.0 < size < math.inf]
    leading = math.floor(math.log10(max(abs(value), min(sizes)))) if sizes else 0
    digits = 1 - math.floor(math.log10(min(sizes))) if sizes else math.inf
    power = 0 if -4 <= leading < 7 else leading
    if digits > _MOST_DIGITS - leading:  # as good as no error
        number, above, below = number_text(value, 12), number_text(upper, 2), number_text(lower, 2)
        power = 0
    else:
        decimals = int(digits) + power
        number, above, below = (
            _rounded(part / 10.0**power, decimals) for part in (value, upper, lower)
        )
    text = f"{number} ± {above}" if above == below else f"{number} +{above} −{below}"
    return f"({text})e{power}" if power else text


def _rounded(value: float, decimals: int) -> str:
    return str(value) if math.isinf(value) else f"{round(value, decimals):.{max(decimals, 0)}f}"


def with_unit(number: str, unit: str) -> str:
    """Return number and unit with a blank between, or the number alone."""
    return f"{number} {unit}" if unit else number


def text_table(rows: Sequence[Sequence[str]], right: Sequence[bool]) -> str:
    """Return rows in aligned columns, two blanks apart; `right` tells which columns align right."""
    widths = [max(len(row[i]) for row in rows) for i in range(len(rows[0]))]
    lines = []
    for row in rows:
        cells = [
            cell.rjust(width) if flush else cell.ljust(width)
            for cell, width, flush in zip(row, widths, right, strict=True)
        ]
        lines.append("  ".join(cells).rstrip())
    return "\n".join(lines)
