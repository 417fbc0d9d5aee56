"""What the tool sees in a workbook and would do; it reads and plans as a fill does."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Unpack

import numpy as np

from epochconv.errors import EpochconvError
from epochconv.history import ExpansionHistory
from workbook_tools.column_meanings import Meaning, Role
from workbook_tools.open_workbook import OpenWorkbook
from workbook_tools.parts import Sheet, SheetKind
from workbook_tools.plan_of_workbook import plan_workbook
from workbook_tools.request import Choices, request_of
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import LEFT, LIMIT, NUMBER, WORD


@dataclass(frozen=True)
class CellKinds:
    """How the cells of a column read: counts, and the address of the first of each.

    Attributes:
        counts: by kind: "numbers", "limits", "with errors", "blank", "no value", "left".
        first: address of the first, by kind.
        reasons: of cells that are left: how many and the first, by reason.
    """

    counts: dict[str, int]
    first: dict[str, str]
    reasons: dict[str, tuple[int, str]]


@dataclass(frozen=True)
class SeenColumn:
    """One column with a heading: what it is taken for, and how its cells read if they matter."""

    column: int
    text: str
    meaning: Meaning
    cells: CellKinds | None


@dataclass
class SeenSheet:
    """One sheet as the tool sees it.

    Attributes:
        sheet: the sheet.
        header_row: number of the row of headings, None where none was found.
        rows: numbers of the first and last row of the log, None for none.
        columns: those with a heading, from left to right.
        plan: what a fill would do; None where it would do nothing to this sheet.
    """

    sheet: Sheet
    header_row: int | None = None
    rows: tuple[int, int] | None = None
    columns: list[SeenColumn] = field(default_factory=list)
    plan: SheetPlan | None = None


@dataclass
class Look:
    """What is seen in a workbook.

    Attributes:
        label: name of the file.
        history: under which a fill would convert.
        sheets: in the order of their tabs.
        stop: why a fill would stop, "" if it would not.
        warnings: sentences about the workbook.
    """

    label: str
    history: ExpansionHistory
    sheets: list[SeenSheet]
    stop: str
    warnings: list[str]


def look(path: str | Path, **choices: Unpack[Choices]) -> Look:
    """Say what a fill with the same choices sees in a workbook and would do; change nothing.

    Raises:
        Refusal: the workbook cannot be read, or could not be filled without harm.
        UsageError: a sheet or header row that is named is not there.
        ArgumentError: no such parameter set.
    """
    request = request_of(**choices)
    workbook = OpenWorkbook(Path(path), keeps_readings=True)
    plans: list[SheetPlan] = []
    notes: list[str] = []
    stop = ""
    try:
        plans, notes = plan_workbook(workbook, request)
    except EpochconvError as error:
        stop = str(error)
    meant = workbook.sheets(request.sheet)
    sheets = []
    for sheet in workbook.map.sheets:
        plan = next((one for one in plans if one.reading.sheet == sheet), None)
        if sheet in meant and sheet.kind is SheetKind.WORKSHEET:
            sheets.append(_seen(workbook.reading(sheet, request), plan))
        elif request.sheet is None:
            sheets.append(SeenSheet(sheet))
    return Look(workbook.label, request.history, sheets, stop, [*workbook.map.warnings, *notes])


def _seen(reading: SheetReading, plan: SheetPlan | None) -> SeenSheet:
    numbers = reading.scan.numbers
    rows = (numbers[reading.rows[0]], numbers[reading.rows[-1]]) if reading.rows else None
    columns = [
        SeenColumn(
            column,
            " ".join(reading.texts.get(column, "").split()),
            meaning,
            _kinds(reading, column) if _matters(meaning) else None,
        )
        for column, meaning in sorted(reading.meanings.items())
    ]
    return SeenSheet(reading.sheet, reading.header_row, rows, columns, plan)


def _matters(meaning: Meaning) -> bool:
    errors = (Role.ERROR, Role.UPPER_ERROR, Role.LOWER_ERROR)
    return meaning.role is Role.VALUE or meaning.role in errors


def _kinds(reading: SheetReading, column: int) -> CellKinds:
    (cells,) = reading.columns([column])
    kinds = np.frombuffer(cells.kinds, dtype=np.uint8)
    places = {
        "numbers": np.flatnonzero(kinds == NUMBER).tolist(),
        "limits": np.flatnonzero(kinds == LIMIT).tolist(),
        "with errors": sorted(cells.errors),
        "blank": np.flatnonzero(kinds < WORD).tolist(),
        "no value": np.flatnonzero(kinds == WORD).tolist(),
        "left": np.flatnonzero(kinds == LEFT).tolist(),
    }
    reasons: dict[str, tuple[int, str]] = {}
    for position, reason in sorted(cells.reasons.items()):
        count, first = reasons.get(reason, (0, reading.where(position, column)))
        reasons[reason] = (count + 1, first)
    return CellKinds(
        {kind: len(found) for kind, found in places.items() if found},
        {kind: reading.where(found[0], column) for kind, found in places.items() if found},
        reasons,
    )
