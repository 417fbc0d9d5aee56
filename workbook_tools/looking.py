"""What the tool sees in a workbook and would do; it reads and plans as a fill does."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Unpack

import numpy as np

from epochconv.errors import EpochconvError
from epochconv.history import ExpansionHistory
from workbook_tools.column_meanings import ERRORS, Meaning, Role
from workbook_tools.open_workbook import OpenWorkbook
from workbook_tools.parts import Sheet, SheetKind
from workbook_tools.plan_of_workbook import plan_workbook
from workbook_tools.request import Choices, request_of
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.sheet_reading import SheetReading
from workbook_tools.typed_cells import LIMIT, NUMBER, WORD
from workbook_tools.value_columns import read_values


@dataclass(frozen=True)
class CellKinds:
    """How the cells of a column read: counts, and the address of the first of each.

    Attributes:
        counts: by kind: "numbers", "limits", "with errors", "blank", "no value", "left",
            "passed over".
        first: address of the first, by kind.
        left: of cells that are left: how many and the first, by reason.
        remarks: of cells that are read with a remark: how many and the first, by remark.
        words: how often each word for "no value" stands.
    """

    counts: dict[str, int]
    first: dict[str, str]
    left: dict[str, tuple[int, str]]
    remarks: dict[str, tuple[int, str]]
    words: dict[str, int]


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
        stop: why a fill would stop, None if it would not.
        warnings: sentences about the workbook.
    """

    label: str
    history: ExpansionHistory
    sheets: list[SeenSheet]
    stop: EpochconvError | None
    warnings: list[str]

    @property
    def left(self) -> bool:
        """Whether a fill would leave cells with a reason."""
        return any(one.plan is not None and one.plan.left for one in self.sheets)


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
    stop = None
    try:
        # Its notes are about unclear headings, which stand with their columns here.
        plans, _ = plan_workbook(workbook, request)
    except EpochconvError as error:
        stop = error
    meant = workbook.sheets(request.sheet)
    sheets = []
    for sheet in workbook.map.sheets:
        plan = next((one for one in plans if one.reading.sheet == sheet), None)
        if sheet in meant and sheet.kind is SheetKind.WORKSHEET:
            sheets.append(_seen(workbook.reading(sheet, request), plan))
        elif request.sheet is None:
            sheets.append(SeenSheet(sheet))
    return Look(workbook.label, request.history, sheets, stop, list(workbook.map.warnings))


def _seen(reading: SheetReading, plan: SheetPlan | None) -> SeenSheet:
    numbers = reading.scan.numbers
    rows = (numbers[reading.rows[0]], numbers[reading.rows[-1]]) if reading.rows else None
    columns = [
        SeenColumn(
            column,
            " ".join(reading.texts.get(column, "").split()),
            meaning,
            _kinds(reading, column, meaning),
        )
        for column, meaning in sorted(reading.meanings.items())
    ]
    return SeenSheet(reading.sheet, reading.header_row, rows, columns, plan)


def _kinds(reading: SheetReading, column: int, meaning: Meaning) -> CellKinds | None:
    """Return how the cells of a column of values or errors read; None for other columns."""
    if meaning.role is Role.VALUE and meaning.heading is not None:
        values = read_values(reading, column, meaning.heading)
        cells, reasons, remarks = values.cells, values.reasons, values.remarks
        passed = values.passed_over
        limits, known = values.limits, ~np.isnan(values.values)
        errors = np.flatnonzero(~np.isnan(values.lower)).tolist()
    elif meaning.role in ERRORS:
        (cells,) = reading.columns([column])
        reasons, remarks, limits, passed, errors = (
            cells.reasons,
            cells.remarks,
            cells.limits,
            {},
            [],
        )
        known = np.isin(np.frombuffer(cells.kinds, dtype=np.uint8), (NUMBER, LIMIT))
    else:
        return None
    kinds = np.frombuffer(cells.kinds, dtype=np.uint8)
    places = {
        "numbers": [p for p in np.flatnonzero(known).tolist() if p not in limits],
        "limits": sorted(limits),
        "with errors": errors,
        "blank": np.flatnonzero(kinds < WORD).tolist(),
        "no value": [p for p in np.flatnonzero(kinds == WORD).tolist() if p not in passed],
        "left": sorted(reasons),
        "passed over": sorted(passed),
    }
    return CellKinds(
        {kind: len(found) for kind, found in places.items() if found},
        {kind: reading.where(found[0], column) for kind, found in places.items() if found},
        _by_words(reading, column, ((reason, [p]) for p, reason in sorted(reasons.items()))),
        _by_words(reading, column, remarks.items()),
        dict(Counter(cells.shown[p] for p in places["no value"])),
    )


def _by_words(
    reading: SheetReading, column: int, cells: Iterable[tuple[str, Sequence[int]]]
) -> dict[str, tuple[int, str]]:
    """Return how many cells there are for each reason or remark, and the address of the first."""
    found: dict[str, tuple[int, str]] = {}
    for words, positions in cells:
        count, first = found.get(words, (0, reading.where(min(positions), column)))
        found[words] = (count + len(positions), first)
    return found
