"""Cell formats of the sample, made when first asked for."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from xlsxwriter.format import Format
from xlsxwriter.workbook import Workbook

FONT = {"font_name": "Calibri", "font_size": 10}
HEADER = {
    "bold": True,
    "font_color": "#FFFFFF",
    "bg_color": "#3B5573",
    "text_wrap": True,
    "align": "center",
    "valign": "vcenter",
    "bottom": 1,
}
# Colours that the observers paint whole rows in.
MARKS = {
    "again": {"bg_color": "#FFF2CC"},
    "dropped": {"bg_color": "#E3E3E3", "font_color": "#7F7F7F"},
}
DATE = {"num_format": "yyyy-mm-dd", "align": "center"}


class Looks:
    """Formats of one workbook, each made once."""

    def __init__(self, book: Workbook) -> None:
        self._book = book
        self._made: dict[tuple[tuple[str, Any], ...], Format] = {}

    def of(self, *parts: Mapping[str, Any]) -> Format:
        """The format with the properties of all `parts`, the last that names one wins."""
        properties: dict[str, Any] = dict(FONT)
        for part in parts:
            properties |= part
        key = tuple(sorted(properties.items()))
        if key not in self._made:
            self._made[key] = self._book.add_format(properties)
        return self._made[key]
