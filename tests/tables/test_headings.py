"""The table of headings and header blocks, read one by one.

`headings.csv` was written from the conventions and from practice before any of it was read by the
code. A heading is a cell; ` | ` parts cells and ` // ` parts rows; <line>, <nbsp> and <zwsp> stand
for a line break, a no-break space and an invisible one. A reading that begins with "unclear" lists
what its reason must say.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from epochconv.registry import measures
from workbook_tools.column_meanings import Meaning, Role
from workbook_tools.header_rows import read_headings

TABLE = Path(__file__).with_name("headings.csv")
SIGNS = {"<line>": "\n", "<nbsp>": "\u00a0", "<zwsp>": "\u200b"}
REFUSED = ("unclear", "other")

with TABLE.open(encoding="utf-8", newline="") as file:
    ROWS = [(row["heading"], row["reading"]) for row in csv.DictReader(file)]


def block(heading: str) -> list[dict[int, str]]:
    """Return the rows of a block, texts by column."""
    for name, sign in SIGNS.items():
        heading = heading.replace(name, sign)
    return [
        {column: cell for column, cell in enumerate(row.split(" | "), 1) if cell.strip()}
        for row in heading.split(" // ")
    ]


def told(meaning: Meaning) -> str:
    """Return a meaning in the words of the table."""
    words = meaning.role.value
    if meaning.heading is not None:
        heading = meaning.heading
        words = heading.measure.name
        if heading.unit.symbol:
            words += f" in {heading.unit.symbol}"
        if heading.h_power:
            words += f", h {heading.h_power}"
        return ", ".join(filter(None, (words, heading.frame, heading.method)))
    if meaning.role in (Role.UNCLEAR, Role.CARRIED):
        words += f": {meaning.reason}"
    if meaning.of:
        words += f" of {meaning.of}"
    return words + (f" in {meaning.unit.symbol}" if meaning.unit is not None else "")


@pytest.mark.parametrize(("heading", "reading"), ROWS, ids=[heading for heading, _ in ROWS])
def test_reading(heading: str, reading: str) -> None:
    rows = block(heading)
    found = read_headings(rows)
    assert list(found) == sorted({column for row in rows for column in row})
    for expected, meaning in zip(reading.split(" | "), found.values(), strict=True):
        kind, _, wanted = expected.partition(":")
        if kind == "unclear":
            assert meaning.role is Role.UNCLEAR, told(meaning)
            for words in wanted.split(";"):
                assert words.strip() in meaning.reason
        else:
            assert told(meaning) == expected


def test_table_is_as_large_and_as_wary_as_promised() -> None:
    """At least 150 entries, a third of them rightly refused, and every measure among the rest."""
    assert len(ROWS) >= 150
    assert len({heading for heading, _ in ROWS}) == len(ROWS)
    refused = [r for _, r in ROWS if all(one.startswith(REFUSED) for one in r.split(" | "))]
    assert 3 * len(refused) >= len(ROWS)
    read = {one.partition(" in ")[0].split(",")[0] for _, r in ROWS for one in r.split(" | ")}
    assert {measure.name for measure in measures()} <= read
