"""What a hand can leave in a cell, and how it is written there with XlsxWriter."""

from __future__ import annotations

import datetime
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

from xlsxwriter.worksheet import Worksheet

from tests.samples.looks import Looks

# Stands for the result of a formula that nobody has computed; the builder takes it out.
NEVER_COMPUTED = 987654321

STRUCK: Mapping[str, Any] = {"font_strikeout": True}
_RUNS: Mapping[str, Mapping[str, Any]] = {
    "": {},
    "raised": {"font_script": 1},
    "lowered": {"font_script": 2},
    "struck": STRUCK,
}


@dataclass(frozen=True)
class Rich:
    """A text of runs, each with its look: "", "raised", "lowered" or "struck"."""

    runs: tuple[tuple[str, str], ...]


@dataclass(frozen=True)
class Formula:
    """A formula and its stored result; None where there is none."""

    text: str
    result: float | str | None


@dataclass(frozen=True)
class Styled:
    """An entry with a look of its own, such as a number format."""

    entry: str | float
    look: Mapping[str, Any]


@dataclass(frozen=True)
class DateOf:
    """What a spreadsheet program made of a text that looked like a day and a month to it."""

    day: datetime.date


Entry = str | float | bool | datetime.date | Rich | Formula | Styled | DateOf | None


def struck(entry: str | float) -> Styled:
    """An entry that somebody has struck through."""
    return Styled(entry, STRUCK)


def percent(number: float) -> Styled:
    """A number that was typed with a percent sign."""
    return Styled(number, {"num_format": "0%"})


def write_entry(
    sheet: Worksheet, looks: Looks, place: tuple[int, int], entry: Entry, look: Mapping[str, Any]
) -> None:
    """Write an entry to a cell, counted from zero; None leaves the cell alone."""
    kind = looks.of(look)
    if isinstance(entry, bool):
        sheet.write_boolean(*place, entry, kind)
    elif isinstance(entry, str):
        sheet.write_string(*place, entry, kind)
    elif isinstance(entry, int | float):
        sheet.write_number(*place, entry, kind)
    elif isinstance(entry, Styled):
        write_entry(sheet, looks, place, entry.entry, {**look, **entry.look})
    elif isinstance(entry, DateOf):
        sheet.write_datetime(*place, entry.day, looks.of(look, {"num_format": "d-mmm"}))
    elif isinstance(entry, datetime.date):
        sheet.write_datetime(*place, entry, kind)
    elif isinstance(entry, Formula):
        result = NEVER_COMPUTED if entry.result is None else entry.result
        sheet.write_formula(*place, entry.text, kind, result)
    elif isinstance(entry, Rich):
        _write_rich(sheet, looks, place, entry, look)


def _write_rich(
    sheet: Worksheet, looks: Looks, place: tuple[int, int], entry: Rich, look: Mapping[str, Any]
) -> None:
    pieces: list[Any] = []
    for text, run in entry.runs:
        # XlsxWriter wants a format before each run.
        pieces += [looks.of(look, _RUNS[run]), text]
    sheet.write_rich_string(*place, *pieces, looks.of(look))
