"""Numbers, units and small tables as text; pure."""

from __future__ import annotations

import math
from collections.abc import Sequence


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
