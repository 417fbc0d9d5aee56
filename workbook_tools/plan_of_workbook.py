"""What a fill will do to a workbook: the sheets that are meant, each with its plan."""

from __future__ import annotations

from workbook_tools.column_meanings import Heading
from workbook_tools.errors import Refusal, UsageError
from workbook_tools.open_workbook import OpenWorkbook
from workbook_tools.plan import plan_sheet
from workbook_tools.request import Request
from workbook_tools.sheet_plan import SheetPlan
from workbook_tools.source_choice import is_called


def plan_workbook(workbook: OpenWorkbook, request: Request) -> tuple[list[SheetPlan], list[str]]:
    """Plan every sheet that is meant; return the plans that fill something, and notes.

    Raises:
        UsageError, Refusal, ArgumentError: as `plan_sheet`; also where the request fits no sheet
            or several, or a sheet is protected.
    """
    plans: list[SheetPlan] = []
    notes: list[str] = []
    headings: list[Heading] = []
    sources = 0
    for sheet in workbook.sheets(request.sheet):
        reading = workbook.reading(sheet, request)
        if request.source is None and not reading.headings:
            continue
        plan = plan_sheet(reading, request, workbook.styles)
        notes += reading.doubts(plan.source)
        headings += reading.headings.values()
        sources += plan.source is not None
        if plan.columns or plan.left or plan.passed_over or plan.notes:
            plans.append(plan)
            workbook.hold(sheet.part, reading.scan.xml)
    _check_request(workbook.label, request, headings, sources)
    several = [plan.reading.sheet.name for plan in plans if plan.columns or plan.left]
    if request.add and request.sheet is None and len(several) > 1:
        listed = ", ".join(map(repr, several))
        raise UsageError(f"--add fits several sheets ({listed}); name one with --sheet")
    check_protection(workbook, [plan for plan in plans if plan.changed], request.allow_protected)
    return plans, notes


def _check_request(label: str, request: Request, headings: list[Heading], sources: int) -> None:
    """Raise where the request names what no sheet has; `sources` is on how many there is one."""
    for text in request.only:
        if not any(is_called(heading, text) for heading in headings):
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


def check_protection(workbook: OpenWorkbook, plans: list[SheetPlan], allowed: bool) -> None:
    """Raise where a sheet that gets cells is protected.

    Raises:
        Refusal: it names the sheet.
    """
    for plan in plans:
        if not allowed and workbook.is_protected(plan.reading):
            raise Refusal(
                f"sheet {plan.reading.sheet.name!r} is protected; ask its owner, or fill it all the"
                " same with --allow-protected"
            )
