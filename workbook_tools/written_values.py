"""Whole numbers and ranges as the parts of a workbook write them; a malformed one is refused.

What people type on the command line is a wrong call; what a file says wrongly is a damaged file.
"""

from __future__ import annotations

from workbook_tools.cell_address import Range, parse_range
from workbook_tools.errors import Refusal, UsageError


def whole_number(text: str | bytes, part: str) -> int:
    """Return a number such as that of a style, a text or a column.

    Raises:
        Refusal: it is none, or has more digits than any count in a sheet.
    """
    shown = text.decode() if isinstance(text, bytes) else text
    digits = shown.strip()
    if digits.isascii() and digits.isdecimal() and len(digits) <= 10:
        return int(digits)
    raise _damaged(part, shown, "a whole number")


def range_in(text: str | None, part: str) -> Range:
    """Return a rectangle of cells; None stands for an attribute that is missing.

    Raises:
        Refusal: it is none.
    """
    try:
        return parse_range(text or "")
    except UsageError as error:
        raise _damaged(part, text or "", "a range of cells") from error


def _damaged(part: str, text: str, wanted: str) -> Refusal:
    return Refusal(
        f"{part} says {text!r} where {wanted} belongs; open the workbook in its own program, let it"
        " repair the file and save it again."
    )
