"""What a fill does to one sheet, as plain data: the report and the edits are made from it alike."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import NamedTuple

from workbook_tools.cell_address import Range
from workbook_tools.column_meanings import Heading
from workbook_tools.sheet_edits import NewCells
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.tables import Table


class NamedCell(NamedTuple):
    """A cell that is named in the report.

    Attributes:
        cell: its address.
        reason: why; the same words for the same cause.
        text: what it shows, where that helps; "" otherwise.
    """

    cell: str
    reason: str
    text: str = ""


@dataclass(frozen=True)
class FilledColumn:
    """One column that gets values, errors or signs.

    Attributes:
        text: its heading.
        heading: the values that it holds, or to which its errors or signs belong.
        holds: "values", "errors", "upper errors", "lower errors" or "limit signs".
        column: counted from 1.
        source, source_column: what it is converted from.
        count: how many cells are filled.
        limits: how many of them are limits.
        added: whether the column is new.
    """

    text: str
    heading: Heading
    holds: str
    column: int
    source: Heading
    source_column: int
    count: int
    limits: int
    added: bool


@dataclass
class SheetPlan:
    """All that a fill does to one sheet.

    Attributes:
        reading: the sheet.
        source: the column to convert from, None where the sheet has none.
        columns: the columns that get values.
        cells: the new cells.
        grown: the table that grows and the names of its new columns, or None.
        left: the cells that stay unfilled for a reason.
        remarks: what a person should know of cells that were read, with their addresses.
        passed_over: the cells in rows that are none of the log.
        notes: sentences for the report, warnings of whole columns among them.
    """

    reading: SheetReading
    source: int | None = None
    columns: list[FilledColumn] = field(default_factory=list)
    cells: list[NewCells] = field(default_factory=list)
    grown: tuple[Table, list[str]] | None = None
    left: list[NamedCell] = field(default_factory=list)
    remarks: dict[str, list[str]] = field(default_factory=dict)
    passed_over: list[NamedCell] = field(default_factory=list)
    notes: list[str] = field(default_factory=list)

    @property
    def filled(self) -> int:
        """How many cells below the headings get something."""
        if self.columns:
            return sum(one.count for one in self.columns)
        return sum(len(one.rows) for one in self.cells)

    @property
    def changed(self) -> list[Range]:
        """The rectangles that get new cells."""
        return [one.extent for one in self.cells if one.rows or one.texts]
