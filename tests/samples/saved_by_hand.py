"""Parts that a spreadsheet program writes otherwise than XlsxWriter."""

from __future__ import annotations

import re
from pathlib import Path

from tests.workbook_tools.repack import part, swapped

# In a cell that says no type: a text, a logical value and an error do.
_NUMBER = re.compile(
    rb'(<c r="[A-Z]+[0-9]+"(?: s="[0-9]+")?>(?:<f[^>]*>[^<]*</f>)?)'
    rb"<v>(-?[0-9.]+(?:E[-+]?[0-9]+)?)</v>"
)


def as_saved_by_hand(raw: Path, sheets: int) -> dict[str, bytes | None]:
    """The parts of a workbook as they would be had people typed and saved it.

    Args:
        raw: as XlsxWriter wrote it.
        sheets: how many worksheets it has.
    """
    workbook = "xl/workbook.xml"
    # A log that people save does not order the next program to recalculate it.
    parts: dict[str, bytes | None] = {
        workbook: swapped(part(raw, workbook), ' fullCalcOnLoad="1"', "")
    }
    for number in range(1, sheets + 1):
        name = f"xl/worksheets/sheet{number}.xml"
        parts[name] = _NUMBER.sub(_with_seventeen_digits, part(raw, name))
    return parts


def _with_seventeen_digits(value: re.Match[bytes]) -> bytes:
    """Excel keeps 15 digits of what is typed and stores the nearest double with 17."""
    typed = float(f"{float(value[2]):.15g}")
    return b"%b<v>%b</v>" % (value[1], f"{typed:.17G}".encode())
