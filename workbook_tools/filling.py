"""Filling a workbook: plan, edits, and one safe step to put the result in place."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path
from typing import BinaryIO

from epochconv.history import ExpansionHistory
from epochconv.published import history_of
from workbook_tools import sheet_edits
from workbook_tools.archive import Archive
from workbook_tools.dependents import Dependents, readers_of
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.headings import same_heading
from workbook_tools.open_workbook import OpenWorkbook
from workbook_tools.parts import recalculate_on_load
from workbook_tools.placement import prepare
from workbook_tools.plan import SheetPlan, plan_columns, plan_sheet
from workbook_tools.request import Request
from workbook_tools.safe_replace import put_in_place
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
        return [(p.reading.sheet.name, cell, why) for p in self.plans for cell, why in p.left]

    @property
    def counts(self) -> dict[str, int]:
        """How many cells were left for each reason."""
        return dict(Counter(reason for _, _, reason in self.left))

    @property
    def filled(self) -> int:
        """How many cells were filled."""
        return sum(len(one.rows) for plan in self.plans for one in plan.cells)


def fill(
    path: str | Path,
    *,
    output: str | Path | None = None,
    sheet: str | None = None,
    header_row: int | None = None,
    add: Sequence[str] = (),
    only: Sequence[str] = (),
    source: str | None = None,
    source_measure: str | None = None,
    parameters: ExpansionHistory | str | None = None,
    side: str | None = None,
    allow_protected: bool = False,
    ignore_lock: bool = False,
    now: datetime | None = None,
) -> FillResult:
    """Fill the columns of a log that its headings ask for, and change nothing else.

    Args:
        path: the workbook (.xlsx, .xlsm, .xltx, .xltm).
        output: a new file for the result; without it the workbook is replaced in one step and a
            dated copy of the old one is kept beside it (the last five of them).
        sheet: name of the sheet; by default every visible one that has something to fill.
        header_row: number of the row of headings; by default it is found.
        add: headings of columns to append at the right edge of the data, such as "Age [Gyr]".
        only: headings of the existing columns to fill; by default all that are recognised.
        source: heading of the column to convert from, or its letters as "C:C".
        source_measure: what that column holds, whatever its heading says: "redshift", "age [Gyr]".
        parameters: an ExpansionHistory or the name of a parameter set; by default "planck 2018".
        side: "nearer" or "farther" where the source's map turns over.
        allow_protected: fill protected sheets too.
        ignore_lock: go on though an owner file says that somebody has the workbook open.
        now: local time, for the name of the dated copy.

    Raises:
        UsageError: the request is ambiguous or names what is not there.
        Refusal: the workbook cannot be filled without harm; the file is untouched.
        ArgumentError: no such parameter set.
    """
    request = Request(
        history=history_of(parameters),
        sheet=sheet,
        header_row=header_row,
        add=tuple(add),
        only=tuple(only),
        source=source,
        source_measure=source_measure,
        side=side,
        allow_protected=allow_protected,
    )
    task = _Task(Path(path), output, ignore_lock, now)
    plans, notes = _plans(task.workbook, request)
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
    reading = task.workbook.reading(named, None)
    _check_protection(task.workbook, [SheetPlan(reading)], allow_protected)
    plan = plan_columns(reading, columns, first_row, task.workbook.styles)
    return task.carry_out([plan], history_of(None), [])


def _plans(workbook: OpenWorkbook, request: Request) -> tuple[list[SheetPlan], list[str]]:
    """Plan every sheet that is meant; return the plans that fill something, and notes."""
    plans: list[SheetPlan] = []
    notes: list[str] = []
    headings: list[str] = []
    sources = 0
    for sheet in workbook.sheets(request.sheet):
        reading = workbook.reading(sheet, request.header_row)
        if request.source is None and not reading.headings:
            continue
        plan = plan_sheet(reading, request, workbook.styles)
        notes += reading.lacking_units()
        headings += [heading.text for heading in reading.headings.values()]
        sources += plan.source is not None
        if plan.columns or plan.left or plan.notes:
            plans.append(plan)
            workbook.hold(sheet.part, reading.scan.xml)
    _check_request(workbook.label, request, headings, sources)
    several = [plan.reading.sheet.name for plan in plans if plan.columns or plan.left]
    if request.add and request.sheet is None and len(several) > 1:
        listed = ", ".join(map(repr, several))
        raise UsageError(f"--add fits several sheets ({listed}); name one with --sheet")
    _check_protection(workbook, [plan for plan in plans if plan.changed], request.allow_protected)
    return plans, notes


def _check_request(label: str, request: Request, headings: list[str], sources: int) -> None:
    """Raise where the request names what no sheet has; `sources` is on how many there is one."""
    for text in request.only:
        if not any(same_heading(text, heading) for heading in headings):
            raise UsageError(
                f"--only {text!r} is no heading of {label} that can be filled; name one as it"
                " stands, such as 'Age [Gyr]'"
            )
    if request.source is not None and not sources:
        raise UsageError(
            f"no sheet of {label} has a column {request.source!r} with something to convert; name a"
            " heading as it stands, or letters such as C:C"
        )
    if request.add and not sources:
        raise UsageError(
            f"{label} has no recognised column with numbers to convert from; name one with"
            " --source, such as --source C:C --as redshift"
        )


def _check_protection(workbook: OpenWorkbook, plans: list[SheetPlan], allowed: bool) -> None:
    for plan in plans:
        if not allowed and workbook.is_protected(plan.reading):
            raise Refusal(
                f"sheet {plan.reading.sheet.name!r} is protected; ask its owner, or fill it all the"
                " same with --allow-protected"
            )


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
