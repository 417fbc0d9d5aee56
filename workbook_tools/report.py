"""What a fill did, in words for people and as JSON; pure."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from epochconv.published import label_of, parameter_sets
from workbook_tools.cell_address import column_letters
from workbook_tools.dependents import Dependents
from workbook_tools.filling import FillResult
from workbook_tools.sheet_plan import FilledColumn, NamedCell, SheetPlan

_FIRST_CELLS = 3
_FIRST_REASONS = 12


def text_report(result: FillResult) -> str:
    """Return the short report: columns, reasons with their first cells, warnings, assumptions."""
    lines: list[str] = []
    for plan in result.plans:
        lines += sheet_lines(plan, result.dependents.get(plan.reading.sheet.name))
    if not result.filled:
        lines.append("nothing was waiting to be filled")
    lines += [f"note: {warning}" for warning in result.warnings]
    if result.plans:
        lines.append(f"under {label_of(result.history)}: {result.history.assumptions}")
    if result.kept is not None:
        lines.append(f"the workbook as it was is kept as {result.kept.name}")
    if result.written:
        lines.append(f"written: {result.path}")
    return "\n".join(lines)


def json_report(result: FillResult) -> dict[str, Any]:
    """Return everything about a fill as plain data, each left cell included."""
    return {
        "format": "epochbook fill report 1",
        "file": result.path.name,
        "kept": None if result.kept is None else result.kept.name,
        "parameters": {
            "name": label_of(result.history),
            "citation": _citation(result),
            "assumptions": result.history.assumptions,
        },
        "filled": result.filled,
        "sheets": [
            sheet_data(plan, result.dependents.get(plan.reading.sheet.name))
            for plan in result.plans
        ],
        "left_by_reason": result.counts,
        "warnings": result.warnings,
    }


def sheet_data(plan: SheetPlan, dependents: Dependents | None) -> dict[str, Any]:
    """Return what is done to a sheet as plain data."""
    return {
        "sheet": plan.reading.sheet.name,
        "header_row": plan.reading.header_row,
        "columns": [_column_data(column) for column in plan.columns],
        "left": _listed(plan.left),
        "remarks": plan.remarks,
        "passed_over": _listed(plan.passed_over),
        "notes": plan.notes,
        "readers": _reader_data(dependents),
    }


def sheet_lines(plan: SheetPlan, dependents: Dependents | None) -> list[str]:
    """Return what is done to a sheet as lines for people, its name in the first."""
    lines = [f"sheet {plan.reading.sheet.name!r}"]
    for column in plan.columns:
        if not column.count:
            continue
        place = f"{column_letters(column.column)} {column.text!r}"
        origin = f"{column_letters(column.source_column)} {column.source.text!r}"
        new = "new column " if column.added else ""
        cells_filled = "1 cell" if column.count == 1 else f"{column.count} cells"
        count = column.limits
        limits = f", {count} of them {'a limit' if count == 1 else 'limits'}" if count else ""
        lines.append(f"  {new}{place}: {cells_filled} filled from {origin}{limits}")
    by_count = sorted(_by_reason(plan.left).items(), key=lambda item: -len(item[1]))
    for reason, where in by_count[:_FIRST_REASONS]:
        lines.append(f"  left {len(where)}: {reason} ({_first(where)})")
    further = by_count[_FIRST_REASONS:]
    if further:
        count = sum(len(where) for _, where in further)
        lines.append(
            f"  left {count}: for {len(further)} further reasons; --report FILE.json lists all"
        )
    for reason, where in _by_reason(plan.passed_over).items():
        lines.append(f"  passed over {len(where)}: {reason} ({_first(where)})")
    for remark, where in plan.remarks.items():
        lines.append(f"  read {len(where)}: {remark} ({_first(where)})")
    lines += [f"  note: {note}" for note in plan.notes]
    if dependents:
        lines.append(f"  these read filled cells and may show old results: {_readers(dependents)}")
        if dependents.cells:
            lines.append(
                "  Excel recalculates them when it opens the file; in LibreOffice press"
                " Ctrl+Shift+F9"
            )
    return lines


def _by_reason(cells: Iterable[NamedCell]) -> dict[str, list[str]]:
    grouped: dict[str, list[str]] = {}
    for cell, reason, text in cells:
        grouped.setdefault(reason, []).append(f"{cell} '{text}'" if text else cell)
    return grouped


def _listed(cells: Iterable[NamedCell]) -> list[dict[str, str | None]]:
    return [{"cell": cell, "reason": reason, "text": text or None} for cell, reason, text in cells]


def _readers(dependents: Dependents) -> str:
    parts = [
        f"formulas on sheet {sheet!r} ({_first(areas)})"
        for sheet, areas in dependents.cells.items()
    ]
    if dependents.names:
        parts.append(f"names ({_first(dependents.names)})")
    parts += [
        f"{count} chart{'s' if count > 1 else ''} on sheet {sheet!r}"
        for sheet, count in dependents.charts.items()
    ]
    return "; ".join(parts)


def _first(cells: Iterable[str]) -> str:
    listed = list(cells)
    more = f" and {len(listed) - _FIRST_CELLS} more" if len(listed) > _FIRST_CELLS else ""
    return ", ".join(listed[:_FIRST_CELLS]) + more


def _column_data(column: FilledColumn) -> dict[str, Any]:
    return {
        "column": column_letters(column.column),
        "heading": column.text,
        "holds": column.holds,
        "measure": column.heading.measure.name,
        "unit": column.heading.unit.symbol,
        "source_column": column_letters(column.source_column),
        "source_measure": column.source.measure.name,
        "source_unit": column.source.unit.symbol,
        "filled": column.count,
        "limits": column.limits,
        "added": column.added,
    }


def _reader_data(dependents: Dependents | None) -> dict[str, Any]:
    if dependents is None:
        return {"cells": {}, "names": [], "charts": {}}
    return {
        "cells": {sheet: list(areas) for sheet, areas in dependents.cells.items()},
        "names": list(dependents.names),
        "charts": dependents.charts,
    }


def _citation(result: FillResult) -> str | None:
    return next((s.citation for s in parameter_sets() if s.history == result.history), None)
