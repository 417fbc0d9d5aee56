"""Filling a workbook: plan, edits, and one safe step to put the result in place."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path
from typing import BinaryIO, Unpack

from epochconv.history import ExpansionHistory
from epochconv.published import history_of
from workbook_tools import sheet_edits
from workbook_tools.archive import Archive
from workbook_tools.dependents import Dependents, readers_of
from workbook_tools.errors import Refusal
from workbook_tools.open_workbook import OpenWorkbook
from workbook_tools.parts import recalculate_on_load
from workbook_tools.placement import prepare
from workbook_tools.plan import plan_columns
from workbook_tools.plan_of_workbook import check_protection, plan_workbook
from workbook_tools.request import Choices, Request, request_of
from workbook_tools.safe_replace import put_in_place
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.splice import Edit, EditKind, spliced
from workbook_tools.tables import grow


@dataclass
class FillResult:
    """What a fill did.

    Attributes:
        path: the workbook that holds the result; the one that was read where nothing changed.
        kept: the dated copy of the old workbook, None where it was not replaced.
        written: whether a file was written.
        history: under which values were converted.
        plans: one for each sheet that was filled.
        dependents: formulas, names and charts that were there before and read filled cells, by
            sheet that was filled.
        warnings: sentences for the person at the keyboard.
        edit_counts: how many edits of each kind each changed part got.
    """

    path: Path
    kept: Path | None
    written: bool
    history: ExpansionHistory
    plans: list[SheetPlan]
    dependents: dict[str, Dependents] = field(default_factory=dict)
    warnings: list[str] = field(default_factory=list)
    edit_counts: dict[str, Counter[EditKind]] = field(default_factory=dict)

    @property
    def left(self) -> list[tuple[str, str, str]]:
        """Sheet, cell and reason of each cell that stays unfilled for a reason."""
        return [(p.reading.sheet.name, one.cell, one.reason) for p in self.plans for one in p.left]

    @property
    def counts(self) -> dict[str, int]:
        """How many cells were left for each reason."""
        return dict(Counter(reason for _, _, reason in self.left))

    @property
    def filled(self) -> int:
        """How many cells were filled."""
        return sum(plan.filled for plan in self.plans)


def fill(
    path: str | Path,
    *,
    output: str | Path | None = None,
    ignore_lock: bool = False,
    now: datetime | None = None,
    **choices: Unpack[Choices],
) -> FillResult:
    """Fill the columns of a log that its headings ask for, and change nothing else.

    Args:
        path: the workbook (.xlsx, .xlsm, .xltx, .xltm).
        output: a new file for the result; without it the workbook is replaced in one step and a
            dated copy of the old one is kept beside it (the last five of them).
        ignore_lock: go on though an owner file says that somebody has the workbook open.
        now: local time, for the name of the dated copy.
        choices: what to fill and how to read it; see `workbook_tools.Choices`.

    Raises:
        UsageError: the request is ambiguous or names what is not there.
        Refusal: the workbook cannot be filled without harm; the file is untouched.
        ArgumentError: no such parameter set, or an error term that it or the source lacks.
    """
    request = request_of(**choices)
    task = _Task(Path(path), output, ignore_lock, now)
    plans, notes = plan_workbook(task.workbook, request)
    return task.carry_out(plans, request.history, notes)


def write_columns(
    path: str | Path,
    output: str | Path,
    sheet: str,
    columns: Mapping[str, Sequence[float | None]],
    *,
    first_row: int,
    allow_protected: bool = False,
    now: datetime | None = None,
) -> FillResult:
    """Put given numbers at the right edge of a sheet, through the same splice as a fill.

    Args:
        output: a new file for the result.
        columns: by heading; the heading goes into the row above `first_row`, where there is one.
        first_row: row of the first number; None leaves a cell alone.

    Raises:
        UsageError, Refusal: as `fill`.
    """
    task = _Task(Path(path), output, False, now)
    (named,) = task.workbook.sheets(sheet)
    reading = task.workbook.reading(named, Request(history_of(None)))
    check_protection(task.workbook, [SheetPlan(reading)], allow_protected)
    plan = plan_columns(reading, columns, first_row, task.workbook.styles)
    return task.carry_out([plan], history_of(None), [])


class _Task:
    """One workbook on its way to a result."""

    def __init__(
        self, path: Path, output: str | Path | None, ignore_lock: bool, now: datetime | None
    ) -> None:
        self.now = now or datetime.now()
        self.placement = prepare(
            path, output=None if output is None else Path(output), ignore_lock=ignore_lock
        )
        self.workbook = OpenWorkbook(self.placement.source)

    def carry_out(
        self, plans: list[SheetPlan], history: ExpansionHistory, notes: list[str]
    ) -> FillResult:
        """Write what the plans say; without new cells only an output that was named is written."""
        result = FillResult(
            self.placement.destination if not self.placement.in_place else self.placement.source,
            None,
            False,
            history,
            plans,
            warnings=[*self.workbook.map.warnings, *notes],
        )
        busy = [plan for plan in plans if plan.changed]
        if not busy and self.placement.in_place:
            return result
        for plan in busy:
            found = readers_of(
                self.workbook, self.workbook.map, plan.reading.sheet.name, plan.changed
            )
            if found:
                result.dependents[plan.reading.sheet.name] = found
        changes = dict(self._edited_parts(busy, result))

        def write(sink: BinaryIO) -> None:
            pieces = {}
            for name, (xml, edits) in changes.items():
                counts = result.edit_counts[name] = Counter[EditKind]()
                pieces[name] = spliced(xml, edits, counts)
            self.workbook.archive.rewrite(sink, pieces)

        replaced = put_in_place(
            self.placement, write, verify=lambda p: self._verify(p, list(changes)), now=self.now
        )
        result.path, result.kept, result.written = replaced.path, replaced.kept, True
        result.warnings += replaced.warnings
        return result

    def _edited_parts(
        self, plans: list[SheetPlan], result: FillResult
    ) -> Iterator[tuple[str, tuple[bytes, Iterable[Edit]]]]:
        """Yield each part that changes, its old content and its edits."""
        workbook = self.workbook
        for plan in plans:
            scan = plan.reading.scan
            yield plan.reading.sheet.part, (scan.xml, sheet_edits.edits(scan, plan.cells))
            if plan.grown is not None:
                table, names = plan.grown
                xml = workbook.read(table.part)
                yield table.part, (xml, grow(xml, table.part, names))
        part = workbook.map.styles_part
        if workbook.styles is not None and part is not None:
            edits = workbook.styles.edits()
            if edits:
                yield part, (workbook.read(part), edits)
        if any(found.cells for found in result.dependents.values()):
            xml = workbook.read(workbook.map.part)
            edits = recalculate_on_load(xml, workbook.map.part)
            if edits:
                yield workbook.map.part, (xml, edits)

    def _verify(self, path: Path, changed: list[str]) -> None:
        """Open the result again: all members are there, and the changed ones unpack whole."""
        written = Archive.open(path)
        if written.names() != self.workbook.archive.names():
            raise Refusal(
                f"the result of {self.workbook.label} lacks parts after writing; check the disk"
            )
        for name in changed:
            written.check(name)
