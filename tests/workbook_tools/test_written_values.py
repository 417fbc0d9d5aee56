"""Numbers and ranges that a file says; what it says wrongly is a damaged file, no wrong call."""

from __future__ import annotations

import pytest

from workbook_tools.cell_address import Range
from workbook_tools.errors import Refusal
from workbook_tools.written_values import range_in, whole_number


@pytest.mark.parametrize(("text", "number"), [("0", 0), (b"17", 17), (" 3 ", 3), ("16384", 16384)])
def test_whole_numbers(text: str | bytes, number: int) -> None:
    assert whole_number(text, "part.xml") == number


@pytest.mark.parametrize("text", ["", "x", "-1", "1.5", "1e3", b"\xd9\xa1", "99999999999", "0x1"])
def test_what_is_no_whole_number_is_refused(text: str | bytes) -> None:
    with pytest.raises(Refusal, match=r"part\.xml says '.*' where a whole number belongs; open"):
        whole_number(text, "part.xml")


def test_ranges() -> None:
    assert range_in("B2:D4", "part.xml") == Range(2, 2, 4, 4)


@pytest.mark.parametrize("text", [None, "", "B", "B2:", "B2:D4:F6", "XFE1"])
def test_what_is_no_range_is_refused(text: str | None) -> None:
    with pytest.raises(Refusal, match=r"part\.xml says '.*' where a range of cells belongs; open"):
        range_in(text, "part.xml")
