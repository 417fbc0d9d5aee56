"""The invented programme: what its observers typed, from the two CSV files beside this module.

As in a spreadsheet, an apostrophe in front makes a number a text.
"""

from __future__ import annotations

import csv
import datetime
from collections.abc import Mapping, Sequence
from pathlib import Path

HERE = Path(__file__).parent
CLASSES = ("quasar", "lensed galaxy", "burst", "supernova", "absorber", "neighbour")

Cell = str | float | datetime.date | None
Row = Mapping[str, Cell]


def read_rows(name: str, *, numbers: Sequence[str], dates: Sequence[str] = ("night",)) -> list[Row]:
    """The rows of one CSV file, by field.

    Args:
        name: of the file, without its ending.
        numbers: fields that hold numbers, but for texts after an apostrophe.
        dates: fields that hold dates.
    """
    with (HERE / f"{name}.csv").open(encoding="utf-8", newline="") as stream:
        return [
            {field: _cell(text, field in numbers, field in dates) for field, text in line.items()}
            for line in csv.DictReader(stream)
        ]


def night_log() -> list[Row]:
    """Rows of the main log, oldest first."""
    numbers = ("exposure", "seeing", "z", "e_z", "lookback", "priority")
    return read_rows("night_log", numbers=numbers)


def wide_field() -> list[Row]:
    """Rows of the other team's log."""
    return read_rows("wide_field", numbers=("r", "colour", "z", "minutes"))


def _cell(text: str, is_number: bool, is_date: bool) -> Cell:
    if not text:
        return None
    if text.startswith("'"):
        return text[1:]
    if is_date:
        return datetime.date.fromisoformat(text)
    return float(text) if is_number else text
