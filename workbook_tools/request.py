"""What somebody asks of a fill; plain data, checked where it is used."""

from __future__ import annotations

from dataclasses import dataclass

from epochconv.history import ExpansionHistory


@dataclass(frozen=True)
class Request:
    """The choices of a fill.

    Attributes:
        history: under which to convert.
        sheet: name of the sheet; None for every visible one that has something to fill.
        header_row: number of the row of headings; None to find it.
        add: headings of columns to append at the right edge of the data.
        only: headings of the existing columns to fill; empty for all that are recognised.
        source: heading of the column to convert from, or its letters as "C:C"; None to find it.
        source_measure: heading that says what the source column holds, whatever its own says.
        side: "nearer" or "farther" where the source's map turns over.
        allow_protected: whether a protected sheet may be filled.
    """

    history: ExpansionHistory
    sheet: str | None = None
    header_row: int | None = None
    add: tuple[str, ...] = ()
    only: tuple[str, ...] = ()
    source: str | None = None
    source_measure: str | None = None
    side: str | None = None
    allow_protected: bool = False
